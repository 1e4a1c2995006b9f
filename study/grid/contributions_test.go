package grid

import (
	"context"
	"math"
	"math/cmplx"
	"testing"

	"quietbus/study/phasor"

	"pgregory.net/rapid"
)

// The sources' parts add up to the solution at every bus and every end of every
// element, and each part is the network solved for that source alone
// (superposition, an identity of linear networks).
func TestContributionsAddUp(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, in := random(t, true)
		s := compiled(t, n)
		base, err := s.Fundamental(context.Background())
		if err != nil {
			t.Skip(err)
		}
		sol, err := s.Harmonics(context.Background(), base, 13, in)
		if err != nil {
			t.Skip(err)
		}
		var sources []Source
		for _, x := range in {
			sources = append(sources, Source{Name: x.Name, Injections: []Injection{x}})
		}
		c, err := sol.Contributions(context.Background(), sources)
		if err != nil {
			t.Fatal(err)
		}
		if len(c.Sources) != len(in)+1 || c.Sources[len(in)].Supply != "s" {
			t.Fatalf("sources %v, want every injection and the supply's background", c.Sources)
		}
		same := func(what string, whole [3]phasor.Spectrum, part func(source int) [3]phasor.Spectrum) {
			for p := range whole {
				for h := 2; h <= 13; h++ {
					var sum complex128
					size := 0.01 // of A or V, below which there is only rounding
					for i := range c.Sources {
						v := part(i)[p].At(h)
						sum += v
						size += cmplx.Abs(v)
					}
					if cmplx.Abs(sum-whole[p].At(h)) > 1e-8*size {
						t.Fatalf("%s, phase %d, order %d: parts make %v, the whole is %v", what, p, h, sum, whole[p].At(h))
					}
				}
			}
		}
		for _, b := range buses {
			whole, _ := sol.BusVoltage(b)
			same("voltage", whole, func(i int) [3]phasor.Spectrum { v, _ := c.Voltage(i, b); return v })
		}
		for id := range n.elements {
			for k, end := range sol.Ends(ElementID(id)) {
				same("current of "+n.elements[id].label(), end.Phase, func(i int) [3]phasor.Spectrum { return c.Ends(i, ElementID(id))[k].Phase })
			}
		}
	})
}

// A source that is left out is noticed.
func TestContributionsMissSource(t *testing.T) {
	n := New(50)
	b := n.AddBus("b", 400)
	n.Add(&Supply{Name: "s", Bus: b, R: 0.001, X: 0.01, EMF: 230})
	s, err := n.Compile()
	if err != nil {
		t.Fatal(err)
	}
	base, err := s.Fundamental(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	in := []Injection{{Name: "x", Bus: b}}
	for i := range in[0].Current { // negative sequence
		in[0].Current[i] = phasor.New(7)
		in[0].Current[i][5] = 10 * cmplx.Rect(1, []float64{0, 2.0943951023931953, -2.0943951023931953}[i])
	}
	sol, err := s.Harmonics(context.Background(), base, 7, in)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := sol.Contributions(context.Background(), nil); err == nil {
		t.Error("a missing source is not noticed")
	}
	c, err := sol.Contributions(context.Background(), []Source{{Name: "x", Injections: in}})
	if err != nil || len(c.Sources) != 1 {
		t.Fatalf("%v, %v", c, err)
	}
	// 10 A through 5 x 0.01 ohm and 0.001 ohm (derived)
	if v, _ := c.Voltage(0, b); math.Abs(cmplx.Abs(v[0][5])-10*cmplx.Abs(complex(0.001, 0.05))) > 1e-9 {
		t.Errorf("%v V", v[0][5])
	}
}
