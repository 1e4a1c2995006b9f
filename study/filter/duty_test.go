package filter

import (
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"

	"quietbus/study/phasor"
)

// balanced returns a positive-sequence set at order 1.
func balanced(i complex128) [3]phasor.Spectrum {
	a := phasor.New(1)
	a[1] = i
	return phasor.Balanced(a)
}

// Single-tuned filter step by step: 480 V, 1200 kVA at 0.75 to 0.96, order
// 4.7, capacitors rated 600 V. Inputs after Dugan, McGranaghan, Santoso, Beaty,
// Electrical Power Systems Quality, 2nd ed. (memory, medium); every result is
// derived from them.
func TestFilterStepByStep(t *testing.T) {
	output := 1200e3 * (math.Sin(math.Acos(0.75)) - math.Sin(math.Acos(0.96)))
	near(t, "output", output, 457.7254e3, 1e-6)
	f, err := SingleTuned(output, 480, 60, 4.7, 1e9)
	b := must(t, f, err)
	near(t, "X eff", -imag(b.Impedance(1)), 0.5033586, 1e-6)
	near(t, "XC", b.Xc, 0.5272257, 1e-6)
	near(t, "XL", b.Xl, 0.02386717, 1e-6)
	near(t, "C", 1e6*value(t, b, "capacitor"), 5031.208, 1e-6)
	near(t, "L", 1e3*value(t, b, "reactor"), 0.06330963, 1e-6)
	near(t, "nameplate at 600 V", b.RatedVar(600), 682.8195e3, 1e-6)

	v := 480 / math.Sqrt(3)
	fromLoad := 0.25 * 1200e3 / (3 * v)
	transformer := complex(0, 5*0.06*480*480/1500e3)
	fromUtility := cmplx.Abs(complex(0.01*v, 0) / (transformer + b.Impedance(5)))
	near(t, "I5 of the load", fromLoad, 360.8439, 1e-6)
	near(t, "I5 of the utility", fromUtility, 46.21059, 1e-6)

	i := phasor.New(50)
	i[1] = complex(v, 0) * b.Admittance(1)
	// The capacitor's 5th in phase with its crest: the worst the angles can do.
	i[5] = cmplx.Rect(fromLoad+fromUtility, math.Pi/2)
	d := b.DutyOf(i)
	ll := math.Sqrt(3)
	near(t, "I1", d.Current1, 550.5581, 1e-6)
	near(t, "I rms", d.Current, 684.6952, 1e-6)
	near(t, "capacitor order 1", ll*d.Voltage1, 502.7596, 1e-6)
	near(t, "capacitor order 5", ll*cmplx.Abs(b.CapacitorVoltage(5, i[5])), 74.34295, 1e-6)
	near(t, "capacitor rms", ll*d.Voltage, 508.2264, 1e-6)
	near(t, "sum, of 600 V", 100*ll*d.Sum/600, 96.18376, 1e-6)
	near(t, "crest, of 600 V", 100*ll*d.Peak/math.Sqrt2/600, 96.18376, 1e-6)
	near(t, "rms, of 600 V", 100*ll*d.Voltage/600, 84.7044, 1e-6)
	near(t, "current, of rated", 100*d.Current/b.RatedCurrent(600), 104.2085, 1e-6)
	near(t, "kvar, of rated", 100*3*d.Var/b.RatedVar(600), 77.88933, 1e-6)
	// IEEE 18-2012 clause 5.3 (found): 110, 120, 135 and 135 % are all kept, so
	// 600 V is enough, and the sum asks for 577 V: 600 is the next preferred.
	near(t, "needed rating", NeededVoltage(d), 577.1026, 1e-6)
	if r := PreferredVoltage(NeededVoltage(d)); r != 600 {
		t.Errorf("next preferred voltage %g, want 600", r)
	}
	near(t, "PreferredVoltage above the list", PreferredVoltage(36001), 37000, 1e-12)
	near(t, "PreferredVoltage of itself", PreferredVoltage(480), 480, 1e-12)
}

// Capacitor worksheet: 1200 kvar at 13.8 kV with 5th 4 % and 7th 3 % voltage
// (textbook: Dugan and others, inputs memory, high; recomputed values derived).
func TestCapacitorWorksheet(t *testing.T) {
	f, err := Bank(1200e3, 13800, 60, 0)
	b := must(t, f, err)
	v := 13800 / math.Sqrt(3)
	i := phasor.New(7)
	for h, pct := range map[int]float64{1: 100, 5: 4, 7: 3} {
		// Angles that bring the crests of the voltage together.
		i[h] = complex(0, v*pct/100) * complex(cmplx.Abs(b.Admittance(float64(h))), 0)
	}
	d := b.DutyOf(i)
	near(t, "XC", b.Xc, 158.7, 1e-12)
	near(t, "I1", d.Current1, 50.2044, 1e-6)
	near(t, "I5", cmplx.Abs(i[5]), 10.0409, 1e-5)
	near(t, "I7", cmplx.Abs(i[7]), 10.5429, 1e-5)
	near(t, "V rms", 100*d.Voltage/v, 100.125, 1e-6)
	near(t, "I rms", 100*d.Current/d.Current1, 104.12, 2e-5)
	near(t, "crest", 100*d.Peak/(math.Sqrt2*v), 107, 1e-6)
	near(t, "kvar as the sum of h Vh^2", 100*d.Var/(1200e3/3), 101.43, 1e-6)
	near(t, "kvar as Vrms Irms", 100*d.Voltage*d.Current/(1200e3/3), 104.25, 2e-5)
}

// In a delta each capacitor stands between phases: with balanced currents its
// voltage is sqrt(3) times the star equivalent's, the var is the same, and no
// zero sequence reaches it.
func TestBearDelta(t *testing.T) {
	f, err := Detuned(100e3, 400, 50, 0.07, 50, 2e-4)
	b := must(t, f, err)
	a := phasor.New(50)
	a[1], a[5], a[7] = 100i, 12, 4-2i
	star, delta := b.Bear(phasor.Balanced(a), false), b.Bear(phasor.Balanced(a), true)
	near(t, "rms", delta.Voltage, math.Sqrt(3)*star.Voltage, 1e-12)
	near(t, "var", delta.Var, star.Var, 1e-12)
	near(t, "loss", delta.Loss, star.Loss, 1e-12)
	one := b.DutyOf(a)
	near(t, "three phases lose", star.Loss, 3*one.Loss, 1e-12)
	near(t, "and one peaks", star.Peak, one.Peak, 1e-9)
	if math.Abs(delta.Peak-math.Sqrt(3)*star.Peak) < 1 {
		t.Error("the crest of a phase-to-phase voltage is not sqrt(3) that of a phase")
	}
	zero := [3]phasor.Spectrum{phasor.New(3), phasor.New(3), phasor.New(3)}
	for p := range zero {
		zero[p][3] = 5
	}
	if d := b.Bear(zero, true); d.Voltage > 1e-12 {
		t.Errorf("a zero-sequence current puts %g V across a delta", d.Voltage)
	}
}

// Bear against three times DutyOf on unbalanced currents.
func TestBearIsTheWorstPhase(t *testing.T) {
	f, err := CType(1e6, 11e3, 50, 3, 2)
	b := must(t, f, err)
	rapid.Check(t, func(t *rapid.T) {
		var i [3]phasor.Spectrum
		var want Duty
		for p := range i {
			i[p] = phasor.New(13)
			for h := 1; h <= 13; h++ {
				i[p][h] = complex(rapid.Float64Range(-9, 9).Draw(t, "re")/float64(h), rapid.Float64Range(-9, 9).Draw(t, "im")/float64(h))
			}
			d := b.DutyOf(i[p])
			want.Current, want.Peak, want.Voltage = max(want.Current, d.Current), max(want.Peak, d.Peak), max(want.Voltage, d.Voltage)
			want.Loss, want.Var = want.Loss+d.Loss, want.Var+d.Var
		}
		got := b.Bear(i, false)
		for what, pair := range map[string][2]float64{"current": {got.Current, want.Current}, "peak": {got.Peak, want.Peak},
			"voltage": {got.Voltage, want.Voltage}, "loss": {got.Loss, want.Loss}, "var": {got.Var, want.Var}} {
			if math.Abs(pair[0]-pair[1]) > 1e-12*pair[1] {
				t.Fatalf("%s %.12g, want %.12g", what, pair[0], pair[1])
			}
		}
	})
}

// The resistor of a C-type filter carries no fundamental current.
func TestPartDuties(t *testing.T) {
	f, err := CType(10e6, 33e3, 50, 3, 5)
	b := must(t, f, err)
	i := phasor.New(13)
	i[1], i[3] = 175i, 20
	byName := map[string]PartDuty{}
	for _, p := range b.PartDuties(i) {
		byName[p.Name] = p
	}
	if p := byName["damping resistor"]; p.Current1 > 1e-9 || p.Current < 0.1 || p.Loss <= 0 {
		t.Errorf("damping resistor %+v", p)
	}
	near(t, "capacitor's crest", byName["capacitor"].Peak, b.DutyOf(i).Peak, 1e-9)
	if len(byName) != 4 {
		t.Errorf("%d parts, want capacitor, reactor, tuning capacitor, damping resistor", len(byName))
	}
}

func TestStandardStep(t *testing.T) {
	for v, want := range map[float64][2]float64{
		25e3: {25e3, 25e3}, 27e3: {25e3, 30e3}, 100e3: {100e3, 100e3}, 1: {1, 1}, 130e3: {125e3, 150e3}, 99e3: {75e3, 100e3}, 1000e3: {1e6, 1e6},
		0: {0, 0}, -5: {0, 0},
	} {
		below, above := StandardStep(v)
		if math.Abs(below-want[0]) > 1e-6 || math.Abs(above-want[1]) > 1e-6 {
			t.Errorf("%g var: %g and %g, want %v", v, below, above, want)
		}
	}
	if below, above := StandardStep(math.NaN()); below != 0 || above != 0 {
		t.Error("NaN has a standard step")
	}
}

func TestDutyDoesNotAllocate(t *testing.T) {
	f, err := SingleTuned(1e6, 11e3, 50, 4.8, 40)
	b := must(t, f, err)
	i := phasor.New(50)
	i[1], i[5] = 50, 10i
	set := phasor.Balanced(i)
	if n := testing.AllocsPerRun(50, func() { b.DutyOf(i) }); n != 0 {
		t.Errorf("DutyOf allocates %v times", n)
	}
	if n := testing.AllocsPerRun(50, func() { b.Bear(set, false) }); n != 0 {
		t.Errorf("Bear allocates %v times", n)
	}
}

func BenchmarkBear(b *testing.B) {
	f, err := SingleTuned(1e6, 11e3, 50, 4.8, 40)
	if err != nil {
		b.Fatal(err)
	}
	i := phasor.New(50)
	for h := 1; h <= 50; h++ {
		i[h] = cmplx.Rect(50/float64(h*h), float64(h))
	}
	set := phasor.Balanced(i)
	for b.Loop() {
		f.Bear(set, true)
	}
}
