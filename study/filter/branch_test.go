package filter

import (
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

// near fails unless got is within tol of want, relative to it unless it is 0.
func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	scale := math.Abs(want)
	if want == 0 {
		scale = 1
	}
	if !(math.Abs(got-want) <= tol*scale) {
		t.Errorf("%s = %.9g, want %.9g", what, got, want)
	}
}

func must(t testing.TB, b *Branch, err error) *Branch {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// impedances checks a table of R + jX by order.
func impedances(t *testing.T, b *Branch, want map[float64]complex128) {
	t.Helper()
	for h, z := range want {
		if got := b.Impedance(h); cmplx.Abs(got-z) > 2e-9*math.Max(1, cmplx.Abs(z))*10 {
			t.Errorf("%s at order %g: %.9g, want %.9g", b.Kind, h, got, z)
		}
	}
}

// value returns the value of a named part.
func value(t testing.TB, b *Branch, name string) float64 {
	t.Helper()
	for _, p := range b.Parts() {
		if p.Name == name {
			return p.Value
		}
	}
	t.Fatalf("%s has no %s", b.Kind, name)
	return 0
}

// Single-tuned filter, 10 Mvar 33 kV 50 Hz, order 4.8, Q 50 at the tuned order
// (constructed, derived).
func TestSingleTuned(t *testing.T) {
	f, err := SingleTuned(10e6, 33e3, 50, 4.8, 50)
	b := must(t, f, err)
	near(t, "XC", b.Xc, 113.841016, 1e-8)
	near(t, "XL", b.Xl, 4.94101633, 1e-8)
	near(t, "R", b.Rl, 0.474337568, 1e-8)
	near(t, "C", 1e6*value(t, b, "capacitor"), 27.960914, 1e-7)
	near(t, "L", 1e3*value(t, b, "reactor"), 15.7277435, 1e-8)
	impedances(t, b, map[float64]complex128{
		1: 0.474337568 - 108.9i, 2: 0.474337568 - 47.0384755i, 3: 0.474337568 - 23.1239564i, 5: 0.474337568 + 1.9368784i,
		7: 0.474337568 + 18.324112i, 11: 0.474337568 + 44.0019964i, 13: 0.474337568 + 55.4762111i, 25: 0.474337568 + 118.971768i,
	})
	near(t, "tuned order", b.TunedOrder(), 4.8, 1e-12)
	near(t, "Q", b.Quality(), 50, 1e-12)
	near(t, "output", b.Output(33e3), 10e6, 1e-4)
	// Parallel resonance with a 500 MVA supply (constructed, derived).
	near(t, "parallel order", b.ParallelOrder(33e3*33e3/500e6), 3.99888935, 1e-8)
	bank, err := Bank(10e6, 33e3, 50, 0)
	near(t, "parallel order without reactor", must(t, bank, err).ParallelOrder(33e3*33e3/500e6), 7.07106781, 1e-8)
}

// Second-order high-pass, capacitor 108.9 ohm, order 10.7, Q 3 (constructed,
// derived).
func TestHighPass(t *testing.T) {
	output := 33e3 * 33e3 / 108.9 * (10.7 * 10.7) / (10.7*10.7 - 1)
	f, err := HighPass(output, 33e3, 50, 10.7, 3)
	b := must(t, f, err)
	near(t, "XC", b.Xc, 108.9, 1e-9)
	near(t, "XL", b.Xl, 0.951174775, 1e-8)
	near(t, "R", b.Rp, 30.5327103, 1e-8)
	near(t, "Q", b.Quality(), 3, 1e-12)
	impedances(t, b, map[float64]complex128{
		1: 0.0296028837 - 107.949747i, 2: 0.118068117 - 52.5550067i, 3: 0.26437536 - 33.4711837i, 5: 0.72324287 - 17.1367808i,
		7: 1.38603756 - 9.20117061i, 11: 3.20863806 - 0.536610764i, 13: 4.30213858 + 2.24604988i, 25: 11.5276239 + 10.4454691i,
	})
	near(t, "loss at 33 kV", 33e3*33e3*real(b.Admittance(1)), 2.76642312e3, 1e-8)
}

// C-type filter, 10 Mvar 33 kV, order 3, R 200 ohm (constructed, derived).
func TestCType(t *testing.T) {
	f, err := CType(10e6, 33e3, 50, 3, 200/(108.9/3))
	b := must(t, f, err)
	near(t, "XC", b.Xc, 108.9, 1e-12)
	near(t, "XL", b.Xl, 13.6125, 1e-12)
	near(t, "XC2", b.Xc2, 13.6125, 1e-12)
	near(t, "R", b.Rp, 200, 1e-12)
	near(t, "tuned order", b.TunedOrder(), 3, 1e-12)
	near(t, "Q", b.Quality(), 200/(108.9/3), 1e-12)
	impedances(t, b, map[float64]complex128{
		1: -108.9i, 2: 2.06312256 - 34.2418819i, 3: 6.37833335 - 1.1576675i, 5: 19.2879223 + 37.2586358i,
		7: 35.7724174 + 61.0902161i, 11: 71.0763913 + 85.8257795i, 13: 87.2385349 + 90.8054595i, 25: 148.533956 + 83.0765749i,
	})
	near(t, "output", b.Output(33e3), 10e6, 1e-12)
}

// Third-order high-pass with C2 = C1 (constructed, derived).
func TestThirdOrder(t *testing.T) {
	table := map[float64]complex128{
		1: 0.0115110386 - 107.177871i, 2: 0.111972258 - 50.9516111i, 3: 0.341880523 - 31.0175613i, 5: 1.15010561 - 13.0177805i,
		7: 2.3558072 - 3.50304274i, 11: 5.71545854 + 7.97728301i, 13: 7.74859264 + 11.968524i, 25: 21.4660862 + 24.5223807i,
	}
	parts := &Branch{Kind: KindThirdOrder, F1: 50, Xc: 108.9, Xl: 1.7015625, Rp: 60, Xc3: 108.9}
	impedances(t, parts, table)
	// The same from its rating: order 8, Q = R/(n XL).
	f, err := ThirdOrder(parts.Output(33e3), 33e3, 50, 8, 60/(8*1.7015625))
	b := must(t, f, err)
	impedances(t, b, table)
	near(t, "C2 over C1", value(t, b, "damping capacitor")/value(t, b, "capacitor"), 1, 1e-12)
	near(t, "output", b.Output(33e3), parts.Output(33e3), 1e-12)
}

// First order: at its corner order the resistance equals the reactance, and
// the output is exact with the resistor in.
func TestFirstOrder(t *testing.T) {
	f, err := FirstOrder(1e6, 11e3, 50, 7)
	b := must(t, f, err)
	near(t, "angle at the corner", cmplx.Phase(b.Impedance(7))*180/math.Pi, -45, 1e-12)
	near(t, "output", b.Output(11e3), 1e6, 1e-12)
	near(t, "R", value(t, b, "damping resistor"), b.Xc/7, 1e-12)
	if b.TunedOrder() != 0 || b.Quality() != 0 {
		t.Errorf("tuned to %g with Q %g, want neither", b.TunedOrder(), b.Quality())
	}
}

// Double-tuned filter that equals two single-tuned branches, 5th and 7th at 50
// Hz (constructed, derived).
func TestDoubleTuned(t *testing.T) {
	b := combine(8e-6, 50.6605918e-3, 6e-6, 34.4629876e-3, 50)
	near(t, "C1", 1e6*value(t, b, "capacitor"), 14, 1e-9)
	near(t, "L1", 1e3*value(t, b, "reactor"), 20.5103611, 1e-8)
	near(t, "C2", 1e6*value(t, b, "tank capacitor"), 123.57147, 1e-6)
	near(t, "L2", 1e3*value(t, b, "tank reactor"), 2.36180951, 1e-6)
	for h, x := range map[float64]float64{1: -220.156694, 3: -53.4525418, 6: -119.659079, 11: 46.9252903, 25: 150.902465} {
		near(t, "X", imag(b.Impedance(h)), x, 1e-6)
	}
	for k, want := range []float64{5, 7} {
		near(t, "tuned order", b.TunedOrders()[k], want, 1e-7)
	}

	f, err := DoubleTuned(2e6, 11e3, 60, 4.8, 6.7, 60)
	d := must(t, f, err)
	s1, err := SingleTuned(1e6, 11e3, 60, 4.8, 1e9)
	s2, err2 := SingleTuned(1e6, 11e3, 60, 6.7, 1e9)
	one, two := must(t, s1, err), must(t, s2, err2)
	d0 := *d
	d0.Rl, d0.RlT = 0, 0
	for h := 1.0; h <= 25; h += 0.37 { // lossless, it is the two branches in parallel
		want := one.Admittance(h) + two.Admittance(h)
		if got := d0.Admittance(h); cmplx.Abs(got-want) > 1e-7*cmplx.Abs(want) {
			t.Errorf("order %g: %v, two branches %v", h, got, want)
		}
	}
	near(t, "first order", d.TunedOrders()[0], 4.8, 1e-9)
	near(t, "second order", d.TunedOrders()[1], 6.7, 1e-9)
	near(t, "Q", d.Quality(), 60, 1e-9)
	near(t, "output", d.Output(11e3), 2e6, 1e-3)
}

// Detuning: order 1/sqrt(p), capacitor voltage 1/(1-p) (derived).
func TestDetuningTable(t *testing.T) {
	for _, c := range [][5]float64{ // per cent, order, Hz at 50, Hz at 60, U of the capacitor over U
		{5, 4.4721, 223.61, 268.33, 1.0526}, {5.67, 4.1996, 209.98, 251.98, 1.0601}, {6, 4.0825, 204.12, 244.95, 1.0638},
		{7, 3.7796, 188.98, 226.78, 1.0753}, {8, 3.5355, 176.78, 212.13, 1.087}, {8.7, 3.3903, 169.52, 203.42, 1.0953},
		{12.5, 2.8284, 141.42, 169.71, 1.1429}, {13.5, 2.7217, 136.08, 163.3, 1.1561}, {14, 2.6726, 133.63, 160.36, 1.1628},
	} {
		f, err := Detuned(50e3, 400, 50, c[0]/100, 1e9, 0)
		b := must(t, f, err)
		near(t, "order", b.TunedOrder(), c[1], 2e-5)
		near(t, "Hz at 50", 50*b.TunedOrder(), c[2], 5e-5)
		near(t, "Hz at 60", 60*b.TunedOrder(), c[3], 5e-5)
		near(t, "capacitor voltage", cmplx.Abs(b.CapacitorVoltage(1, b.Admittance(1))), c[4], 5e-5)
		near(t, "output", b.Output(400), 50e3, 1e-9)
	}
}

// A detuned step: capacitors of 50 kvar at 440 V behind 7 % on 400 V, 50 Hz
// (constructed, derived).
func TestDetunedStep(t *testing.T) {
	f, err := Detuned(44.4326e3, 400, 50, 0.07, 1e9, 0)
	b := must(t, f, err)
	near(t, "XC", b.Xc, 3.872, 1e-6)
	near(t, "XL", b.Xl, 0.27104, 1e-6)
	near(t, "Hz", 50*b.TunedOrder(), 188.9822, 1e-6)
	near(t, "nameplate at 440 V", b.RatedVar(440), 50e3, 1e-6)
	near(t, "C star", 1e6*value(t, b, "capacitor"), 822.0813, 1e-6)
	near(t, "L", 1e3*value(t, b, "reactor"), 0.8627471, 1e-6)
	i := complex(400/math.Sqrt(3), 0) * b.Admittance(1)
	near(t, "I1", cmplx.Abs(i), 64.13293, 1e-6)
	near(t, "capacitor voltage line to line", math.Sqrt(3)*cmplx.Abs(b.CapacitorVoltage(1, i)), 430.1075, 1e-6)
}

func TestGeometricMeanTuning(t *testing.T) {
	// Between 3rd and 5th: order 3.873, XL/XC 0.067 (found).
	f, err := Detuned(1e5, 400, 50, 0.06666667, 1e9, 0)
	near(t, "order", must(t, f, err).TunedOrder(), 3.872983, 1e-6)
}

// A bank's loss in W per var comes out as its loss over its output.
func TestBankLoss(t *testing.T) {
	f, err := Bank(100e3, 400, 50, 0.0005)
	b := must(t, f, err)
	d := b.Bear(balanced(complex(400/math.Sqrt(3), 0)*b.Admittance(1)), false)
	near(t, "loss", d.Loss, 50, 1e-6)
	near(t, "output", b.Output(400), 100e3, 1e-6)
}

func TestRatingsThatCannotBeBuilt(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	for name, f := range map[string]func() (*Branch, error){
		"output":              func() (*Branch, error) { return Bank(0, 400, 50, 0) },
		"voltage":             func() (*Branch, error) { return SingleTuned(1e3, -400, 50, 5, 30) },
		"frequency":           func() (*Branch, error) { return HighPass(1e3, 400, nan, 5, 3) },
		"tuned order":         func() (*Branch, error) { return SingleTuned(1e3, 400, 50, 1, 30) },
		"quality factor":      func() (*Branch, error) { return CType(1e3, 400, 50, 3, 0) },
		"detuning":            func() (*Branch, error) { return Detuned(1e3, 400, 50, 1, 50, 0) },
		"reactor X/R":         func() (*Branch, error) { return Detuned(1e3, 400, 50, 0.07, inf, 0) },
		"capacitor loss":      func() (*Branch, error) { return Bank(1e3, 400, 50, nan) },
		"corner order":        func() (*Branch, error) { return FirstOrder(1e3, 400, 50, 0.5) },
		"second tuned order":  func() (*Branch, error) { return DoubleTuned(1e3, 400, 50, 7, 5, 30) },
		"series resistance":   func() (*Branch, error) { _, err := LowPassRC(0, 1e-6, 50); return nil, err },
		"series inductance":   func() (*Branch, error) { _, err := LowPassLC(nan, 1e-6, 50); return nil, err },
		"shunt capacitance":   func() (*Branch, error) { _, err := LowPassRC(30, 0, 50); return nil, err },
		"frequency (outlet)":  func() (*Branch, error) { _, err := LowPassRC(30, 1e-4, 0); return nil, err },
		"tuned order (third)": func() (*Branch, error) { return ThirdOrder(1e3, 400, 50, inf, 3) },
	} {
		b, err := f()
		var typed *Error
		field := name
		for i := range name {
			if name[i] == '(' {
				field = name[:i-1]
			}
		}
		if b != nil || !errors.As(err, &typed) || typed.Field != field || typed.Problem == "" {
			t.Errorf("%s: branch %v, error %v", name, b, err)
		}
	}
}

// anyBranch draws a branch of any kind.
func anyBranch(t *rapid.T) *Branch {
	output := rapid.Float64Range(1e3, 1e7).Draw(t, "output")
	v := rapid.Float64Range(200, 33e3).Draw(t, "v")
	n := rapid.Float64Range(1.5, 30).Draw(t, "n")
	q := rapid.Float64Range(0.3, 200).Draw(t, "q")
	kinds := []func() (*Branch, error){
		func() (*Branch, error) { return Bank(output, v, 50, 1e-4) },
		func() (*Branch, error) { return Detuned(output, v, 50, 1/(n*n), q, 1e-4) },
		func() (*Branch, error) { return SingleTuned(output, v, 50, n, q) },
		func() (*Branch, error) { return HighPass(output, v, 50, n, q) },
		func() (*Branch, error) { return FirstOrder(output, v, 50, n) },
		func() (*Branch, error) { return ThirdOrder(output, v, 50, n, q) },
		func() (*Branch, error) { return CType(output, v, 50, n, q) },
		func() (*Branch, error) { return DoubleTuned(output, v, 50, n, n*1.4, q) },
	}
	b, err := kinds[rapid.IntRange(0, len(kinds)-1).Draw(t, "kind")]()
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// Any branch is passive at every order, and its parts' losses and voltages add
// up to the whole: the two roads through a branch agree.
func TestPartsMakeTheWhole(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		b := anyBranch(t)
		h := rapid.IntRange(1, 50).Draw(t, "order")
		z := b.Impedance(float64(h))
		if real(z) < 0 || cmplx.IsNaN(z) {
			t.Fatalf("%s at order %d: %v", b.Kind, h, z)
		}
		current := make([]complex128, 51)
		current[h] = 2 - 1i
		loss, reactive := 0.0, 0.0
		for _, p := range b.PartDuties(current) {
			loss += p.Loss
			power := p.Voltage * p.Current
			switch p.Symbol {
			case "L":
				reactive += power
			case "C":
				reactive -= power
			}
		}
		if want := b.Loss(float64(h), 2-1i); math.Abs(loss-want) > 1e-9*(1+want) {
			t.Fatalf("%s at order %d: parts lose %g W, the branch %g", b.Kind, h, loss, want)
		}
		if want := 5 * imag(z); math.Abs(reactive-want) > 1e-9*(1+5*cmplx.Abs(z)+math.Abs(reactive)) {
			t.Fatalf("%s at order %d: parts take %g var, the branch %g", b.Kind, h, reactive, want)
		}
	})
}

// Drift: order n by sqrt of the changed product; the first-order rule of
// thumb agrees for small drifts.
func TestDrift(t *testing.T) {
	f, err := SingleTuned(500e3, 400, 50, 4.8, 40)
	b := must(t, f, err)
	d := Drift{Capacitance: 0.05, Inductance: 0.02, Frequency: -0.01, TemperatureK: 30, PerKelvin: -4e-4}
	x := b.Drifted(d)
	c := 1.05 * (1 - 4e-4*30)
	near(t, "tuned order", x.TunedOrder(), 4.8/(0.99*math.Sqrt(1.02*c)), 1e-12)
	near(t, "C", value(t, x, "capacitor")/value(t, b, "capacitor"), c, 1e-12)
	near(t, "L", value(t, x, "reactor")/value(t, b, "reactor"), 1.02, 1e-12)
	near(t, "equivalent", d.Equivalent(), -0.01+(0.02+c-1)/2, 1e-12)
	near(t, "by the rule of thumb", x.TunedOrder(), 4.8*(1-d.Equivalent()), 1e-3)
	if x.Rl != b.Rl || b.TunedOrder() == x.TunedOrder() {
		t.Error("a drift changes the resistance, or the branch it starts from")
	}
	// Every capacitor and every reactor drifts, in every kind.
	rapid.Check(t, func(t *rapid.T) {
		b := anyBranch(t)
		x := b.Drifted(Drift{Capacitance: -0.1, Inductance: 0.05})
		after := x.Parts()
		for k, p := range b.Parts() {
			want := map[string]float64{"C": 0.9, "L": 1.05, "R": 1}[p.Symbol] * p.Value
			if math.Abs(after[k].Value-want) > 1e-12*want {
				t.Fatalf("%s: %+v drifts to %+v", b.Kind, p, after[k])
			}
		}
	})
}

func BenchmarkAdmittance(b *testing.B) {
	f, err := CType(1e6, 11e3, 50, 3, 2)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		for h := 1.0; h <= 50; h++ {
			f.Admittance(h)
		}
	}
}
