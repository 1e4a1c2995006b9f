// Package limits holds published limit sets as data and assesses spectra
// against them.
//
// No value was read in a licensed copy of a standard: each block of data
// carries a Mark, and rows marked Memory are to be confirmed against the
// document before conformity is claimed on them.
package limits

// Mark says how sure a published value is in this program: "found" (seen in
// public material), "memory" (recalled; to be confirmed against the document
// by a licensed user), "derived" (recomputable) or "given" (typed by the user
// from a letter or document of his own).
type Mark string

// The marks.
const (
	Found   Mark = "found"
	Memory  Mark = "memory"
	Derived Mark = "derived"
	Given   Mark = "given"
)

// weaker returns the less sure of two marks.
func weaker(a, b Mark) Mark {
	if a == Memory || b == "" {
		return a
	}
	if b == Memory || a == "" || a == Derived {
		return b
	}
	return a
}

// Percent is the unit of a limit that is a share of something.
const Percent = "%"

// Row is one value beside its limit.
type Row struct {
	Quantity string  // "voltage" or "current"
	Order    int     // 0 for a total (THD, TDD) and for the direct component
	Index    string  // "THD", "TDD" or "" for a single order
	Phase    string  // "a", "b", "c": the worst phase, shown
	Value    float64 // in Unit; per cent are of the base the rule names
	Limit    float64 // in Unit; 0 forbids altogether
	Unit     string  // Percent or "A"
	Share    float64 // Value/Limit, 1 is at the limit; 1 + Value where Limit is 0
	Rule     string  // document, edition, table and row: "IEEE 519-2022 Table 2, Isc/IL 20<50, 11<=h<17, of IL"
	Mark     Mark
}

// Meets reports whether the value keeps the limit.
func (r Row) Meets() bool { return r.Value <= r.Limit }
