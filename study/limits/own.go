package limits

import (
	"fmt"
	"math"
)

// Own is a limit set that a user states himself, as from a letter of the
// network operator: one table, for the point that it was written for.
type Own struct {
	ID       string // word in the study file
	Title    string // words on screen and in print
	Document string // letter or document, with its date
	About    string

	OfFundamental bool    // voltages are per cent of the fundamental rather than of the nominal voltage
	THDPercent    float64 // 0: not limited
	TDDPercent    float64 // of IL; 0: not limited
	Lines         []OwnLine
}

// OwnLine is one order of an own limit set; NaN where the line says nothing.
type OwnLine struct {
	Order          int
	VoltagePercent float64
	CurrentPercent float64 // of IL
	CurrentA       float64
}

// Set returns the limit set of o. Its rows bear the mark Given. Lines whose
// order lies outside 2 to 100 and values that are not above zero are left out:
// they are for the caller to report.
func (o Own) Set() *Set {
	s := &Set{ID: o.ID, Title: o.Title, Document: o.Document, About: o.About}
	name := o.Title
	if o.Document != "" {
		name += " (" + o.Document + ")"
	}
	of := ofNominal
	if o.OfFundamental {
		of = ofFundamental
	}
	s.volts = o.section(name, of, o.THDPercent, func(l OwnLine) float64 { return l.VoltagePercent })
	s.amperes = o.section(name, ofDemand, o.TDDPercent, func(l OwnLine) float64 { return l.CurrentPercent })
	s.inAmpere = o.section(name, ofAmpere, 0, func(l OwnLine) float64 { return l.CurrentA })
	return s
}

// section lays one column out by order; nil when it holds nothing.
func (o Own) section(name string, of base, total float64, column func(OwnLine) float64) *section {
	c := class{toV: math.Inf(1), toRatio: math.Inf(1), total: total, totalTo: 50, totalMark: Given, fullName: anyVoltage}
	for _, l := range o.Lines {
		v := column(l)
		if !(v > 0) || l.Order < 2 || l.Order > maxOrder {
			continue
		}
		c.grow(l.Order)
		c.limit[l.Order], c.mark[l.Order] = v, Given
		c.rule[l.Order] = fmt.Sprintf("%s, order %d, %s", name, l.Order, of.words())
	}
	part := &section{of: of}
	if total > 0 {
		c.grow(c.totalTo)
		c.totalRule = fmt.Sprintf("%s, %s, %s", name, part.index(), of.words())
	}
	if len(c.limit) == 0 {
		return nil
	}
	part.classes = []class{c}
	return part
}
