package limits

import (
	"bytes"
	_ "embed"
	"encoding/json"
	"fmt"
)

// Set is one published (or user's) limit set.
type Set struct {
	ID       string `json:"id"`
	Title    string `json:"title"`
	Document string `json:"document"`
	Edition  string `json:"edition"`
	About    string `json:"about"`
	// Order is the highest order that the set's totals take in.
	Order   int             `json:"order"`
	Volts   []VoltageTable  `json:"voltage,omitempty"`
	Amperes *CurrentSection `json:"current,omitempty"`
}

// VoltageTable holds the voltage limits of one voltage class (V, line to
// line; above the lower bound, up to and including the upper).
type VoltageTable struct {
	AboveV     float64    `json:"aboveV"`
	ToV        *float64   `json:"toV"` // nil: no upper bound
	Table      string     `json:"table"`
	Each       float64    `json:"each,omitempty"`   // one limit for every order, per cent
	Orders     []OrderRow `json:"orders,omitempty"` // or limits by order
	Total      float64    `json:"total"`            // THD, per cent
	Mark       Mark       `json:"mark"`
	Confidence string     `json:"confidence,omitempty"`
}

// OrderRow is the limit a (n/h) + b per cent for the orders of one kind in a
// range: "odd" (not divisible by three), "triplen" (odd) or "even".
type OrderRow struct {
	From int     `json:"from"`
	To   int     `json:"to"`
	Kind string  `json:"kind"`
	A    float64 `json:"a,omitempty"`
	N    float64 `json:"n,omitempty"`
	B    float64 `json:"b,omitempty"`
}

// CurrentSection holds current limits in per cent of the maximum demand load
// current, by voltage class and short-circuit ratio Isc/IL.
type CurrentSection struct {
	Bands  [][2]int       `json:"bands"` // first and last order of each band
	Even   []EvenRule     `json:"even"`
	Tables []CurrentTable `json:"tables"`
}

// EvenRule gives even orders a share of their band's limit, up to an order.
type EvenRule struct {
	ToOrder int     `json:"toOrder"`
	Share   float64 `json:"share"`
}

// CurrentTable is the current table of one voltage class.
type CurrentTable struct {
	AboveV     float64      `json:"aboveV"`
	ToV        *float64     `json:"toV"`
	Table      string       `json:"table"`
	Rows       []CurrentRow `json:"rows"`
	Mark       Mark         `json:"mark"`
	Confidence string       `json:"confidence,omitempty"`
}

// CurrentRow holds the limits by band for one range of Isc/IL.
type CurrentRow struct {
	FromRatio float64   `json:"fromRatio"`
	ToRatio   *float64  `json:"toRatio"`
	Limits    []float64 `json:"limits"`
	Total     float64   `json:"total"` // TDD
}

//go:embed data/sets.json
var published []byte

var sets = mustParse(published)

func mustParse(data []byte) []*Set {
	var list []*Set
	dec := json.NewDecoder(bytes.NewReader(data))
	dec.DisallowUnknownFields()
	if err := dec.Decode(&list); err != nil {
		panic("limits: the embedded sets do not parse: " + err.Error())
	}
	return list
}

// Sets returns every published set. The sets are shared and must not be
// changed.
func Sets() []*Set { return sets }

// Lookup returns the set of an identifier.
func Lookup(id string) (*Set, bool) {
	for _, s := range sets {
		if s.ID == id {
			return s, true
		}
	}
	return nil, false
}

func (r OrderRow) holds(h int) bool {
	if h < r.From || h > r.To {
		return false
	}
	switch r.Kind {
	case "even":
		return h%2 == 0
	case "triplen":
		return h%2 == 1 && h%3 == 0
	}
	return h%2 == 1 && h%3 != 0
}

func (r OrderRow) at(h int) float64 { return r.A*r.N/float64(h) + r.B }

func (r OrderRow) words(h int) string {
	if r.A == 0 {
		return fmt.Sprintf("order %d", h)
	}
	if r.B == 0 {
		return fmt.Sprintf("order %d: %.4g x %.4g/h", h, r.A, r.N)
	}
	return fmt.Sprintf("order %d: %.4g x %.4g/h %+.4g", h, r.A, r.N, r.B)
}

func inClass(v, above float64, to *float64) bool { return v > above && (to == nil || v <= *to) }
