package study

import (
	"fmt"
	"math"
	"strings"

	"quietbus/study/limits"
)

// LimitSet holds limits that the user states himself, typed or pasted from a
// letter of the network operator. An assessment point chooses it by its name.
type LimitSet struct {
	Named
	Document    string      `json:"document,omitempty" label:"Document" help:"Letter or document that states the limits, as it shall be printed."`
	Date        string      `json:"date,omitempty" label:"Date" help:"Date of the document, as it shall be printed."`
	VoltageOf   string      `json:"voltageOf,omitempty" label:"Voltages are of" choices:"nominal|fundamental" default:"nominal" help:"Whether voltage limits are per cent of the nominal voltage or of the fundamental of the moment."`
	THDPercent  float64     `json:"thdPercent,omitempty" label:"Voltage THD" unit:"%" range:"(0,100]" typical:"1..10" default:"not limited" help:"Limit of the total harmonic distortion of the voltage."`
	TDDPercent  float64     `json:"tddPercent,omitempty" label:"Current TDD" unit:"%" range:"(0,100]" typical:"1..25" default:"not limited" help:"Limit of the total demand distortion of the current, of IL."`
	Rows        []LimitLine `json:"rows,omitempty" label:"Limits" help:"One row for each order."`
	NotReadable []SaidLine  `json:"notReadable,omitempty" label:"Not readable" help:"Lines of the document from which no limit could be read; they are listed as not assessed."`
	Noted
}

// LimitLine is one order of a user's limits. A column that other orders fill
// and this one leaves empty is listed as not assessed.
type LimitLine struct {
	Order          int      `json:"order" label:"Order" range:"[2,100]" need:"yes" help:"Harmonic order."`
	VoltagePercent *float64 `json:"voltagePercent,omitempty" label:"Voltage" unit:"%" range:"(0,100]" help:"Limit of the voltage."`
	CurrentPercent *float64 `json:"currentPercent,omitempty" label:"Current" unit:"% of IL" range:"(0,1000]" help:"Limit of the current in per cent of the maximum demand current."`
	CurrentA       *float64 `json:"currentA,omitempty" label:"Current" unit:"A" range:"(0,1e6]" help:"Limit of the current in amperes."`
	Says           string   `json:"says,omitempty" label:"Says instead" help:"What the document says where a number should stand."`
}

// SaidLine is a line of a document from which no limit could be read.
type SaidLine struct {
	Line   string `json:"line" label:"Line" need:"yes" help:"The line as it was pasted."`
	Reason string `json:"reason,omitempty" label:"Because" help:"Why it could not be read."`
}

// KindLimitSet is the kind of a user's own limits.
const KindLimitSet Kind = "limitSet"

// LimitSetOf returns the limit set of an identifier: a published one, or one
// of the study by its name.
func (s *Study) LimitSetOf(id string) (*limits.Set, bool) {
	if set, ok := limits.Lookup(id); ok {
		return set, true
	}
	for i := range s.LimitSets {
		if s.LimitSets[i].Name == id {
			return s.LimitSets[i].set(), true
		}
	}
	return nil, false
}

// set returns the limits as study/limits assesses them.
func (x *LimitSet) set() *limits.Set {
	own := limits.Own{ID: x.Name, Title: x.Name, Document: x.Source(), About: x.Remark,
		OfFundamental: x.VoltageOf == "fundamental", THDPercent: x.THDPercent, TDDPercent: x.TDDPercent}
	for _, r := range x.Rows {
		own.Lines = append(own.Lines, limits.OwnLine{Order: r.Order, VoltagePercent: stated(r.VoltagePercent), CurrentPercent: stated(r.CurrentPercent), CurrentA: stated(r.CurrentA)})
	}
	return own.Set()
}

func stated(v *float64) float64 {
	if v == nil {
		return math.NaN()
	}
	return *v
}

// Source returns the document and its date as they are printed.
func (x *LimitSet) Source() string {
	switch {
	case x.Document == "":
		return x.Date
	case x.Date == "":
		return x.Document
	}
	return x.Document + ", " + x.Date
}

// current reports whether the row limits the current, in whichever unit.
func (r *LimitLine) current() bool { return r.CurrentPercent != nil || r.CurrentA != nil }

// Gaps lists every part of the limits that cannot be assessed, and why.
func (x *LimitSet) Gaps() []string { return x.gaps(true) }

// gaps lists what of the limits cannot be assessed, and why: rows without a
// value in a column that others fill, and lines that could not be read. Currents
// are left out when the point has none.
func (x *LimitSet) gaps(currents bool) (out []string) {
	volts, amperes := false, false
	for i := range x.Rows {
		volts = volts || x.Rows[i].VoltagePercent != nil
		amperes = amperes || x.Rows[i].current()
	}
	for i := range x.Rows {
		r := &x.Rows[i]
		because := "the document states no limit"
		if r.Says != "" {
			because = fmt.Sprintf("the document says %q instead of a limit", r.Says)
		}
		if volts && r.VoltagePercent == nil {
			out = append(out, fmt.Sprintf("%s harmonic voltage: %s", Ordinal(r.Order), because))
		}
		if currents && amperes && !r.current() {
			out = append(out, fmt.Sprintf("%s harmonic current: %s", Ordinal(r.Order), because))
		}
		if !volts && !amperes {
			out = append(out, fmt.Sprintf("%s harmonic: %s", Ordinal(r.Order), because))
		}
	}
	for _, l := range x.NotReadable {
		because := l.Reason
		if because == "" {
			because = "no limit could be read from it"
		}
		out = append(out, fmt.Sprintf("the line %q: %s", l.Line, because))
	}
	return out
}

// limitSets checks the users' own limits.
func (c *checker) limitSets() {
	for i := range c.study.LimitSets {
		x := &c.study.LimitSets[i]
		if _, taken := limits.Lookup(x.Name); taken {
			c.add(x.Name, "name", "is the identifier of a published limit set", "choose another name")
		}
		some := x.THDPercent > 0 || x.TDDPercent > 0
		for n := range x.Rows {
			r := &x.Rows[n]
			some = some || r.VoltagePercent != nil || r.current()
			if r.CurrentPercent != nil && r.CurrentA != nil {
				c.add(x.Name, "rows", fmt.Sprintf("row %d: the current of order %d is limited twice, in per cent and in amperes", n+1, r.Order), "leave the one that the document states")
			}
		}
		if !some {
			c.add(x.Name, "rows", "there is no limit in it", "type or paste at least one, or state a total")
		}
	}
}

// usesSet reports whether a field holds the name of a limit set, which follows
// when a set of the study is renamed.
func usesSet(kind Kind, f *Field) bool { return kind == KindAssessment && f.Key == "set" }

// LimitSetNames lists the study's own limit sets.
func (s *Study) LimitSetNames() []string {
	var out []string
	for i := range s.LimitSets {
		if name := strings.TrimSpace(s.LimitSets[i].Name); name != "" {
			out = append(out, name)
		}
	}
	return out
}

// limitSet returns the set of an assessment, and the user's own that it was made
// from.
func (m *model) limitSet(a *Assessment) (set *limits.Set, own *LimitSet, ok bool) {
	if set, ok := limits.Lookup(a.Set); ok {
		return set, nil, true
	}
	for i := range m.plan.study.LimitSets {
		if x := &m.plan.study.LimitSets[i]; x.Name == a.Set {
			if set = m.plan.sets[x.Name]; set == nil {
				set = x.set()
			}
			return set, x, true
		}
	}
	return nil, nil, false
}

// beyond says that a set limits orders which the study does not compute; ""
// when it does compute them all. What is not computed must not count as met.
func beyond(set *limits.Set, order int) string {
	top := set.MaxOrder()
	if top <= order {
		return ""
	}
	return fmt.Sprintf("orders %d to %d: %s limits them, but the study computes to order %d; raise its highest order", order+1, top, set.Title, order)
}
