package phasor

import "math"

// Synthesize returns n samples of one period of the waveform, the first at
// t = 0, appended to dst[:0]. It allocates only when dst is too small. The
// result is empty for n <= 0.
func Synthesize(s Spectrum, n int, dst []float64) []float64 {
	if n <= 0 {
		return dst[:0]
	}
	if cap(dst) < n {
		dst = make([]float64, n)
	}
	dst = dst[:n]
	s = trimmed(s)
	dc := real(s.At(0))
	if n%4 != 0 {
		for k := range dst {
			p := partsAt(s, 2*math.Pi*float64(k)/float64(n))
			dst[k] = dc + p.evenCos + p.oddCos - p.evenSin - p.oddSin
		}
		return dst
	}
	// One evaluation serves the four points that mirror each other.
	half := n / 2
	for k := 0; k <= n/4; k++ {
		p := partsAt(s, 2*math.Pi*float64(k)/float64(n))
		plus, minus := dc+p.evenCos+p.oddCos, dc+p.evenCos-p.oddCos
		dst[k] = plus - p.evenSin - p.oddSin
		dst[(n-k)%n] = plus + p.evenSin + p.oddSin
		dst[half+k] = minus - p.evenSin + p.oddSin
		dst[half-k] = minus + p.evenSin - p.oddSin
	}
	return dst
}

// trimmed cuts the orders above the last that carries something.
func trimmed(s Spectrum) Spectrum {
	for len(s) > 0 && s[len(s)-1] == 0 {
		s = s[:len(s)-1]
	}
	return s
}

// parts are the four sums of a waveform at one angle: peak values times
// cosines and sines, even and odd orders apart.
type parts struct{ evenCos, evenSin, oddCos, oddSin float64 }

// partsAt sums the series at the angle theta by Clenshaw's recurrence in steps
// of 2 theta, which needs no tables and one sine and cosine in all.
func partsAt(s Spectrum, theta float64) parts {
	sin, cos := math.Sincos(theta)
	sin2, cos2 := 2*sin*cos, (cos-sin)*(cos+sin)
	step := 2 * cos2
	var ec, ec1, es, es1, oc, oc1, os, os1 float64
	h := len(s) - 1
	if h&1 == 0 && h > 0 { // an even order on top has no odd one above it
		ec, es = real(s[h]), imag(s[h])
		h--
	}
	for ; h >= 1; h -= 2 {
		odd, even := s[h], s[h-1]
		oc, oc1 = real(odd)+step*oc-oc1, oc
		os, os1 = imag(odd)+step*os-os1, os
		if h == 1 {
			break
		}
		ec, ec1 = real(even)+step*ec-ec1, ec
		es, es1 = imag(even)+step*es-es1, es
	}
	return parts{
		evenCos: math.Sqrt2 * (cos2*ec - ec1),
		evenSin: math.Sqrt2 * sin2 * es,
		oddCos:  math.Sqrt2 * cos * (oc - oc1),
		oddSin:  math.Sqrt2 * sin * (os + os1),
	}
}

// Value returns the waveform at the angle theta, in radians of order 1.
func Value(s Spectrum, theta float64) float64 {
	p := partsAt(s, theta)
	return real(s.At(0)) + p.evenCos + p.oddCos - p.evenSin - p.oddSin
}

// Peak returns the crest value of the waveform: the largest magnitude it
// reaches in a period. The extrema are found on samples, as close as the
// waveform's bend asks for and at most eight to a period of the highest order,
// and then refined by Newton's method, so that the result does not depend on
// the sampling.
func Peak(s Spectrum) float64 {
	s = trimmed(s)
	if len(s) <= 1 {
		return math.Abs(real(s.At(0)))
	}
	// The second derivative is at most bend, so that between two samples a
	// step apart the waveform rises above the nearer by at most bend step^2/8.
	bend := 0.0
	for h := 1; h < len(s); h++ {
		bend += math.Sqrt2 * float64(h*h) * math.Sqrt(square(s[h]))
	}
	n := 8 * (len(s) - 1)
	if enough := 32 * math.Sqrt(bend/RMS(s)); enough < float64(n) { // the rise is then below half a per cent
		n = int(enough)
	}
	n = max(64, n)
	n += (4 - n%4) % 4
	var room [1024]float64
	x := Synthesize(s, n, room[:0])
	best := 0.0
	for _, v := range x {
		best = max(best, math.Abs(v))
	}
	step := 2 * math.Pi / float64(n)
	floor := best - bend*step*step/8
	for i, v := range x {
		v = math.Abs(v)
		if v < floor {
			continue
		}
		left, right := x[(i+n-1)%n], x[(i+1)%n]
		if x[i] < 0 {
			left, right = -left, -right
		}
		if v < left || v <= right {
			continue
		}
		offset := 0.0
		if curve := left - 2*v + right; curve < 0 {
			offset = (left - right) / (2 * curve)
		}
		best = max(best, refine(s, step*(float64(i)+offset), step))
	}
	return best
}

// refine walks from theta to the extremum near it, no further than reach, and
// returns the largest magnitude met.
func refine(s Spectrum, theta, reach float64) float64 {
	start, best := theta, 0.0
	for range 6 {
		value, slope, bend := derivatives(s, theta)
		best = max(best, math.Abs(value))
		if value*bend >= 0 {
			break // not curved towards the axis: no extremum of the magnitude here
		}
		move := -slope / bend
		theta += move
		if math.Abs(theta-start) > reach || math.Abs(move) < 1e-9*reach {
			break
		}
	}
	return best
}

// derivatives returns the waveform and its first two derivatives in theta.
func derivatives(s Spectrum, theta float64) (value, slope, bend float64) {
	sin, cos := math.Sincos(theta)
	re, im := 1.0, 0.0
	for h := 1; h < len(s); h++ {
		re, im = re*cos-im*sin, re*sin+im*cos
		a, b := real(s[h]), imag(s[h])
		c, q := a*re-b*im, a*im+b*re
		k := float64(h)
		value += c
		slope -= k * q
		bend -= k * k * c
	}
	return real(s[0]) + math.Sqrt2*value, math.Sqrt2 * slope, math.Sqrt2 * bend
}

// PeakToPeak returns the span between the highest and the lowest of n samples
// of a period.
func PeakToPeak(s Spectrum, n int) float64 {
	low, high := math.Inf(1), math.Inf(-1)
	for k := range max(n, 1) {
		v := Value(s, 2*math.Pi*float64(k)/float64(max(n, 1)))
		low, high = min(low, v), max(high, v)
	}
	return high - low
}

// Period returns the length of a period in seconds for a frequency in Hz: 20
// ms at 50 Hz.
func Period(hz float64) float64 { return 1 / hz }

// SineRMS returns the rms value of a sine from its peak-to-peak span.
func SineRMS(peakToPeak float64) float64 { return peakToPeak / (2 * math.Sqrt2) }
