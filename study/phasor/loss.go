package phasor

import "math"

// LossFactor returns the harmonic loss factor for winding eddy losses, F_HL =
// sum h^2 I_h^2 / sum I_h^2 over orders 1 and above (IEEE C57.110-2018). It
// is 1 for a sine and 0 for a zero spectrum.
func LossFactor(s Spectrum) float64 { return weightedSquares(s, 2) }

// StrayLossFactor returns the harmonic loss factor for other stray losses,
// F_HL-STR = sum h^0.8 I_h^2 / sum I_h^2 over orders 1 and above (IEEE
// C57.110-2018).
func StrayLossFactor(s Spectrum) float64 { return weightedSquares(s, 0.8) }

func weightedSquares(s Spectrum, exponent float64) float64 {
	var sum, base float64
	for h := 1; h < len(s); h++ {
		p := square(s[h])
		if p == 0 {
			continue
		}
		base += p
		if exponent == 2 {
			sum += float64(h*h) * p
		} else {
			sum += math.Pow(float64(h), exponent) * p
		}
	}
	if base == 0 {
		return 0
	}
	return sum / base
}

// KFactor returns K = sum (I_h/I)^2 h^2 with the current's own rms value as I:
// the K of a transformer carrying exactly its rated rms current (UL 1561).
func KFactor(s Spectrum) float64 { return LossFactor(s) }

// KFactorRated returns K = sum (I_h/I_rated)^2 h^2 for a rated current in
// ampere (UL 1561). It is 0 when ratedA is not positive.
func KFactorRated(s Spectrum, ratedA float64) float64 {
	if !(ratedA > 0) {
		return 0
	}
	var sum float64
	for h := 1; h < len(s); h++ {
		sum += float64(h*h) * square(s[h])
	}
	return sum / (ratedA * ratedA)
}
