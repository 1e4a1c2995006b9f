package phasor

import (
	"fmt"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/dsp/fourier"
)

// Synthesize returns n equidistant samples of one period, the first at t = 0:
// x(t) = X_0 + sum sqrt(2) |X_h| cos(h w t + arg X_h). The samples are written
// to dst when it is long enough; nil allocates.
func Synthesize(s Spectrum, n int, dst []float64) []float64 {
	if cap(dst) < n {
		dst = make([]float64, n)
	}
	dst = dst[:n]
	for i := range dst {
		dst[i] = real(s.At(0))
	}
	for h := 1; h < len(s); h++ {
		if s[h] == 0 {
			continue
		}
		turn := cmplx.Rect(1, 2*math.Pi*float64(h)/float64(n))
		v := s[h] * math.Sqrt2
		for i := range dst {
			dst[i] += real(v)
			v *= turn
		}
	}
	return dst
}

// Instant returns x at angle wt (rad) of the fundamental.
func Instant(s Spectrum, wt float64) float64 {
	x := real(s.At(0))
	for h := 1; h < len(s); h++ {
		if s[h] != 0 {
			x += math.Sqrt2 * real(s[h]*cmplx.Rect(1, float64(h)*wt))
		}
	}
	return x
}

// Peak returns the largest instantaneous magnitude of the waveform, refined
// between samples by golden section.
func Peak(s Spectrum) float64 {
	var buffer [512]float64
	n := len(buffer)
	best, at := 0.0, 0
	for i, x := range Synthesize(s, n, buffer[:]) {
		if math.Abs(x) > best {
			best, at = math.Abs(x), i
		}
	}
	step := 2 * math.Pi / float64(n)
	const golden = 0.6180339887498949
	lo, hi := (float64(at)-1)*step, (float64(at)+1)*step
	for range 40 {
		a, b := hi-golden*(hi-lo), lo+golden*(hi-lo)
		if math.Abs(Instant(s, a)) > math.Abs(Instant(s, b)) {
			hi = b
		} else {
			lo = a
		}
	}
	return math.Max(best, math.Abs(Instant(s, (lo+hi)/2)))
}

// Crest returns the crest factor Peak/RMS, zero for an empty spectrum.
func Crest(s Spectrum) float64 { return over(Peak(s), RMS(s)) }

// Analyze returns orders 0..order of samples that span a whole number of
// cycles of the fundamental, by discrete Fourier transform. It fails when
// there are too few samples to tell the highest order (at least 2 order + 1 a
// cycle), when cycles is below one, and on values that are no numbers.
func Analyze(samples []float64, cycles, order int) (Spectrum, error) {
	if cycles < 1 {
		return nil, fmt.Errorf("cycles is %d; at least one whole cycle is needed", cycles)
	}
	if len(samples) < cycles*(2*order+1) {
		return nil, fmt.Errorf("%d samples over %d cycles cannot tell order %d; at least %d are needed", len(samples), cycles, order, cycles*(2*order+1))
	}
	for i, x := range samples {
		if math.IsNaN(x) || math.IsInf(x, 0) {
			return nil, fmt.Errorf("sample %d is not a number", i)
		}
	}
	c := fourier.NewFFT(len(samples)).Coefficients(nil, samples)
	s := New(order)
	scale := complex(1/float64(len(samples)), 0)
	s[0] = complex(real(c[0])*real(scale), 0)
	for h := 1; h <= order; h++ {
		s[h] = c[h*cycles] * scale * math.Sqrt2
	}
	return s, nil
}
