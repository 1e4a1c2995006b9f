// Package limits holds published limit sets as data and assesses spectra
// against them.
package limits

// Mark says how sure a published value is in this program: "found" (seen in
// public material), "memory" (recalled; to be confirmed against the document
// by a licensed user) or "derived" (recomputable).
type Mark string

// The marks.
const (
	Found   Mark = "found"
	Memory  Mark = "memory"
	Derived Mark = "derived"
)

// Row is one value beside its limit.
type Row struct {
	Quantity string  // "voltage" or "current"
	Order    int     // 0 for the total (THD, TDD)
	Index    string  // "THD", "TDD" or "" for a single order
	Phase    string  // "a", "b", "c": the worst phase, shown
	Value    float64 // per cent, of the base the rule names
	Limit    float64 // per cent
	Share    float64 // Value/Limit, 1 is at the limit
	Rule     string  // document, edition, table and row: "IEEE 519-2022 Table 2, Isc/IL 20<50, 11<=h<17"
	Mark     Mark
}

// Meets reports whether the value keeps the limit.
func (r Row) Meets() bool { return r.Value <= r.Limit }
