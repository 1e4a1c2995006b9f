package grid

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"pgregory.net/rapid"

	"quietbus/study/phasor"
)

// An update equals a refactorisation: shunts added to a reduced network, and a
// supply put in place of another, give what the whole network gives that has
// them, at every bus and at both ends of every element; with single-phase
// branches, which couple the sequences, and without.
func TestVariantEqualsWhole(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, in := random(t, rapid.Bool().Draw(t, "single-phase"))
		const order = 13
		load := n.Add(&PowerLoad{Name: "drive", Bus: buses[len(buses)-1], P: 5000, Q: 1500})
		own := n.elements[0].(*Supply)
		base, err := n.Compile()
		if err != nil {
			t.Skip(err)
		}
		ctx := context.Background()
		r, err := base.Reduce(ctx, order, buses)
		if err != nil {
			t.Skip(err)
		}
		v := r.Variant()
		whole := New(50)
		*whole = *n
		whole.elements = append([]Element(nil), n.elements...)
		var added []Added
		for range rapid.IntRange(0, 3).Draw(t, "added") {
			a := Added{Bus: rapid.SampledFrom(buses).Draw(t, "at"), Y: make([]complex128, order+1), Zero: rapid.Bool().Draw(t, "zero")}
			x := n.nominal[a.Bus] * n.nominal[a.Bus] / rapid.Float64Range(1e4, 1e5).Draw(t, "var")
			for h := 1; h <= order; h++ {
				a.Y[h] = capacitor{x}.Admittance(float64(h))
			}
			whole.Add(&Shunt{Name: "added", Bus: a.Bus, Branch: capacitor{x}, Zero: a.Zero})
			added = append(added, a)
		}
		if rapid.Bool().Draw(t, "other supply") {
			other := *own
			other.R, other.X, other.EMF = 1.7*own.R, 1.4*own.X, own.EMF*complex(0.98, 0.01)
			v.Replace(0, &other)
			whole.elements[0] = &other
		}
		if err := v.Set(added); err != nil {
			t.Fatal(err)
		}
		full, err := whole.Compile()
		if err != nil {
			t.Skip(err)
		}
		want, err := full.Fundamental(ctx)
		var weak *WeakError
		if err := v.Fundamental(ctx); err != nil {
			if errors.As(err, &weak) {
				t.Skip(err)
			}
			t.Fatal(err)
		}
		if err != nil {
			t.Skip(err)
		}
		sol, err := full.Harmonics(ctx, want, order, in)
		got := v.Harmonics(ctx, in)
		if err != nil {
			t.Skip(err)
		}
		if got != nil {
			var refactor *RefactorError
			if errors.As(got, &refactor) {
				t.Skip(got)
			}
			t.Fatal(got)
		}
		for _, b := range buses {
			p1, _ := sol.BusVoltage(b)
			p2, _ := v.BusVoltage(b)
			same(t, p1, p2, n.nominal[b])
		}
		for id := range n.elements {
			e1, e2 := sol.Ends(ElementID(id)), v.Ends(ElementID(id))
			for i := range e1 {
				same(t, e1[i].Phase, e2[i].Phase, 1e3)
			}
		}
		if a, b := v.Current(load), want.Current(load); cmplx.Abs(a[0]-b[0]) > 1e-8 {
			t.Fatalf("load draws %v, whole network %v", a, b)
		}
	})
}

func same(t *rapid.T, a, b [3]phasor.Spectrum, size float64) {
	for p := range a {
		for h := range a[p] {
			if d := cmplx.Abs(a[p][h] - b[p][h]); !(d < 1e-9*(size+cmplx.Abs(a[p][h]))) {
				t.Fatalf("phase %d order %d: %v against %v", p, h, a[p][h], b[p][h])
			}
		}
	}
}

// A reduced network refuses what it cannot do, by name.
func TestVariantRefuses(t *testing.T) {
	s, last := radial(30)
	ctx := context.Background()
	r, err := s.Reduce(ctx, 7, []BusID{last})
	if err != nil {
		t.Fatal(err)
	}
	if !r.Has(last) || r.Has(5) {
		t.Error("ports")
	}
	v := r.Variant()
	if err := v.Set([]Added{{Bus: 5, Y: make([]complex128, 8)}}); err == nil {
		t.Error("a bus that is no port")
	}
	// a shunt that cancels what the network shows at order 5
	z, err := s.Scan(ctx, last, phasor.Positive, []float64{5}, nil)
	if err != nil {
		t.Fatal(err)
	}
	a := Added{Bus: last, Y: make([]complex128, 8)}
	a.Y[5] = -1 / z[0]
	if err := v.Set([]Added{a}); err != nil {
		t.Fatal(err)
	}
	if err := v.Fundamental(ctx); err != nil {
		t.Fatal(err)
	}
	c := [3]phasor.Spectrum{phasor.New(7), phasor.New(7), phasor.New(7)}
	for p := range c {
		c[p][5] = cmplx.Rect(1, float64(p)*2*math.Pi/3)
	}
	var refactor *RefactorError
	if err := v.Harmonics(ctx, []Injection{{Name: "i", Bus: last, Current: c}}); !errors.As(err, &refactor) || refactor.Order != 5 {
		t.Errorf("%v", err)
	}
	gone, cancel := context.WithCancel(ctx)
	cancel()
	if _, err := s.Reduce(gone, 7, nil); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}

// BenchmarkVariant is one choice of measures on a 30-bus network with all of
// its buses as ports, four added shunts, 50 orders.
func BenchmarkVariant(b *testing.B) {
	s, last := radial(30)
	ctx := context.Background()
	var buses []BusID
	for i := range 30 {
		buses = append(buses, BusID(i))
	}
	r, err := s.Reduce(ctx, 50, buses)
	if err != nil {
		b.Fatal(err)
	}
	c := [3]phasor.Spectrum{phasor.New(50), phasor.New(50), phasor.New(50)}
	for p := range c {
		for h := 5; h < 50; h += 6 {
			c[p][h], c[p][h+2] = cmplx.Rect(1, float64(p)*2*math.Pi/3), cmplx.Rect(1, -float64(p)*2*math.Pi/3)
		}
	}
	in := []Injection{{Bus: last, Current: c}, {Bus: last - 1, Current: c}, {Bus: last - 5, Current: c}}
	var added []Added
	for i := range 4 {
		a := Added{Bus: BusID(25 + i), Y: make([]complex128, 51)}
		for h := 1; h <= 50; h++ {
			a.Y[h] = capacitor{3}.Admittance(float64(h))
		}
		added = append(added, a)
	}
	v := r.Variant()
	b.ReportAllocs()
	for b.Loop() {
		if err := v.Set(added); err != nil {
			b.Fatal(err)
		}
		if err := v.Fundamental(ctx); err != nil {
			b.Fatal(err)
		}
		if err := v.Harmonics(ctx, in); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkReduce is the reduction of 30 buses, 50 orders, three sequences.
func BenchmarkReduce(b *testing.B) {
	s, _ := radial(30)
	var buses []BusID
	for i := range 30 {
		buses = append(buses, BusID(i))
	}
	for b.Loop() {
		if _, err := s.Reduce(context.Background(), 50, buses); err != nil {
			b.Fatal(err)
		}
	}
}
