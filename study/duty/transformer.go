package duty

import (
	"fmt"
	"math"

	"quietbus/study/phasor"
)

// StrayLoss is a transformer's stray load loss at rated current and order 1,
// per unit of its I^2 R loss.
type StrayLoss struct {
	Eddy  float64 // winding eddy loss, P_EC-R
	Other float64 // other stray loss in tank and clamps, P_OSL-R; 0 for dry types
}

// SplitStray divides a total stray loss (per unit of the I^2 R loss) between
// windings and other parts: a third is winding eddy loss in oil, two thirds in
// dry types (IEEE C57.110-2018, from memory, high).
func SplitStray(total float64, dry bool) StrayLoss {
	if dry {
		return StrayLoss{Eddy: 0.67 * total, Other: 0.33 * total}
	}
	return StrayLoss{Eddy: 0.33 * total, Other: 0.67 * total}
}

// LoadLoss returns the load loss of a transformer, per unit of its rated I^2 R
// loss, for the spectrum of its current and its rated rms current (A):
// I^2 (1 + F_HL P_EC-R + F_HL-STR P_OSL-R) (IEEE C57.110-2018, from memory,
// medium; F_HL found).
func LoadLoss(current phasor.Spectrum, ratedA float64, loss StrayLoss) float64 {
	pu := phasor.RMS(current) / ratedA
	return pu * pu * (1 + phasor.LossFactor(current)*loss.Eddy + phasor.StrayLossFactor(current)*loss.Other)
}

// PermissibleLoad returns the rms current, per unit of the rated one, at which
// a transformer carrying this spectrum has its rated load loss:
// sqrt(P_LL-R/(1 + F_HL P_EC-R + F_HL-STR P_OSL-R)). Without other stray loss
// it is the rule for dry types (IEEE C57.110-2018, from memory, high). It is 1
// for a sine.
func PermissibleLoad(current phasor.Spectrum, loss StrayLoss) float64 {
	return math.Sqrt((1 + loss.Eddy + loss.Other) / (1 + phasor.LossFactor(current)*loss.Eddy + phasor.StrayLossFactor(current)*loss.Other))
}

// RiseFactor returns by what factor the top-oil and the winding rise of a
// liquid-filled transformer grow, from load loss and no-load loss (both in the
// same unit) at rated load and now: ((P_LL+P_NL)/(P_LL-R+P_NL))^0.8 (IEEE
// C57.110-2018, from memory, medium).
func RiseFactor(loadLoss, ratedLoadLoss, noLoadLoss float64) float64 {
	return math.Pow((loadLoss+noLoadLoss)/(ratedLoadLoss+noLoadLoss), 0.8)
}

// FactorK returns the European factor K by which a transformer is oversized:
// K = sqrt(1 + e/(1+e) (I1/I)^2 sum_{h>=2} h^q (Ih/I1)^2); it may carry its
// rated power over K. e is eddy over dc loss at the fundamental (0.1 where not
// known), q is 1.7 for wire windings and 1.5 for foil low voltage (EN
// 50464-3:2007, BS 7821-4, from memory, high). It is not the K of UL 1561.
func FactorK(current phasor.Spectrum, e, q float64) float64 {
	var sum, all float64
	for h := 1; h < len(current); h++ {
		i2 := square(current[h])
		all += i2
		if h >= 2 && i2 > 0 {
			sum += math.Pow(float64(h), q) * i2
		}
	}
	if all == 0 {
		return 1
	}
	return math.Sqrt(1 + e/(1+e)*sum/all)
}

// kRatings are the K ratings in which transformers are built (UL 1561 practice,
// from memory, medium).
var kRatings = [...]float64{1, 4, 9, 13, 20, 30, 40, 50}

// KRating returns the smallest K rating that covers a K factor. It fails above
// the highest, 50.
func KRating(k float64) (float64, error) {
	for _, r := range kRatings {
		if k <= r {
			return r, nil
		}
	}
	return 0, &InputError{"K factor", fmt.Sprintf("is %.3g; there is no K rating above %g", k, kRatings[len(kRatings)-1])}
}

// Transformer checks the rms current of a transformer with this spectrum
// against what IEEE C57.110-2018 lets it carry, and the load loss that comes
// of it against the rated one.
func Transformer(current phasor.Spectrum, ratedA float64, loss StrayLoss) ([]Check, error) {
	if !(ratedA > 0) {
		return nil, &InputError{"rated current", "is not known; the load cannot be compared with it"}
	}
	const rule = "IEEE C57.110-2018, permissible load"
	return []Check{
		check("rms current, of rated", phasor.RMS(current)/ratedA, PermissibleLoad(current, loss), rule, Memory),
		check("load loss, of rated", LoadLoss(current, ratedA, loss)/(1+loss.Eddy+loss.Other), 1, "IEEE C57.110-2018, load loss", Memory),
	}, nil
}

func square(v complex128) float64 { return real(v)*real(v) + imag(v)*imag(v) }
