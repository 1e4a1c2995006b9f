package filter

import (
	"math"
	"math/cmplx"
	"testing"

	"quietbus/study/phasor"
)

// R-C low-passes: 30 ohm and 100 uF at 50 Hz lag by 43.3 degrees (derived;
// that a bench shows about 40 is common practice, no source), and 10 kohm with
// 0.1 uF by 17.44 with gain 0.954 and corner 159.15 Hz (derived).
func TestLowPassRC(t *testing.T) {
	p, err := LowPassRC(30, 100e-6, 50)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "lag", p.Lag(1), 180/math.Pi*math.Atan(2*math.Pi*50*30*100e-6), 1e-12)
	if lag := p.Lag(1); lag < 40 || lag > 44 {
		t.Errorf("30 ohm and 100 uF lag by %g degrees, want about 43", lag)
	}
	small, err := LowPassRC(10e3, 0.1e-6, 50)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "lag", small.Lag(1), 17.440594, 1e-7)
	near(t, "gain", cmplx.Abs(small.Ratio(1)), 0.95402822, 1e-8)
	near(t, "corner", 50*small.Corner(), 159.15494, 1e-7)
	near(t, "gain at the corner", cmplx.Abs(small.Ratio(small.Corner())), 1/math.Sqrt2, 1e-12)
	near(t, "input", cmplx.Abs(small.Impedance(1)-complex(10e3, -1/(2*math.Pi*50*0.1e-6))), 0, 1e-9)
}

// A purely resistive divider leaves the shape of a distorted supply as it is:
// the low-pass without its capacitor (made negligible).
func TestResistiveDividerKeepsTheShape(t *testing.T) {
	p := &LowPass{R: 10, Xc: math.Inf(1), Load: func(float64) complex128 { return 1.0 / 30 }}
	for h := 1.0; h <= 50; h++ {
		if g := p.Ratio(h); cmplx.Abs(g-0.75) > 1e-12 {
			t.Errorf("order %g: %v, want 0.75", h, g)
		}
	}
}

// An L-C low-pass by its circuit: series choke, capacitor beside the load.
func TestLowPassLC(t *testing.T) {
	p, err := LowPassLC(5e-3, 60e-6, 50)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "corner", 50*p.Corner(), 1/(2*math.Pi*math.Sqrt(5e-3*60e-6)), 1e-12)
	p.R, p.Load = 0.2, func(h float64) complex128 { return 1 / complex(40, 6*h) }
	for h := 1.0; h <= 25; h++ {
		w := 2 * math.Pi * 50 * h
		zl, zp := complex(0.2, w*5e-3), 1/(complex(0, w*60e-6)+1/complex(40, 6*h))
		near(t, "gain", cmplx.Abs(p.Ratio(h)-zp/(zl+zp)), 0, 1e-12)
		near(t, "input", cmplx.Abs(p.Impedance(h)-(zl+zp)), 0, 1e-12)
	}
	if g := cmplx.Abs(p.Ratio(p.Corner())); g < 2 {
		t.Errorf("near its resonance it has gain %.2f, want amplification", g)
	}
	if g := cmplx.Abs(p.Ratio(25)); g > 0.1 {
		t.Errorf("at order 25 it has gain %.2f", g)
	}
}

func load() [3]phasor.Spectrum {
	a := phasor.New(50)
	a[0], a[1], a[3], a[5], a[7], a[29] = 2, 100, 9, 30, 12i, 3
	set := phasor.Balanced(a)
	set[1][5] *= 1.2 // worst phase
	return set
}

func TestActive(t *testing.T) {
	sensed := load()
	a := Active{RatedA: 100, MaxOrder: 25, Share: func(h int) float64 {
		if h == 7 {
			return 0.5
		}
		return 0.9
	}}
	c := a.Compensate(sensed)
	if c.Saturated || c.Scale != 1 || c.Delivered != c.Requested {
		t.Errorf("saturates at %g A of 100", c.Requested)
	}
	near(t, "requested", c.Requested, math.Sqrt(8.1*8.1+math.Pow(0.9*36, 2)+36), 1e-12)
	for p := range sensed {
		for h := range sensed[p] {
			want := 1.0 // share left
			switch h {
			case 3, 5:
				want = 0.1
			case 7:
				want = 0.5
			}
			if left := sensed[p][h] + c.Drawn[p][h]; cmplx.Abs(left-sensed[p][h]*complex(want, 0)) > 1e-12 {
				t.Errorf("phase %d order %d: %v left of %v", p, h, left, sensed[p][h])
			}
		}
	}
	a.RatedA = 20
	s := a.Compensate(sensed)
	if !s.Saturated || math.Abs(s.Delivered-20) > 1e-12 || math.Abs(s.Scale-20/c.Requested) > 1e-12 || s.Requested != c.Requested {
		t.Errorf("saturated: %+v", s)
	}
	worst := 0.0
	for p := range s.Drawn {
		worst = max(worst, phasor.RMS(s.Drawn[p]))
		for h := range s.Drawn[p] {
			if cmplx.Abs(s.Drawn[p][h]-c.Drawn[p][h]*complex(s.Scale, 0)) > 1e-12 {
				t.Errorf("phase %d order %d is not scaled like the rest", p, h)
			}
		}
	}
	near(t, "worst phase", worst, 20, 1e-12)

	a = Active{RatedA: 1000, MaxOrder: 50, ThreeWire: true} // nil share: everything
	c = a.Compensate(sensed)
	for h := 2; h <= 50; h++ {
		left := [3]complex128{}
		for p := range left {
			left[p] = sensed[p][h] + c.Drawn[p][h]
		}
		q := phasor.ToSequence(left)
		if cmplx.Abs(q[phasor.Positive])+cmplx.Abs(q[phasor.Negative]) > 1e-12 {
			t.Errorf("order %d: %v left", h, q)
		}
	}
	if n := phasor.Neutral(c.Drawn); phasor.RMS(n) > 1e-12 {
		t.Errorf("a three-wire filter drives %g A through a neutral", phasor.RMS(n))
	}
	if c := (&Active{RatedA: 10, MaxOrder: 1}).Compensate(sensed); c.Requested != 0 {
		t.Error("an order ceiling of 1 leaves something to do")
	}
	if c := (&Active{RatedA: 0, MaxOrder: 25}).Compensate(sensed); c.Delivered != 0 || !c.Saturated {
		t.Errorf("without a rating: %+v", c.Delivered)
	}
}
