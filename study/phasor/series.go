package phasor

import "math"

// SquareWave returns the spectrum, orders 0..order, of a square wave between
// +peak and -peak that is even about t = 0: odd orders at 4 peak/(pi h),
// alternating in sign (Fourier series).
func SquareWave(peak float64, order int) Spectrum {
	s := New(order)
	sign := 1.0
	for h := 1; h <= order; h += 2 {
		s[h] = complex(sign*4*peak/(math.Pi*float64(h))/math.Sqrt2, 0)
		sign = -sign
	}
	return s
}

// TriangleWave returns the spectrum, orders 0..order, of a symmetrical
// triangle wave with its crest at t = 0: odd orders at 8 peak/(pi h)^2
// (Fourier series).
func TriangleWave(peak float64, order int) Spectrum {
	s := New(order)
	for h := 1; h <= order; h += 2 {
		s[h] = complex(8*peak/(math.Pi*math.Pi*float64(h*h))/math.Sqrt2, 0)
	}
	return s
}

// HalfWaveSine returns the spectrum, orders 0..order, of a half-wave rectified
// sine with its crest at t = 0: a direct component peak/pi, half the
// fundamental, and even orders at 2 peak/(pi (h^2-1)), alternating in sign
// (Fourier series).
func HalfWaveSine(peak float64, order int) Spectrum {
	s := New(order)
	s[0] = complex(peak/math.Pi, 0)
	if order >= 1 {
		s[1] = complex(peak/2/math.Sqrt2, 0)
	}
	sign := 1.0
	for h := 2; h <= order; h += 2 {
		s[h] = complex(sign*2*peak/(math.Pi*float64(h*h-1))/math.Sqrt2, 0)
		sign = -sign
	}
	return s
}

// FullWaveSine returns the spectrum, orders 0..order of the sine's own
// frequency, of a full-wave rectified sine with a crest at t = 0: a direct
// component 2 peak/pi and even orders at 4 peak/(pi (h^2-1)) (Fourier series).
func FullWaveSine(peak float64, order int) Spectrum {
	s := HalfWaveSine(2*peak, order)
	if order >= 1 {
		s[1] = 0
	}
	return s
}
