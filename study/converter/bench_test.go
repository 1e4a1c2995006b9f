package converter

import (
	"context"
	"math"
	"testing"

	"quietbus/study/phasor"
)

// drive is a 100 kW, 400 V drive of our own invention: 3 % line reactor,
// 75 uF/kW, behind a source of 1 % on its rating.
func drive() (Nameplate, Terminal) {
	w := 2 * math.Pi * 50
	base := 400.0 * 400 / 100e3
	return Nameplate{Kind: KindDiodeBridge, VoltageV: 400, PowerW: 100e3, ReactorH: 0.03 * base / w, CapacitorF: 7.5e-3},
		Balanced(400, 50, 0.002*base, 0.01*base/w)
}

// distorted adds orders 5 to 49 of a six-pulse bridge to the voltages; turn
// moves their angles.
func distorted(t Terminal, share, turn float64) Terminal {
	v := phasor.New(50)
	v[1] = t.Voltage[0][1]
	for h := 5; h < 50; h++ {
		if h%6 == 1 || h%6 == 5 {
			a := share / float64(h)
			v[h] = v[1] * complex(a*math.Cos(turn*float64(h)), a*math.Sin(turn*float64(h)))
		}
	}
	t.Voltage = phasor.Balanced(v)
	return t
}

func BenchmarkSixPulse(b *testing.B) {
	n, t := drive()
	ctx := context.Background()
	b.Run("cold", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			if _, err := Solve(ctx, n, t, Options{Order: 50}); err != nil {
				b.Fatal(err)
			}
		}
	})
	two := [2]Terminal{distorted(t, 0.1, 0), distorted(t, 0.1, 0.02)}
	b.Run("cold-distorted", func(b *testing.B) {
		for b.Loop() {
			if _, err := Solve(ctx, n, two[0], Options{Order: 50}); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("warm", func(b *testing.B) {
		b.ReportAllocs()
		var s *State
		for i := 0; b.Loop(); i++ {
			r, err := Solve(ctx, n, two[i%2], Options{Order: 50, Warm: s})
			if err != nil {
				b.Fatal(err)
			}
			s = r.State
		}
	})
	// unbalanced, with even orders: no symmetry shortens the period
	var skew [2]Terminal
	for i := range skew {
		skew[i] = two[i]
		skew[i].Voltage = clone(two[i].Voltage, 50)
		skew[i].Voltage[1][1] *= complex(0.985, 0.01)
		skew[i].Voltage[2][2] += 0.3
	}
	b.Run("cold-unbalanced", func(b *testing.B) {
		for b.Loop() {
			if _, err := Solve(ctx, n, skew[0], Options{Order: 50}); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("warm-unbalanced", func(b *testing.B) {
		var s *State
		for i := 0; b.Loop(); i++ {
			r, err := Solve(ctx, n, skew[i%2], Options{Order: 50, Warm: s})
			if err != nil {
				b.Fatal(err)
			}
			s = r.State
		}
	})
	for name, term := range map[string]Terminal{"linearise": two[0], "linearise-unbalanced": skew[0]} {
		b.Run(name, func(b *testing.B) {
			r, err := Solve(ctx, n, term, Options{Order: 50})
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				if _, err := r.Norton(ctx, 50); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	b.Run("meet", func(b *testing.B) {
		bus, z := behind(two[0])
		r, err := Solve(ctx, n, bus, Options{Order: 50})
		if err != nil {
			b.Fatal(err)
		}
		norton, err := r.Norton(ctx, 50)
		if err != nil {
			b.Fatal(err)
		}
		for b.Loop() {
			if _, err := norton.Meet(bus.Voltage, func(h int, _ phasor.Sequence) complex128 { return z(h) }); err != nil {
				b.Fatal(err)
			}
		}
	})
}
