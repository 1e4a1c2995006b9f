package converter

import "math"

// halfWave returns the current of a resistor behind one diode, orders 0 to
// order, in per cent of order 1: with a voltage cos t of peak 1 the series is
// 1/pi + 1/2 cos t + sum over even h of 2 (-1)^(h/2+1) / (pi (h^2-1)) cos ht.
func halfWave(order int) []Line {
	// peaks over the peak of order 1; the direct current over its rms
	out := []Line{{Order: 0, Percent: 100 * (1 / math.Pi) / (0.5 / math.Sqrt2)}}
	for h := 2; h <= order; h += 2 {
		angle := 0.0
		if h%4 == 0 {
			angle = 180
		}
		out = append(out, Line{Order: h, Percent: 100 * 2 / (math.Pi * float64(h*h-1)) / 0.5, AngleDeg: angle})
	}
	return out
}

// IdealPulse returns the spectrum of an ideal p-pulse converter with ripple-free
// direct current and no overlap: orders kp-1 and kp+1 at 1/h, angles of the
// star-star six-pulse series.
func IdealPulse(p, order int) []Line {
	var out []Line
	for h := 2; h <= order; h++ {
		if r := h % p; r == 1 || r == p-1 {
			out = append(out, Line{Order: h, Percent: 100 / float64(h), AngleDeg: sixPulseAngle(h)})
		}
	}
	return out
}

// Overlap returns order h of a six-pulse bridge's current over the fundamental
// without overlap, sqrt(6)/pi Id, for ripple-free direct current, firing angle
// alpha and overlap u (rad, u > 0), h = 1, 5, 7, 11 ... (Arrillaga and Watson,
// Power System Harmonics, 2nd ed.)
func Overlap(h int, alpha, u float64) float64 {
	n := float64(h)
	a, b := u/2, math.Sin((n+1)*u/2)/(n+1)
	if h != 1 {
		a = math.Sin((n-1)*u/2) / (n - 1)
	}
	den := math.Cos(alpha) - math.Cos(alpha+u)
	return math.Sqrt(a*a+b*b-2*a*b*math.Cos(2*alpha+u)) / (n * den)
}
