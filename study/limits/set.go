package limits

import (
	"embed"
	"fmt"
	"math"
	"slices"
	"sync"
)

// Set is one limit set: a published one, or a user's. It is immutable and may
// be shared.
type Set struct {
	ID       string // word in the study file
	Title    string // words on screen and in print
	Document string
	Edition  string
	About    string // what it limits, of what base, and how sure its values are

	Percentiles []Percentile // how the document treats measured statistics
	Notches     []Notch      // commutation notches, where the document has them

	volts    *section // nil when it limits no voltage
	amperes  *section // nil when it limits no current in per cent
	inAmpere *section // nil when it limits no current in amperes

	appliance *appliance // limits of a piece of equipment, nil for a set of the network
}

// Percentile is a document's rule for one statistic of measured values.
type Percentile struct {
	Quantity   string  // "voltage" or "current"
	Statistic  string  // "daily 99th percentile of 3 s values"
	Multiplier float64 // of the limit
	Rule       string  // clause
	Mark       Mark
}

// Notch is a document's limit on commutation notches for one kind of system.
type Notch struct {
	System       string
	DepthPercent float64
	AreaVus      float64 // V us, at AtV
	AtV          float64 // line-to-line voltage the area is stated for
	Rule         string
	Mark         Mark
}

// AreaAt returns the notch area limit in V us at a line-to-line voltage in V:
// the stated one scaled by the voltage.
func (n Notch) AreaAt(v float64) float64 { return n.AreaVus * v / n.AtV }

// base says what per cent are of.
type base string

const (
	ofNominal     base = "nominal"     // the nominal voltage
	ofFundamental base = "fundamental" // the fundamental of the moment
	ofDemand      base = "demand"      // the maximum demand load current IL
	ofAmpere      base = "ampere"      // nothing: the limit is a current
)

func (b base) words() string {
	switch b {
	case ofNominal:
		return "of the nominal voltage"
	case ofDemand:
		return "of IL"
	case ofAmpere:
		return "in amperes"
	}
	return "of the fundamental"
}

// section is all a set says about voltage, or about current.
type section struct {
	of       base
	classes  []class
	direct   *directRule
	lowOrder []allowance
}

// class is the part of a table that holds for one range of voltage and of
// short-circuit ratio, laid out by order.
type class struct {
	aboveV, fromV, toV  float64 // above, at or above; up to and including
	fromRatio, toRatio  float64 // Isc/IL: at or above, below
	toRatioIncluded     bool
	limit               []float64 // by order, per cent; 0 where there is none
	rule                []string  // by order
	mark                []Mark    // by order
	total               float64   // THD or TDD, per cent; 0 where there is none
	totalTo             int       // highest order in the total
	totalRule, fullName string
	totalMark           Mark
}

func (c *class) top() int { return len(c.limit) - 1 }

type directRule struct {
	rule string
	mark Mark
}

// allowance raises the limits of all but the listed orders while those stay
// within a share of theirs.
type allowance struct {
	orders     []int
	share      float64
	multiplier float64
	rule       string
	mark       Mark
}

// in reports whether v (V) lies in the class.
func (c *class) in(v float64) bool { return v > c.aboveV && v >= c.fromV && v <= c.toV }

// holds reports whether a short-circuit ratio lies in the class.
func (c *class) holds(ratio float64) bool {
	return ratio >= c.fromRatio && (ratio < c.toRatio || c.toRatioIncluded && ratio == c.toRatio)
}

// needsRatio reports whether any class depends on the short-circuit ratio.
func (s *section) needsRatio() bool {
	return slices.ContainsFunc(s.classes, func(c class) bool { return c.fromRatio > 0 || !math.IsInf(c.toRatio, 1) })
}

//go:embed data/*.json
var data embed.FS

// published lists the embedded sets in the order of a list on screen.
var published = []string{
	"ieee519-2022", "ieee519-2014",
	"iec61000-2-4-class1", "iec61000-2-4-class2", "iec61000-2-4-class3",
	"iec61000-2-2", "iec61000-3-6-mv", "iec61000-3-6-hv",
	"en50160-lv", "en50160-mv",
	"iec61000-3-2-class-a", "iec61000-3-2-class-b", "iec61000-3-2-class-c", "iec61000-3-2-class-d",
	"iec61000-3-12-other", "iec61000-3-12-balanced", "iec61000-3-12-balanced-abc",
}

// sets reads the embedded sets once. A set that does not read is a fault of
// the build, which a test catches.
var sets = sync.OnceValue(func() []*Set {
	list := make([]*Set, 0, len(published))
	for _, id := range published {
		text, err := data.ReadFile("data/" + id + ".json")
		if err != nil {
			panic(fmt.Sprintf("limits: %v", err))
		}
		s, err := parse(text, false)
		if err != nil {
			panic(fmt.Sprintf("limits: %s: %v", id, err))
		}
		list = append(list, s)
	}
	return list
})

// Sets returns every published set, in the order of a list on screen.
func Sets() []*Set { return slices.Clone(sets()) }

// Lookup returns the published set of an identifier.
func Lookup(id string) (*Set, bool) {
	for _, s := range sets() {
		if s.ID == id {
			return s, true
		}
	}
	return nil, false
}

// LimitsVoltage reports whether the set limits any voltage.
func (s *Set) LimitsVoltage() bool { return s.volts != nil }

// LimitsCurrent reports whether the set limits any current.
func (s *Set) LimitsCurrent() bool { return s.amperes != nil || s.inAmpere != nil }

// MaxOrder returns the highest order that the set limits or takes into a
// total. A study that computes fewer orders cannot speak for the rest.
func (s *Set) MaxOrder() int {
	top := 0
	for _, part := range []*section{s.volts, s.amperes, s.inAmpere} {
		if part != nil {
			for i := range part.classes {
				top = max(top, part.classes[i].top())
			}
		}
	}
	if s.appliance != nil {
		top = max(top, 40)
	}
	return top
}
