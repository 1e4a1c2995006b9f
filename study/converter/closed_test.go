package converter

import (
	"context"
	"encoding/csv"
	"math"
	"math/cmplx"
	"os"
	"strconv"
	"strings"
	"testing"

	"quietbus/study/phasor"
)

func mustSolve(t *testing.T, n Nameplate, term Terminal, order int) *Result {
	t.Helper()
	r, err := Solve(context.Background(), n, term, Options{Order: order})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// smooth is a six-pulse bridge whose direct current has next to no ripple: the
// choke's reactance is a thousand times the load resistance.
func smooth(kind Kind, alpha, directA, commutatingH float64) (Nameplate, Terminal) {
	const v, f = 400.0, 50.0
	w := 2 * math.Pi * f
	n := Nameplate{
		Kind: kind, VoltageV: v, PowerW: directA * 540, FiringDeg: alpha, Smoothing: ByChoke,
		ChokeH: 1000 * 540 / directA / w, Load: FixedCurrent, DirectA: directA,
	}
	return n, Balanced(v, f, 0, commutatingH)
}

// Source: table of the six-pulse bridge with overlap and ripple-free direct
// current in testdata (closed form of Arrillaga and Watson, Power System
// Harmonics, 2nd ed.; mark: derived). Within 0.1 % of the fundamental.
func TestOverlapTable(t *testing.T) {
	file, err := os.Open("testdata/six-pulse-overlap.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	r := csv.NewReader(file)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil || len(rows) < 30 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	head := rows[0]
	const xc = 0.05 // ohm at order 1
	for _, row := range rows[1:] {
		num := func(i int) float64 {
			v, err := strconv.ParseFloat(row[i], 64)
			if err != nil {
				t.Fatal(err)
			}
			return v
		}
		alpha, u := num(0), num(1)
		rad := math.Pi / 180
		id := (math.Cos(alpha*rad) - math.Cos((alpha+u)*rad)) * 400 / (math.Sqrt2 * xc)
		kinds := []Kind{KindThyristorBridge}
		if alpha == 0 {
			kinds = append(kinds, KindDiodeBridge)
		}
		for _, kind := range kinds {
			n, term := smooth(kind, alpha, id, xc/(2*math.Pi*50))
			got := mustSolve(t, n, term, 50)
			i1 := cmplx.Abs(got.Current[0][1])
			if pu := i1 / (math.Sqrt(6) / math.Pi * id); math.Abs(pu-num(2)) > 1e-3 {
				t.Errorf("%s alpha %g u %g: fundamental %.6f pu, want %.6f", kind, alpha, u, pu, num(2))
			}
			if lag := -cmplx.Phase(got.Current[0][1]) / rad; math.Abs(lag-num(3)) > 0.05 {
				t.Errorf("%s alpha %g u %g: displacement %.4f deg, want %.4f", kind, alpha, u, lag, num(3))
			}
			if got := 360 * got.Overlap / 6; math.Abs(got-u) > 0.05 {
				t.Errorf("%s alpha %g u %g: overlap %.4f deg", kind, alpha, u, got)
			}
			for c := 4; c < len(head)-1; c++ {
				h, err := strconv.Atoi(strings.TrimSuffix(strings.TrimPrefix(head[c], "I"), "_pct"))
				if err != nil {
					t.Fatal(err)
				}
				if p := 100 * cmplx.Abs(got.Current[0][h]) / i1; math.Abs(p-num(c)) > 0.1 {
					t.Errorf("%s alpha %g u %g: order %d %.4f %%, want %.4f %%", kind, alpha, u, h, p, num(c))
				}
			}
			for h := 2; h <= 50; h++ {
				if (h%2 == 0 || h%3 == 0) && cmplx.Abs(got.Current[0][h]) > 1e-6*i1 {
					t.Errorf("%s alpha %g u %g: order %d should be absent", kind, alpha, u, h)
				}
			}
		}
	}
}

// Overlap above 60 degrees with ripple-free direct current. Source: E. W.
// Kimbark, Direct Current Transmission, vol. I, 1971, chapter 3 (from memory;
// the pieces join at 60 degrees, which marks them derived):
// fewer than 60 degrees: Vd = Vdo - (3/pi) X Id;
// diodes, u = 60 degrees with the start delayed by a': X Id = (pi/6) Vdo
// sin(a' + 30), Vd = (sqrt(3)/2) Vdo cos(a' + 30);
// three and four valves at a time: Vd = sqrt(3) Vdo cos(a - 30) - (9/pi) X Id,
// with a = 30 for diodes.
func TestOverlapAboveSixty(t *testing.T) {
	const xc, v = 0.05, 400.0
	vdo := 3 * math.Sqrt2 / math.Pi * v
	short := math.Pi * vdo / (6 * xc) // current at which the pieces are scaled
	check := func(name string, kind Kind, alpha, id, want float64, mode Conduction) {
		t.Helper()
		n, term := smooth(kind, alpha, id, xc/(2*math.Pi*50))
		got := mustSolve(t, n, term, 25)
		if math.Abs(got.DirectV-want) > 1e-3*vdo || math.Abs(got.DirectA/id-1) > 1e-6 || got.Conduction != mode {
			t.Errorf("%s: %.3f V at %.3f A, %s; want %.3f V, %s", name, got.DirectV, got.DirectA, got.Conduction, want, mode)
		}
	}
	check("diodes below 60", KindDiodeBridge, 0, 0.4*short, vdo-3/math.Pi*xc*0.4*short, Continuous)
	for _, delay := range []float64{5, 15, 25} {
		s, c := math.Sincos((delay + 30) * math.Pi / 180)
		check("diodes at 60", KindDiodeBridge, 0, s*short, math.Sqrt(3)/2*c*vdo, Overlapping)
	}
	for _, share := range []float64{0.9, 1, 1.1} {
		id := share * short
		check("diodes above 60", KindDiodeBridge, 0, id, math.Sqrt(3)*vdo-9/math.Pi*xc*id, Overlapping)
	}
	for _, alpha := range []float64{35, 50} {
		id := 1.02 * math.Sin((alpha+30)*math.Pi/180) * short
		check("thyristors above 60", KindThyristorBridge, alpha, id, math.Sqrt(3)*vdo*math.Cos((alpha-30)*math.Pi/180)-9/math.Pi*xc*id, Overlapping)
	}
}

// Half-wave rectifier with a resistance. Source: Fourier series of the
// half-wave rectified sine (mark: derived).
func TestHalfWaveResistor(t *testing.T) {
	n := Nameplate{Kind: KindHalfWave, VoltageV: 400, PowerW: 1e3, Smoothing: ByChoke, Load: Resistive, LoadOhm: 10}
	r := mustSolve(t, n, Balanced(400, 50, 0, 1e-9), 50)
	want := phasor.HalfWaveSine(400/sqrt3*math.Sqrt2/10, 50)
	i1 := cmplx.Abs(want[1])
	for h := 0; h <= 50; h++ {
		if cmplx.Abs(r.Current[0][h]-want[h]) > 1e-3*i1 {
			t.Errorf("order %d: %v, want %v", h, r.Current[0][h], want[h])
		}
		if r.Current[1][h] != 0 || r.Current[2][h] != 0 {
			t.Errorf("order %d flows in a phase without converter", h)
		}
	}
}

// Single-phase bridge with ripple-free direct current and no overlap: odd
// orders at 1/h, fundamental 0.9003 Id. Source: square wave (mark: derived).
func TestSinglePhaseInductive(t *testing.T) {
	id := 20.0
	n := Nameplate{Kind: KindSinglePhaseBridge, Connection: PhaseAB, VoltageV: 230, PowerW: 4e3, Smoothing: ByChoke, ChokeH: 30, Load: FixedCurrent, DirectA: id}
	r := mustSolve(t, n, Balanced(230, 50, 0, 1e-9), 50)
	i1 := 2 * math.Sqrt2 / math.Pi * id
	for h := 1; h <= 50; h++ {
		want := 0.0
		if h%2 == 1 {
			want = i1 / float64(h)
		}
		if math.Abs(cmplx.Abs(r.Current[0][h])-want) > 1e-3*i1 {
			t.Errorf("order %d: %.5f A, want %.5f", h, cmplx.Abs(r.Current[0][h]), want)
		}
		if cmplx.Abs(r.Current[0][h]+r.Current[1][h]) > 1e-9*i1 {
			t.Errorf("order %d: the two lines differ", h)
		}
	}
	// with overlap: cos a - cos(a+u) = 2 X Id / Vm at a = 0; while the source
	// is shorted the current passes from -Id to Id (mark: derived)
	x := 0.5
	r = mustSolve(t, n, Balanced(230, 50, 0, x/2/(2*math.Pi*50)), 50)
	vm := 230 * math.Sqrt2
	u := math.Acos(1 - 2*x*id/vm)
	want := []float64{math.Mod(u, 1), (2 * vm / math.Pi) * (1 + math.Cos(u)) / 2}
	if math.Abs(2*math.Pi*r.Overlap/2-u) > 1e-3 || math.Abs(r.DirectV-want[1]) > 1e-3*vm {
		t.Errorf("overlap %.5f rad at %.4f V, want %.5f and %.4f", math.Pi*r.Overlap, r.DirectV, u, want[1])
	}
}

// Thyristor-controlled reactor in delta. Source: current of an inductance from
// the firing angle a to 2 pi - a after the zero of its voltage, integrated
// directly (mark: derived):
// I1 = (V / X) (2 (pi - a) + sin 2a) / pi,
// Ih = (V / X) (4/pi) (h sin a cos ha - cos a sin ha) / (h (h^2 - 1)).
func TestControlledReactor(t *testing.T) {
	for _, deg := range []float64{90, 100, 120, 140, 165} {
		n := Nameplate{Kind: KindControlledReactor, VoltageV: 400, PowerW: 48e3, FiringDeg: deg}
		r := mustSolve(t, n, Balanced(400, 50, 0, 0), 50)
		x := 3 * 400.0 * 400 / 48e3
		a := deg * math.Pi / 180
		full := 400 / x * sqrt3 // line current at full conduction
		for h := 1; h <= 50; h++ {
			var want float64
			k := float64(h)
			switch {
			case h == 1:
				want = full * (2*(math.Pi-a) + math.Sin(2*a)) / math.Pi
			case h%2 == 1 && h%3 != 0: // triplen orders stay in the delta
				want = math.Abs(full * 4 / math.Pi * (k*math.Sin(a)*math.Cos(k*a) - math.Cos(a)*math.Sin(k*a)) / (k * (k*k - 1)))
			}
			if got := cmplx.Abs(r.Current[0][h]); math.Abs(got-want) > 1e-3*full {
				t.Errorf("%g deg, order %d: %.5f A, want %.5f", deg, h, got, want)
			}
		}
		if lag := -cmplx.Phase(r.Current[0][1]); math.Abs(lag-math.Pi/2) > 1e-3 {
			t.Errorf("%g deg: lag %.5f rad", deg, lag)
		}
	}
}

// Phase-controlled resistor to neutral. Source: Fourier integral of sin t from
// the firing angle to the zero, both half waves (mark: derived).
func TestControlledResistor(t *testing.T) {
	for _, deg := range []float64{0, 30, 75, 90, 135} {
		n := Nameplate{Kind: KindControlledResistor, Connection: PhaseB, VoltageV: 400, PowerW: 5e3, FiringDeg: deg}
		r := mustSolve(t, n, Balanced(400, 50, 0, 0), 50)
		ohm := 400.0 * 400 / 3 / 5e3
		peak := 400 / sqrt3 * math.Sqrt2 / ohm
		a := deg * math.Pi / 180
		for h := 1; h <= 50; h++ {
			var want complex128 // rms, against the zero of the voltage
			if h%2 == 1 {
				const steps = 20000 // Simpson over the half wave, doubled
				var sum complex128
				for i := 0; i <= steps; i++ {
					x := a + (math.Pi-a)*float64(i)/steps
					w := 2.0
					if i%2 == 1 {
						w = 4
					}
					if i == 0 || i == steps {
						w = 1
					}
					sum += complex(w*math.Sin(x), 0) * cmplx.Rect(1, -float64(h)*x)
				}
				want = sum * complex((math.Pi-a)/steps/3*2*peak*math.Sqrt2/(2*math.Pi), 0)
			}
			// phase b: its zero comes a quarter before its crest at +120 degrees
			got := r.Current[1][h] * cmplx.Rect(1, float64(h)*(2*math.Pi/3-math.Pi/2))
			if cmplx.Abs(got-want) > 1e-3*peak/math.Sqrt2 {
				t.Errorf("%g deg, order %d: %v, want %v", deg, h, got, want)
			}
		}
	}
}

// The direct voltage of a thyristor bridge with ripple-free current and no
// overlap is the line-to-line voltage from 60 degrees + alpha on; its mean is
// 1.35 V cos alpha (mark: derived).
func TestDirectVoltageWaveform(t *testing.T) {
	for _, alpha := range []float64{20, 50, 100} {
		n, term := smooth(KindThyristorBridge, alpha, 100, 1e-8)
		wave := mustSolve(t, n, term, 25).Waveform()
		var mean float64
		for i, v := range wave.DirectV {
			mean += v / float64(len(wave.DirectV))
			// angle after firing of the valve that fired last; phase a is at
			// its crest at sample 0, its natural commutation 60 degrees before
			deg := math.Mod(float64(i)*360/float64(len(wave.DirectV))+60-alpha+720, 60)
			if deg < 0.2 || deg > 59.8 {
				continue
			}
			want := 400 * math.Sqrt2 * math.Sin((60+alpha+deg)*math.Pi/180)
			if math.Abs(v-want) > 0.5 {
				t.Fatalf("alpha %g, %g degrees after firing: %.2f V, want %.2f", alpha, deg, v, want)
			}
		}
		if want := 400 * 3 * math.Sqrt2 / math.Pi * math.Cos(alpha*math.Pi/180); math.Abs(mean-want) > 3 {
			t.Errorf("alpha %g: mean %.2f V, want %.2f", alpha, mean, want)
		}
	}
}

// The most that a supply can deliver through a smooth bridge with overlap of
// 60 degrees: P = (sqrt(3)/4) Vdo (pi Vdo / 6X) at a delay of 15 degrees
// (Kimbark's pieces above; mark: derived).
func TestMostPower(t *testing.T) {
	const xc, v = 0.05, 400.0
	vdo := 3 * math.Sqrt2 / math.Pi * v
	most := math.Sqrt(3) / 4 * vdo * math.Pi * vdo / (6 * xc)
	n := Nameplate{Kind: KindDiodeBridge, VoltageV: v, PowerW: 1.02 * most, Smoothing: ByChoke, ChokeH: 10}
	term := Balanced(v, 50, 0, xc/(2*math.Pi*50))
	_, err := Solve(context.Background(), n, term, Options{})
	expect(t, "above the most", err, WeakSupply)
	if c, ok := err.(*ConditionError); ok && math.Abs(c.AvailableW/most-1) > 0.01 {
		t.Errorf("says %g W, want %g", c.AvailableW, most)
	}
	n.PowerW = 0.98 * most
	r := mustSolve(t, n, term, 25)
	if math.Abs(r.Balance.LoadW/n.PowerW-1) > 1e-4 {
		t.Errorf("load takes %g W of %g", r.Balance.LoadW, n.PowerW)
	}
}
