// Package duty tells what distortion does to equipment: transformers,
// capacitors, reactors, cables and neutrals, motors, generators, and telephone
// circuits nearby.
//
// Each function is one rule of a published document, named with its mark:
// found (seen in public material), memory (recalled; to be confirmed against
// the document by a licensed user) or derived (anyone can recompute it).
// Spectra are complex rms by order in A or V; all quantities are in SI units
// and ratios are fractions.
package duty

// Mark says how sure a rule's value is in this program.
type Mark string

// The marks.
const (
	Found   Mark = "found"
	Memory  Mark = "memory"
	Derived Mark = "derived"
)

// Check is one stress beside what the rule allows.
type Check struct {
	Quantity string  // "rms current", ...
	Value    float64 // as a fraction of the rating, or in the unit the quantity names
	Limit    float64
	Share    float64 // Value/Limit, 1 is at the limit
	Rule     string  // document, edition, clause
	Mark     Mark
}

// Meets reports whether the stress is allowed.
func (c Check) Meets() bool { return c.Value <= c.Limit }

func check(quantity string, value, limit float64, rule string, mark Mark) Check {
	return Check{Quantity: quantity, Value: value, Limit: limit, Share: value / limit, Rule: rule, Mark: mark}
}

// InputError says which value a rule cannot be applied to, and why.
type InputError struct{ Field, Problem string }

func (e *InputError) Error() string { return e.Field + " " + e.Problem }
