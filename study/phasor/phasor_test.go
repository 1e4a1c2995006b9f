package phasor

import (
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"
)

// near fails unless got is within tol of want, relative to want where that is
// above one.
func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*math.Max(1, math.Abs(want))) {
		t.Errorf("%s = %.9g, want %.9g", what, got, want)
	}
}

// percent builds a spectrum from per cent by order.
func percent(lines map[int]float64) Spectrum {
	s := New(50)
	for h, v := range lines {
		s[h] = complex(v/100, 0)
	}
	return s
}

// anySpectrum draws a spectrum of orders 0..order.
func anySpectrum(t *rapid.T, order int) Spectrum {
	s := New(order)
	part := rapid.Float64Range(-1, 1)
	for h := range s {
		if h == 0 {
			s[h] = complex(part.Draw(t, "dc"), 0)
			continue
		}
		s[h] = complex(part.Draw(t, "re"), part.Draw(t, "im"))
	}
	return s
}

func TestIndices(t *testing.T) {
	// Harmonic loss and K factor: constructed cases recomputed by hand
	// (derived); the formulas are UL 1561 and IEEE C57.110-2018 (F_HL found,
	// F_HL-STR memory, high).
	square := percent(map[int]float64{1: 100, 3: 33.3, 5: 20, 7: 14.3, 9: 11.1, 11: 9.1, 13: 7.7})
	near(t, "K of a square-like current", KFactor(square), 5.845385, 1e-6)
	near(t, "its THD", 100*THD(square), 44.48247, 1e-6)

	// IEEE C57.110 worked example; the spectrum is from memory (medium), the
	// results derived from it.
	example := New(19)
	for h, v := range map[int]float64{1: 0.978, 5: 0.171, 7: 0.108, 11: 0.044, 13: 0.028, 17: 0.015, 19: 0.0098} {
		example[h] = complex(v, 0)
	}
	near(t, "F_HL", LossFactor(example), 2.7243, 2e-5)
	near(t, "F_HL-STR", StrayLossFactor(example), 1.1398, 5e-5)
	near(t, "K at rated current 1", KFactorRated(example, 1), 2.7243*1.00043, 3e-5)

	// Ideal six-pulse current to order 25: each of the nine terms h^2/h^2 is
	// one, so F_HL = 9/sum(1/h^2) (derived).
	ideal := New(25)
	for _, h := range []int{1, 5, 7, 11, 13, 17, 19, 23, 25} {
		ideal[h] = complex(1/float64(h), 0)
	}
	near(t, "F_HL ideal six-pulse", LossFactor(ideal), 8.30021, 1e-6)
	near(t, "F_HL-STR ideal six-pulse", StrayLossFactor(ideal), 1.33809, 1e-5)

	// TDD assessment at a 13.8 kV PCC, constructed (derived).
	demand := New(50)
	for h, a := range map[int]float64{1: 380, 5: 32, 7: 20, 11: 9, 13: 6, 17: 3, 19: 2.5} {
		demand[h] = complex(0, a)
	}
	near(t, "TDD", 100*TDD(demand, 400), 9.862334, 1e-6)
	near(t, "THD", 100*THD(demand), 10.3814, 1e-5)

	// True power factor with a sinusoidal voltage, constructed (derived).
	current := percent(map[int]float64{5: 20, 7: 14.3, 11: 9.1, 13: 7.7})
	current[1] = cmplx.Rect(1, -math.Acos(0.95))
	voltage := New(1)
	voltage[1] = 230
	p := PowerOf(voltage, current)
	near(t, "THD", 100*THD(current), 27.3237992, 1e-8)
	near(t, "displacement", p.Displacement, 0.95, 1e-12)
	near(t, "true power factor", p.TruePF, 0.91640672, 1e-8)
	near(t, "distortion factor", p.TruePF/p.Displacement, 0.964638653, 1e-8)
	near(t, "P^2+N^2", p.P*p.P+p.N*p.N, p.S*p.S, 1e-12)
	if p.Q1 <= 0 {
		t.Errorf("a lagging current gives Q1 = %g, want more than 0", p.Q1)
	}
}

func TestIndicesWithoutBase(t *testing.T) {
	zero, third := New(5), New(5)
	third[3] = 1
	for what, v := range map[string]float64{
		"THD of nothing": THD(zero), "THD without order 1": THD(third), "crest of nothing": Crest(zero),
		"K of nothing": KFactor(zero), "TDD without demand": TDD(third, 0), "TDD of NaN demand": TDD(third, math.NaN()),
		"K at no rating": KFactorRated(third, 0), "weighted nothing": Weighted(zero, func(int) float64 { return 1 }),
		"peak of an empty spectrum": Peak(nil), "power factor of nothing": PowerOf(zero, zero).TruePF,
	} {
		if v != 0 {
			t.Errorf("%s = %g, want 0", what, v)
		}
	}
}

// Three equal single-phase loads with the current of a switched supply add
// their triplen orders in the neutral: constructed from a spectrum recalled
// from Dugan and others, Electrical Power Systems Quality (memory, medium);
// the sums are derived.
func TestNeutralCurrent(t *testing.T) {
	phase := percent(map[int]float64{1: 100, 3: 81, 5: 60.6, 7: 37, 9: 15.7, 11: 2.4, 13: 6.3, 15: 7.9})
	set := Balanced(phase)
	near(t, "neutral", 100*RMS(Neutral(set)), 248.6546, 1e-6)
	near(t, "phase", 100*RMS(phase), 148.178, 1e-6)
	seq := SequencesOf(set)
	for h := 1; h <= 50; h++ {
		for q := Zero; q <= Negative; q++ {
			want := cmplx.Abs(phase[h])
			if q != OfOrder(h) {
				want = 0
			}
			near(t, q.String(), cmplx.Abs(seq[q][h]), want, 1e-12)
		}
	}
}

// The sequence of a balanced order (derived).
func TestOfOrder(t *testing.T) {
	for h, want := range map[int]Sequence{2: Negative, 3: Zero, 4: Positive, 5: Negative, 6: Zero, 7: Positive, 11: Negative, 13: Positive, 15: Zero, -1: Negative} {
		if got := OfOrder(h); got != want {
			t.Errorf("order %d is of %v sequence, want %v", h, got, want)
		}
	}
}

func TestSequencesAreInverse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		abc := [3]Spectrum{anySpectrum(t, 7), anySpectrum(t, 5), anySpectrum(t, 7)}
		back := PhasesOf(SequencesOf(abc))
		for p := range abc {
			for h := range back[p] {
				if cmplx.Abs(back[p][h]-abc[p].At(h)) > 1e-14 {
					t.Fatalf("phase %d order %d: %v, want %v", p, h, back[p][h], abc[p].At(h))
				}
			}
		}
	})
	// The textbook case: one phase alone splits evenly.
	for q, v := range ToSequence([3]complex128{3, 0, 0}) {
		near(t, Sequence(q).String(), cmplx.Abs(v-1), 0, 1e-15)
	}
}
