package study

import "quietbus/study/filter"

// IsFilter reports whether a kind of measure or filter is a passive shunt
// filter that is rated by kvar, order and quality.
func IsFilter(kind string) bool {
	switch kind {
	case SingleTuned, DoubleTuned, FirstOrder, HighPass, ThirdOrder, CType:
		return true
	}
	return false
}

// KindTitle returns what a kind of measure is called on screen and in print.
func KindTitle(kind string) string {
	switch kind {
	case SingleTuned:
		return "Single-tuned filter"
	case DoubleTuned:
		return "Double-tuned filter"
	case FirstOrder:
		return "First-order high-pass"
	case HighPass:
		return "Second-order high-pass"
	case ThirdOrder:
		return "Third-order high-pass"
	case CType:
		return "C-type filter"
	case DetuneBank:
		return "Detuning reactor"
	case RemoveBank:
		return "Bank taken out"
	case ActiveFilter:
		return "Active filter"
	case LineReactor:
		return "Line reactor"
	case LowPassRC:
		return "R-C low-pass"
	case LowPassLC:
		return "L-C low-pass"
	}
	return kind
}

// passiveFilter designs a filter of output var at v volts line to line.
func passiveFilter(kind string, output, v, f1, order, order2, q float64) (*filter.Branch, error) {
	switch kind {
	case DoubleTuned:
		return filter.DoubleTuned(output, v, f1, order, order2, or(q, 40))
	case FirstOrder:
		return filter.FirstOrder(output, v, f1, order)
	case HighPass:
		return filter.HighPass(output, v, f1, order, or(q, 3))
	case ThirdOrder:
		return filter.ThirdOrder(output, v, f1, order, or(q, 3))
	case CType:
		return filter.CType(output, v, f1, order, or(q, 2))
	}
	return filter.SingleTuned(output, v, f1, order, or(q, 40))
}
