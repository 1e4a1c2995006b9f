package phasor

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/dsp/fourier"
)

// SampleError says why a run of samples cannot be analysed.
type SampleError struct {
	Problem string // what is wrong
	Remedy  string // what to do
}

func (e *SampleError) Error() string { return "samples: " + e.Problem + "; " + e.Remedy }

// Analyze returns the spectrum, orders 0..order, of evenly spaced samples that
// span exactly the given number of whole cycles. Order h is the spectral line
// h*cycles of the discrete Fourier transform with a rectangular window (IEC
// 61000-4-7 clause 3.2). The first sample is at t = 0.
//
// It returns a *SampleError when there are too few samples for the order, a
// sample is not a number, or the counts are not positive.
func Analyze(samples []float64, cycles, order int) (Spectrum, error) {
	n := len(samples)
	switch {
	case cycles < 1:
		return nil, &SampleError{fmt.Sprintf("the window spans %d cycles", cycles), "take one whole cycle or more"}
	case order < 1:
		return nil, &SampleError{fmt.Sprintf("the highest order wanted is %d", order), "ask for order 1 or more"}
	case n <= 2*order*cycles:
		return nil, &SampleError{
			fmt.Sprintf("%d samples over %d cycle(s) reach only to order %d, not to %d", n, cycles, max(0, (n-1)/(2*cycles)), order),
			fmt.Sprintf("record more than %d samples a cycle or ask for fewer orders", 2*order),
		}
	}
	for i, v := range samples {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, &SampleError{fmt.Sprintf("sample %d is not a finite number", i+1), "correct or leave out the record"}
		}
	}
	lines := fourier.NewFFT(n).Coefficients(nil, samples)
	s := New(order)
	s[0] = complex(real(lines[0])/float64(n), 0)
	scale := complex(math.Sqrt2/float64(n), 0)
	for h := 1; h <= order; h++ {
		s[h] = lines[h*cycles] * scale
	}
	return s, nil
}
