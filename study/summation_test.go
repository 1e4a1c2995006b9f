package study

import (
	"context"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"quietbus/testdata"
)

// twoDrives are two invented equal loads on one board whose harmonic currents
// stand opposite to each other, and a background of unknown angle.
func twoDrives() *Study {
	lines := func(deg float64) []SpectrumLine {
		return []SpectrumLine{{Order: 2, Percent: 10, AngleDeg: deg}, {Order: 5, Percent: 20, AngleDeg: deg}, {Order: 11, Percent: 10, AngleDeg: deg}}
	}
	s := applianceStudy(NonlinearLoad{CurrentA: 100, Spectrum: Typed, Lines: lines(0)}, Assessment{Set: "iec61000-2-4-class2"})
	s.NonlinearLoads[0].Name = "Drive A"
	b := s.NonlinearLoads[0]
	b.Name, b.Lines = "Drive B", lines(180)
	s.NonlinearLoads = append(s.NonlinearLoads, b)
	return s
}

// sumOf returns the voltage of order h at the board and the current of the
// transformer's low-voltage end.
func sumOf(t *testing.T, s *Study, h int) (v, i float64) {
	t.Helper()
	o, err := Evaluate(context.Background(), s, nil)
	if err != nil {
		t.Fatal(err)
	}
	return cmplx.Abs(o.Bus("Board").Phase[0][h]), cmplx.Abs(o.Element("T1").Ends[1].Phase[0][h])
}

// Two equal opposite sources: nothing as phasors, twice one of them
// arithmetically, 2^(1/a) times by the second law (IEC/TR 61000-3-6:2008 clause
// 7.2.1, exponents 1, 1.4, 2 from memory, high; the sums derived).
func TestTwoOppositeSources(t *testing.T) {
	s := twoDrives()
	for h, a := range map[int]float64{2: 1, 5: 1.4, 11: 2} {
		one := twoDrives()
		one.NonlinearLoads = one.NonlinearLoads[:1]
		v1, i1 := sumOf(t, one, h)
		for word, want := range map[string]float64{PhasorSum: 0, SecondLaw: math.Pow(2, 1/a), ArithmeticSum: 2} {
			s.Summation = word
			v, i := sumOf(t, s, h)
			// the second load changes the fundamental voltage a little
			if math.Abs(v-want*v1) > 1e-3*v1 || math.Abs(i-want*i1) > 1e-3*i1 {
				t.Errorf("order %d, %s: %.5g V and %.5g A, want %.4g times %.5g V and %.5g A", h, word, v, i, want, v1, i1)
			}
		}
	}
	s.Summation, s.ExponentMiddle = SecondLaw, 2
	v, _ := sumOf(t, s, 5)
	s.Summation = ArithmeticSum
	if all, _ := sumOf(t, s, 5); math.Abs(v-all/math.Sqrt2) > 1e-6 {
		t.Errorf("own exponent 2: %g of %g", v, all)
	}
}

// A background of unknown angle counts as zero degrees in a phasor sum, with a
// warning, and follows the law otherwise: 3 and 4 make 5.7658 at order 5
// (derived), not 7.
func TestBackgroundFollowsTheLaw(t *testing.T) {
	s := twoDrives()
	s.NonlinearLoads = s.NonlinearLoads[:1]
	load, _ := sumOf(t, s, 5)
	s.Supplies[0].Background = []BackgroundLine{{Order: 5, Percent: 2}}
	only := twoDrives()
	only.NonlinearLoads, only.Supplies[0].Background = nil, s.Supplies[0].Background
	back, _ := sumOf(t, only, 5)
	s.Summation = SecondLaw
	got, _ := sumOf(t, s, 5)
	if want := math.Pow(math.Pow(load, 1.4)+math.Pow(back, 1.4), 1/1.4); math.Abs(got-want) > 1e-6*want {
		t.Errorf("%g V, want %g of %g and %g", got, want, load, back)
	}
	warned := func() string {
		o, err := Evaluate(context.Background(), s, nil)
		if err != nil {
			t.Fatal(err)
		}
		return strings.Join(o.Warnings, "\n")
	}
	if w := warned(); strings.Contains(w, "counts as zero") {
		t.Errorf("with the law: %s", w)
	}
	s.Summation = ""
	if w := warned(); !strings.Contains(w, "counts as zero") {
		t.Errorf("as phasors: %s", w)
	}
}

// On the demonstration and the 30-bus study every voltage and current lies in
// the order phasor <= arithmetic, second law <= arithmetic, and order 1 is the
// same; one source by itself is the same by every law.
func TestLawsAreOrdered(t *testing.T) {
	for _, text := range [][]byte{testdata.Demo, testdata.Thirty} {
		outcome := func(word string) *Outcome {
			s, err := Parse(text)
			if err != nil {
				t.Fatal(err)
			}
			s.Summation = word
			o, err := Evaluate(context.Background(), s, s.OnMeasures())
			if err != nil {
				t.Fatalf("%s: %v", word, err)
			}
			return o
		}
		p, l, a := outcome(PhasorSum), outcome(SecondLaw), outcome(ArithmeticSum)
		differs := 0
		check := func(what string, h int, x, y, z complex128) {
			s := [3]float64{cmplx.Abs(x), cmplx.Abs(y), cmplx.Abs(z)}
			tol := 1e-7 * (1 + s[2])
			if s[0] > s[2]+tol || s[1] > s[2]+tol || h == 1 && (x != y || x != z) {
				t.Fatalf("%s, order %d: phasor %g, law %g, arithmetic %g", what, h, s[0], s[1], s[2])
			}
			if s[1] < 0.99*s[2] {
				differs++
			}
		}
		for i := range p.Buses {
			for ph := range 3 {
				for h := 1; h <= 50; h++ {
					check(p.Buses[i].Name, h, p.Buses[i].Phase[ph].At(h), l.Buses[i].Phase[ph].At(h), a.Buses[i].Phase[ph].At(h))
				}
			}
		}
		for i := range p.Elements {
			for k := range p.Elements[i].Ends {
				x, y, z := &p.Elements[i].Ends[k], &l.Elements[i].Ends[k], &a.Elements[i].Ends[k]
				for h := 1; h <= 50; h++ {
					check(p.Elements[i].Name, h, x.Phase[1].At(h), y.Phase[1].At(h), z.Phase[1].At(h))
					check(p.Elements[i].Name+" neutral", h, x.Neutral.At(h), y.Neutral.At(h), z.Neutral.At(h))
				}
			}
		}
		if differs == 0 {
			t.Error("the laws make no difference")
		}
	}
}

// An active filter's current is charged to the loads it answers to: with one
// load and a filter that takes all of its order 5, nothing is left by any law.
func TestFilterIsNoSourceOfItsOwn(t *testing.T) {
	s := twoDrives()
	s.NonlinearLoads = s.NonlinearLoads[:1]
	s.Measures = []Measure{{Named: Named{"AF"}, Kind: ActiveFilter, Bus: "Board", RatedA: 100, Share: 100, On: true}}
	for _, word := range []string{PhasorSum, SecondLaw, ArithmeticSum} {
		s.Summation = word
		o, err := Evaluate(context.Background(), s, []string{"AF"})
		if err != nil {
			t.Fatal(err)
		}
		if v := cmplx.Abs(o.Bus("Board").Phase[0][5]); v > 1e-9 {
			t.Errorf("%s: %g V of order 5 are left", word, v)
		}
	}
}

func TestSummationInput(t *testing.T) {
	s := twoDrives()
	s.Summation = "geometric"
	if found := s.Validate(); len(found) != 1 || found[0].Field != "summation" || !strings.Contains(found[0].Remedy, "second-law") {
		t.Errorf("%v", found)
	}
	s.Summation, s.ExponentHigh = SecondLaw, 7
	if found := s.Validate(); len(found) != 1 || found[0].Field != "exponentHigh" {
		t.Errorf("%v", found)
	}
}

func BenchmarkFlip30SecondLaw(b *testing.B) {
	s := thirty()
	s.Summation = SecondLaw
	p, err := Prepare(s)
	if err != nil {
		b.Fatal(err)
	}
	sets := [][]string{{"FB0"}, {"FB0", "FB3"}}
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := p.Evaluate(context.Background(), sets[i%2]); err != nil {
			b.Fatal(err)
		}
	}
}
