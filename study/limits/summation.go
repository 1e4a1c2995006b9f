package limits

import "math"

// SummationExponent returns the exponent of the second summation law at order
// h: 1 below order 5, 1.4 to order 10, 2 above (IEC/TR 61000-3-6:2008 clause
// 7.2.1, from memory, high confidence).
func SummationExponent(h int) float64 {
	switch {
	case h < 5:
		return 1
	case h <= 10:
		return 1.4
	}
	return 2
}

// Summate adds magnitudes of one order from several sources whose angles are
// not known: (sum |u|^a)^(1/a) with the exponent of that order.
func Summate(h int, magnitudes ...float64) float64 {
	a := SummationExponent(h)
	var sum float64
	for _, u := range magnitudes {
		sum += math.Pow(math.Abs(u), a)
	}
	return math.Pow(sum, 1/a)
}
