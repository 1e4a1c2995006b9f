package converter

import (
	"context"
	"math"
	"math/cmplx"
	"testing"

	"quietbus/study/phasor"
)

// clone copies voltages so that a test may change them.
func clone(v [3]phasor.Spectrum, order int) [3]phasor.Spectrum {
	var out [3]phasor.Spectrum
	for q := range v {
		out[q] = phasor.New(order)
		copy(out[q], v[q])
	}
	return out
}

// cases are converters of our own invention, one of each circuit.
func cases() map[string]struct {
	n Nameplate
	t Terminal
} {
	w := 2 * math.Pi * 50
	base := 400.0 * 400 / 100e3
	l := func(percent float64) float64 { return percent / 100 * base / w }
	term := Balanced(400, 50, 0.003*base, l(1.5))
	type c = struct {
		n Nameplate
		t Terminal
	}
	unbalanced := term
	unbalanced.Voltage = clone(term.Voltage, 50)
	unbalanced.Voltage[1][1] *= complex(0.97, 0.02)
	unbalanced.Voltage[2][5] = 4
	unbalanced.Voltage[0][3] = complex(1, 2)
	odd := distorted(term, 0.15, 0.03)
	return map[string]c{
		"diode, capacitor": {Nameplate{Kind: KindDiodeBridge, VoltageV: 400, PowerW: 100e3, ReactorH: l(3), CapacitorF: 7.5e-3}, odd},
		"diode, unbalance": {Nameplate{Kind: KindDiodeBridge, VoltageV: 400, PowerW: 100e3, ReactorH: l(3), CapacitorF: 7.5e-3, DropV: 1}, unbalanced},
		"diode, choke":     {Nameplate{Kind: KindDiodeBridge, VoltageV: 400, PowerW: 100e3, ChokeH: l(5), CapacitorF: 15e-3, Load: TightPower}, odd},
		"diode, motor":     {Nameplate{Kind: KindDiodeBridge, VoltageV: 400, PowerW: 100e3, ReactorH: l(3), CapacitorF: 3e-3, Load: Motor, ArmatureH: 1e-3, ArmatureOhm: 0.1}, odd},
		"thyristor":        {Nameplate{Kind: KindThyristorBridge, VoltageV: 400, PowerW: 80e3, FiringDeg: 25, ReactorH: l(2), Smoothing: ByChoke, ChokeH: 2e-3, Load: FixedCurrent, DirectA: 150}, odd},
		"thyristor motor":  {Nameplate{Kind: KindThyristorBridge, VoltageV: 400, PowerW: 60e3, FiringDeg: 30, ReactorH: l(2), Smoothing: ByChoke, ChokeH: 1e-3, Load: Motor, ArmatureH: 1e-3, ArmatureOhm: 0.05}, unbalanced},
		"single-phase":     {Nameplate{Kind: KindSinglePhaseBridge, VoltageV: 400, PowerW: 2e3, ReactorH: 1e-3, CapacitorF: 1.5e-3}, odd},
		"four-wire":        {Nameplate{Kind: KindSinglePhaseBridge, Connection: ABCN, VoltageV: 400, PowerW: 6e3, ReactorH: 1e-3, ChokeH: 1e-3, CapacitorF: 1.5e-3}, unbalanced},
		"half-wave":        {Nameplate{Kind: KindHalfWave, VoltageV: 400, PowerW: 1e3, Smoothing: ByChoke, Load: Resistive, ReactorH: 5e-3}, odd},
		"half-wave, cap":   {Nameplate{Kind: KindHalfWave, VoltageV: 400, PowerW: 200, ReactorH: 5e-3, CapacitorF: 5e-4}, odd},
		"twelve-pulse":     {Nameplate{Kind: KindTwelvePulse, VoltageV: 400, PowerW: 100e3, CapacitorF: 7.5e-3, Sections: []Section{{LeakageH: l(5), Ratio: 1}, {ShiftDeg: 29, LeakageH: l(5.5), Ratio: 0.99}}}, odd},
		"eighteen-pulse":   {Nameplate{Kind: KindEighteenPulse, VoltageV: 400, PowerW: 100e3, CapacitorF: 7.5e-3, SeparateLink: true, Sections: []Section{{ShiftDeg: -20, LeakageH: l(5), Share: 0.4}, {LeakageH: l(5), Share: 0.3}, {ShiftDeg: 20, LeakageH: l(5), Share: 0.3}}}, odd},
		"reactor":          {Nameplate{Kind: KindControlledReactor, VoltageV: 400, PowerW: 50e3, FiringDeg: 115}, odd},
		"resistor":         {Nameplate{Kind: KindControlledResistor, Connection: ABCN, VoltageV: 400, PowerW: 30e3, FiringDeg: 70}, unbalanced},
		"resistor star":    {Nameplate{Kind: KindControlledResistor, Connection: ABCStar, VoltageV: 400, PowerW: 30e3, FiringDeg: 75}, odd},
	}
}

// Second road: the linearisation against solutions at changed voltages.
func TestNortonAgainstPerturbation(t *testing.T) {
	ctx := context.Background()
	const order = 25
	for name, c := range cases() {
		t.Run(name, func(t *testing.T) {
			base, err := Solve(ctx, c.n, c.t, Options{Order: order})
			if err != nil {
				t.Fatal(err)
			}
			norton, err := base.Norton(ctx, order)
			if err != nil {
				t.Fatal(err)
			}
			first := cmplx.Abs(base.Current[0][1])
			for _, h := range []int{1, 2, 3, 5, 7, 12, 19} {
				for q := 0; q < 3; q++ {
					for _, turn := range []complex128{1, 1i} {
						step := 2e-3 * turn // V
						v, back := c.t, c.t
						v.Voltage, back.Voltage = clone(c.t.Voltage, 50), clone(c.t.Voltage, 50)
						v.Voltage[q][h] += step
						back.Voltage[q][h] -= step
						up, err := Solve(ctx, c.n, v, Options{Order: order})
						if err != nil {
							t.Fatal(err)
						}
						down, err := Solve(ctx, c.n, back, Options{Order: order})
						if err != nil {
							t.Fatal(err)
						}
						var worst, size float64
						for k := 1; k <= order; k++ {
							direct, mirror := norton.Blocks(k, h)
							for p := 0; p < 3; p++ {
								want := (up.Current[p][k] - down.Current[p][k]) / 2
								got := direct[p][q]*step + mirror[p][q]*cmplx.Conj(step)
								worst = math.Max(worst, cmplx.Abs(got-want))
								size = math.Max(size, cmplx.Abs(want))
							}
						}
						if worst > 2e-3*size+1e-8*first {
							t.Errorf("order %d phase %d turn %v: off by %.3g of %.3g A", h, q, turn, worst, size)
						}
					}
				}
			}
		})
	}
}
