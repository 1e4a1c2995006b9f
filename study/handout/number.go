package handout

import (
	"math"
	"strconv"
	"strings"
)

// figures3 writes v with three significant digits and no exponent, as the
// tables show it.
func figures3(v float64) string { return significant(v, 3) }

// significant writes v with n significant digits and no exponent; whole
// numbers beyond that are kept in full.
func significant(v float64, n int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "–"
	}
	if v == 0 {
		return "0"
	}
	decimals := n - 1 - int(math.Floor(math.Log10(math.Abs(v))+1e-12))
	if decimals < 0 {
		decimals = 0
	}
	if decimals > 9 {
		return "0"
	}
	text := strconv.FormatFloat(v, 'f', decimals, 64)
	// 9.996 has become 10.00: one digit too many
	if r, _ := strconv.ParseFloat(text, 64); decimals > 0 && digitsBefore(r) > digitsBefore(v) {
		text = strconv.FormatFloat(v, 'f', decimals-1, 64)
	}
	return minus(text)
}

func digitsBefore(v float64) int {
	return int(math.Floor(math.Log10(math.Abs(v)) + 1e-12))
}

// minus puts a true minus sign for the hyphen of a negative number.
func minus(text string) string {
	return strings.Replace(text, "-", "−", 1)
}

// short writes a number of the study file as it was typed.
func short(v float64) string { return minus(strconv.FormatFloat(v, 'f', -1, 64)) }

// money writes an amount in whole units, thousands apart.
func money(v float64) string {
	digits := strconv.FormatFloat(math.Round(v), 'f', 0, 64)
	for i := len(digits) - 3; i > 0 && digits[i-1] != '-'; i -= 3 {
		digits = digits[:i] + " " + digits[i:]
	}
	return minus(digits)
}

// engineering scales v so that its number lies between 1 and 1000, and returns
// the number with three digits and the prefixed unit.
func engineering(v float64, unit string) (number, prefixed string) {
	for _, p := range [...]struct {
		factor float64
		prefix string
	}{{1e6, "M"}, {1e3, "k"}, {1, ""}, {1e-3, "m"}, {1e-6, "µ"}, {1e-9, "n"}, {1e-12, "p"}} {
		if math.Abs(v) >= p.factor*0.99995 {
			return figures3(v / p.factor), p.prefix + unit
		}
	}
	return "0", unit
}
