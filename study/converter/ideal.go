package converter

import (
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// InputError says which value a closed form cannot take, and why.
type InputError struct{ Field, Problem string }

func (e *InputError) Error() string { return e.Field + " " + e.Problem }

// IdealPulse returns the spectrum of an ideal p-pulse converter, p a multiple
// of six, with ripple-free direct current and no overlap: orders kp-1 and kp+1
// at 100/h per cent, with the signs of the six-pulse series in the star-star
// position, cos t - 1/5 cos 5t + 1/7 cos 7t - 1/11 cos 11t ... (Fourier series).
func IdealPulse(p, order int) ([]Line, error) {
	if p < 6 || p%6 != 0 {
		return nil, &InputError{"pulse number", fmt.Sprintf("is %d; it must be 6, 12, 18, 24 ...", p)}
	}
	var out []Line
	for h := 2; h <= order; h++ {
		if r := h % p; r == 1 || r == p-1 {
			out = append(out, Line{Order: h, Percent: 100 / float64(h), AngleDeg: sixPulseAngle(h)})
		}
	}
	return out, nil
}

// HalfWave returns the current of a resistor behind one diode, orders 0 and 2
// to order: direct current 1/pi and even orders 2/(pi (h^2-1)) against a
// fundamental of 1/2, peak values (Fourier series). The direct current is in
// per cent of the rms fundamental, as every order is.
func HalfWave(order int) []Line { return LinesOf(phasor.HalfWaveSine(1, order)) }

// SinglePhaseBridge returns the current of a single-phase bridge with
// ripple-free direct current, a square wave in phase with the voltage: odd
// orders at 100/h per cent (Fourier series).
func SinglePhaseBridge(order int) []Line { return LinesOf(phasor.SquareWave(1, order)) }

// LinesOf returns a spectrum as lines relative to its own order 1, whose angle
// is turned to zero: order h by -h times the angle of order 1. It is empty for
// a spectrum without a fundamental.
func LinesOf(s phasor.Spectrum) []Line {
	base := s.At(1)
	if base == 0 {
		return nil
	}
	var out []Line
	for h, v := range s {
		if h == 1 || v == 0 {
			continue
		}
		v *= cmplx.Rect(1, -float64(h)*cmplx.Phase(base))
		out = append(out, Line{Order: h, Percent: 100 * cmplx.Abs(v) / cmplx.Abs(base), AngleDeg: wrapped(cmplx.Phase(v) * 180 / math.Pi)})
	}
	return out
}

// Commutation is the state of a six-pulse bridge with ripple-free direct
// current behind an inductance.
type Commutation struct {
	Alpha, Overlap float64 // firing angle and overlap, rad
	DirectV        float64 // mean direct voltage, V
	NotchVs        float64 // area of one line-to-line notch at the bridge, V s
}

// Commutate returns the overlap of a six-pulse bridge from its line-to-line
// voltage (V rms), commutating inductance a phase (H), direct current (A),
// firing angle (rad) and frequency (Hz):
// cos a - cos(a+u) = sqrt(2) w L Id / V (Arrillaga and Watson, Power System
// Harmonics, 2nd ed.; derived). It fails when commutation does not end before
// the next begins.
func Commutate(v, inductance, direct, alpha, hz float64) (Commutation, error) {
	for _, c := range []struct {
		field string
		v     float64
	}{{"voltage", v}, {"commutating inductance", inductance}, {"direct current", direct}, {"frequency", hz}} {
		if !(c.v > 0) || math.IsInf(c.v, 1) {
			return Commutation{}, &InputError{c.field, fmt.Sprintf("is %g; it must be above zero", c.v)}
		}
	}
	if !(alpha >= 0 && alpha < math.Pi) {
		return Commutation{}, &InputError{"firing angle", fmt.Sprintf("is %.3g rad; it must be from 0 to below pi", alpha)}
	}
	x := 2 * math.Pi * hz * inductance
	end := math.Cos(alpha) - math.Sqrt2*x*direct/v
	u := math.Acos(end) - alpha
	if !(end >= -1) || u > math.Pi/3 {
		return Commutation{}, &InputError{"direct current", "is so large that one commutation runs into the next (overlap above 60 degrees); this closed form does not hold there"}
	}
	return Commutation{
		Alpha: alpha, Overlap: u,
		DirectV: 3 / math.Pi * (math.Sqrt2*v*math.Cos(alpha) - x*direct),
		NotchVs: 2 * inductance * direct,
	}, nil
}

// SixPulseOverlap returns the line current of a six-pulse bridge in the
// star-star position, orders 0..order, in A rms for a ripple-free direct
// current of 1 A, with firing angle alpha and overlap u in rad. Angles refer
// to the cosine of the phase voltage behind the commutating reactance. u = 0
// gives the ideal blocks.
//
// The current's slope is four commutations a period, each sin(a + x)/(cos a -
// cos(a+u)) over 0 < x < u; order h is its Fourier integral over jh (derived;
// the magnitudes are those of Arrillaga and Watson, Power System Harmonics,
// 2nd ed.).
func SixPulseOverlap(alpha, u float64, order int) (phasor.Spectrum, error) {
	switch {
	case !(alpha >= 0 && alpha < math.Pi):
		return nil, &InputError{"firing angle", fmt.Sprintf("is %.3g rad; it must be from 0 to below pi", alpha)}
	case !(u >= 0 && u <= math.Pi/3) || alpha+u > math.Pi:
		return nil, &InputError{"overlap", fmt.Sprintf("is %.3g rad; it must be from 0 to pi/3 and end before pi", u)}
	}
	s := phasor.New(max(order, 1))
	for h := 1; h <= order; h++ {
		if h%2 == 0 || h%3 == 0 {
			continue
		}
		n := float64(h)
		commutation := complex(1, 0)
		if u > 1e-9 {
			swing := math.Cos(alpha) - math.Cos(alpha+u)
			commutation = (cmplx.Rect(1, alpha)*arc(1-n, u) - cmplx.Rect(1, -alpha)*arc(-1-n, u)) / complex(0, 2*swing)
		}
		start := alpha - math.Pi/3 // a phase takes over 60 degrees before its crest
		four := 2 * (1 - cmplx.Rect(1, -n*2*math.Pi/3))
		s[h] = commutation * cmplx.Rect(1, -n*start) * four / complex(0, n) * complex(math.Sqrt2/(2*math.Pi), 0)
	}
	return s, nil
}

// arc is the integral of exp(jkx) for x from 0 to u.
func arc(k, u float64) complex128 {
	if k == 0 {
		return complex(u, 0)
	}
	return (cmplx.Rect(1, k*u) - 1) / complex(0, k)
}
