package converter

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"
)

// random returns a realistic converter on a realistic supply: powers 0.5 kW to
// 2 MW, 50 or 60 Hz, Ssc/S 15 to 300, reactors and chokes 0 to 6 %, 30 to 200
// uF/kW at 400 V (scaled by the square of the voltage), distortion up to 8 %
// and unbalance up to 3 %.
func random(r *rand.Rand) (Nameplate, Terminal) {
	pick := func(low, high float64) float64 { return low * math.Exp(r.Float64()*math.Log(high/low)) }
	f := []float64{50, 60}[r.IntN(2)]
	w := 2 * math.Pi * f
	v := []float64{400, 480, 690}[r.IntN(3)]
	kinds := Kinds()
	n := Nameplate{Kind: kinds[r.IntN(len(kinds)-1)], VoltageV: v, PowerW: pick(2e3, 2e6)}
	single := !n.Kind.threePhase()
	if single {
		n.PowerW = pick(200, 2e4)
		n.Connection = []Connection{PhaseA, PhaseB, PhaseC, PhaseAB, PhaseBC, PhaseCA, ABCN}[r.IntN(7)]
	}
	base := v * v / n.PowerW
	if single && n.withDefaults().volts() < v && n.Connection != ABCN {
		base /= 3
	}
	l := func(percent float64) float64 { return percent / 100 * base / w }
	x := base / pick(15, 300)
	t := Balanced(v, f, x*pick(0.05, 1), x/w)
	switch r.IntN(4) {
	case 0:
	case 1:
		t = distorted(t, 0.3*r.Float64(), r.Float64())
	default:
		t.Voltage = clone(distorted(t, 0.2*r.Float64(), r.Float64()).Voltage, 50)
		for q := range t.Voltage {
			t.Voltage[q][1] *= complex(1+0.04*(r.Float64()-0.5), 0.04*(r.Float64()-0.5))
			t.Voltage[q][3] += complex(0.02*(r.Float64()-0.5)*v, 0)
			t.Voltage[q][2] += complex(0, 0.004*(r.Float64()-0.5)*v)
		}
	}
	if r.IntN(2) == 0 {
		n.ReactorH, n.ReactorOhm = l(pick(0.5, 6)), 0.02*base/100
	}
	if r.IntN(2) == 0 {
		n.DropV = 0.9
	}
	n.Load = []LoadKind{ConstantPower, ConstantPower, ConstantPower, Resistive, FixedCurrent, Motor}[r.IntN(6)]
	n.ArmatureH, n.ArmatureOhm = l(20), 0.03*base
	perWatt := pick(30, 200) * 1e-9 * 400 * 400 / (v * v)
	if single {
		perWatt *= 6
	}
	n.CapacitorF = perWatt * n.PowerW
	switch n.Kind {
	case KindThyristorBridge, KindSinglePhaseFired:
		n.Smoothing, n.CapacitorF, n.ChokeH = ByChoke, 0, l(pick(5, 100))
		n.FiringDeg = 60 * r.Float64()
		if n.Load == ConstantPower || n.Load == Motor {
			n.PowerW *= 0.6 * math.Cos(n.FiringDeg*math.Pi/180)
		}
		if n.Load == FixedCurrent {
			n.DirectA, n.FiringDeg = n.PowerW/n.idealDirect()*pick(0.2, 1), 120*r.Float64()
		}
	case KindHalfWave:
		n.CapacitorF *= 3
		if r.IntN(3) == 0 {
			n.Smoothing, n.CapacitorF, n.Load, n.ChokeH = ByChoke, 0, Resistive, l(pick(1, 50))
		}
	case KindControlledReactor:
		n.FiringDeg = 90 + 75*r.Float64()
	case KindControlledResistor:
		n.FiringDeg = 150 * r.Float64()
		n.Connection = []Connection{ABC, ABCN, ABCStar, PhaseA, PhaseCA}[r.IntN(5)]
		if n.Connection == ABCStar {
			n.FiringDeg *= 0.85
		}
	case KindTwelvePulse, KindEighteenPulse, KindTwentyFourPulse:
		for _, shift := range n.Kind.Shifts() {
			n.Sections = append(n.Sections, Section{ShiftDeg: shift + r.Float64() - 0.5, Ratio: 1 + 0.01*(r.Float64()-0.5), LeakageH: l(pick(3, 7)), Share: pick(0.8, 1.2) / float64(n.Kind.sections())})
		}
		n.SeparateLink = r.IntN(2) == 0
	default:
		if r.IntN(2) == 0 {
			n.ChokeH, n.ChokeOhm = l(pick(0.5, 6)), 0.005*base
		}
	}
	return n, t
}

// A thousand random realistic converters: none fails, each passes its own
// energy balance, none draws even or triplen orders from a balanced supply,
// each gives the same again from its own state.
func TestThousandRandomConverters(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	ctx := context.Background()
	count := 1000
	if testing.Short() {
		count = 100
	}
	failed := 0
	for i := 0; i < count; i++ {
		n, term := random(r)
		got, err := Solve(ctx, n, term, Options{Order: 30})
		if err != nil {
			if failed++; failed < 30 {
				t.Errorf("%d: %v\n%+v\n%g+j%g", i, err, n, term.SourceR, term.SourceL*term.omega())
			}
			continue
		}
		if math.Abs(got.Balance.Error) > 1e-3 {
			t.Errorf("%d: balance %g", i, got.Balance.Error)
		}
		if n.Load == ConstantPower && n.Kind.threePhase() && n.Kind != KindControlledReactor && n.Kind != KindControlledResistor {
			if math.Abs(got.Balance.LoadW/n.PowerW-1) > 1e-4 {
				t.Errorf("%d: load takes %g W of %g", i, got.Balance.LoadW, n.PowerW)
			}
		}
		first := cmplx.Abs(got.Current[0][1])
		if n.Kind.threePhase() && term.Voltage[0].At(2) == 0 && cmplx.Abs(term.Voltage[0][1]+term.Voltage[1][1]+term.Voltage[2][1]) < 1e-9 && len(n.Connection) != 1 && len(n.Connection) != 2 && n.Connection != ABCN {
			for h := 2; h <= 30; h++ {
				if (h%2 == 0 || h%3 == 0) && cmplx.Abs(got.Current[0][h]) > 1e-5*first {
					t.Errorf("%d: order %d of a balanced %s", i, h, n.Kind)
				}
			}
		}
		if i%10 == 0 {
			again, err := Solve(ctx, n, term, Options{Order: 30, Warm: got.State})
			if err != nil {
				t.Errorf("%d again: %v", i, err)
				continue
			}
			for q := range again.Current {
				for h := range again.Current[q] {
					if cmplx.Abs(again.Current[q][h]-got.Current[q][h]) > 1e-5*cmplx.Abs(got.Current[q][1])+1e-9 {
						t.Errorf("%d again: order %d differs", i, h)
					}
				}
			}
		}
	}
	if failed > 0 {
		t.Errorf("%d of %d failed", failed, count)
	}
}

// wild returns a converter whose values are anything but realistic.
func wild(r *rand.Rand) (Nameplate, Terminal) {
	n, t := random(r)
	pick := func(low, high float64) float64 { return low * math.Exp(r.Float64()*math.Log(high/low)) }
	stir := func(v *float64) {
		switch r.IntN(8) {
		case 0:
			*v = 0
		case 1, 2, 3:
			*v *= pick(1e-3, 1e3)
		}
	}
	for _, v := range []*float64{&n.PowerW, &n.ReactorH, &n.ReactorOhm, &n.ChokeH, &n.CapacitorF, &n.DropV, &n.ArmatureH, &n.ArmatureOhm, &t.SourceL, &t.SourceR} {
		stir(v)
	}
	if r.IntN(3) == 0 {
		n.FiringDeg = 180 * r.Float64()
	}
	n.Load = []LoadKind{ConstantPower, TightPower, Resistive, FixedCurrent, Motor}[r.IntN(5)]
	n.Smoothing = []Smoothing{ByCapacitor, ByChoke, ""}[r.IntN(3)]
	return n, t
}

// Whatever the values: a checked result or a named condition, never a number
// that is none.
func TestWildConverters(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 5))
	solved := 0
	for i := 0; i < 200; i++ {
		n, term := wild(r)
		if n.Kind == KindTwentyFourPulse {
			continue // slow to search in vain
		}
		got, err := Solve(context.Background(), n, term, Options{Order: 25})
		var named *ConditionError
		if err != nil {
			if !errors.As(err, &named) || named.Condition == FailedItsCheck {
				t.Errorf("%d: %v\n%+v", i, err, n)
			}
			continue
		}
		solved++
		for q := range got.Current {
			for h, z := range got.Current[q] {
				if cmplx.IsNaN(z) || cmplx.IsInf(z) {
					t.Errorf("%d: order %d is %v", i, h, z)
				}
			}
		}
		if math.Abs(got.Balance.Error) > 1e-3 || got.Multiplier > 1.001 || got.LowestV < 0 {
			t.Errorf("%d: balance %g, multiplier %g, lowest %g V", i, got.Balance.Error, got.Multiplier, got.LowestV)
		}
	}
	if solved < 50 {
		t.Errorf("only %d solved", solved)
	}
}
