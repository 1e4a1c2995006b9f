package phasor

import "math"

// square returns |v|^2.
func square(v complex128) float64 { return real(v)*real(v) + imag(v)*imag(v) }

// distortion2 returns the sum of |X_h|^2 over orders 2 and above.
func distortion2(s Spectrum) float64 {
	var sum float64
	for h := 2; h < len(s); h++ {
		sum += square(s[h])
	}
	return sum
}

// THD returns the total harmonic distortion, orders 2 and above over order 1,
// as a fraction: 0.05 is five per cent (IEEE 519-2014 clause 3.1; IEC
// 61000-4-7 clause 3.3). It is 0 for a spectrum without a fundamental, where
// it is not defined.
func THD(s Spectrum) float64 {
	base := square(s.At(1))
	if base == 0 {
		return 0
	}
	return math.Sqrt(distortion2(s) / base)
}

// TDD returns the total demand distortion of a current: orders 2 and above
// over the maximum demand current demandA in ampere, as a fraction (IEEE
// 519-2014 clause 3.1). It is 0 when demandA is not positive.
func TDD(s Spectrum, demandA float64) float64 {
	if !(demandA > 0) {
		return 0
	}
	return math.Sqrt(distortion2(s)) / demandA
}

// RMS returns the true rms value with the direct component, in the unit of s.
func RMS(s Spectrum) float64 {
	var sum float64
	for _, v := range s {
		sum += square(v)
	}
	return math.Sqrt(sum)
}

// Distortion returns the rms value of orders 2 and above, in the unit of s.
func Distortion(s Spectrum) float64 { return math.Sqrt(distortion2(s)) }

// Crest returns the crest factor, peak over true rms: sqrt(2) for a sine. It
// is 0 for a spectrum that is zero throughout.
func Crest(s Spectrum) float64 {
	rms := RMS(s)
	if rms == 0 {
		return 0
	}
	return Peak(s) / rms
}

// Weighted returns sqrt(sum (w(h) |X_h|)^2) over orders 1 and above, divided
// by the rms value of the same orders: the form of the telephone influence
// factor and of other weighted indices. It is 0 for a zero spectrum.
func Weighted(s Spectrum, w func(h int) float64) float64 {
	var sum, base float64
	for h := 1; h < len(s); h++ {
		k, p := w(h), square(s[h])
		sum += k * k * p
		base += p
	}
	if base == 0 {
		return 0
	}
	return math.Sqrt(sum / base)
}
