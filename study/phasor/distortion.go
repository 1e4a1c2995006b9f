package phasor

import (
	"math"
	"math/cmplx"
)

// RMS returns the root of the sum of squares over orders 0..H, in the unit of
// the spectrum.
func RMS(s Spectrum) float64 {
	var sum float64
	for _, v := range s {
		sum += square(v)
	}
	return math.Sqrt(sum)
}

// Distortion returns the root-sum-square of orders 2..H, in the unit of the
// spectrum.
func Distortion(s Spectrum) float64 {
	var sum float64
	for h := 2; h < len(s); h++ {
		sum += square(s[h])
	}
	return math.Sqrt(sum)
}

// THD returns the total harmonic distortion as a fraction: the root-sum-square
// of orders 2..H over the fundamental. Zero without a fundamental.
// (IEEE 519-2014 clause 3.1)
func THD(s Spectrum) float64 { return over(Distortion(s), cmplx.Abs(s.At(1))) }

// TDD returns the total demand distortion as a fraction: the same over the
// maximum demand load current il (A rms), which does not follow the load of
// the moment. Zero when il is zero. (IEEE 519-2014 clause 3.1)
func TDD(s Spectrum, il float64) float64 { return over(Distortion(s), il) }

// KFactor returns sum h^2 (Ih/Irms)^2 over orders 1..H (UL 1561). Zero for an
// empty spectrum.
func KFactor(s Spectrum) float64 {
	weighted, sum := weigh(s, 2)
	return over(weighted, sum)
}

// LossFactor returns sum h^e Ih^2 / sum Ih^2 over orders 1..H: with exponent 2
// the harmonic loss factor for winding eddy currents, with 0.8 that for other
// stray losses (IEEE C57.110-2018).
func LossFactor(s Spectrum, exponent float64) float64 {
	weighted, sum := weigh(s, exponent)
	return over(weighted, sum)
}

func weigh(s Spectrum, exponent float64) (weighted, sum float64) {
	for h := 1; h < len(s); h++ {
		v := square(s[h])
		sum += v
		weighted += math.Pow(float64(h), exponent) * v
	}
	return weighted, sum
}

// DistortionFactor returns I1/Irms, the part of the true power factor that is
// left at unity displacement and sinusoidal voltage.
func DistortionFactor(s Spectrum) float64 { return over(cmplx.Abs(s.At(1)), RMS(s)) }

func square(v complex128) float64 { return real(v)*real(v) + imag(v)*imag(v) }

func over(v, base float64) float64 {
	if base == 0 {
		return 0
	}
	return v / base
}
