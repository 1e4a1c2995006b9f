package limits

import (
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// Point is what is assessed: line-to-neutral voltages and line currents by
// phase (complex rms).
type Point struct {
	NominalV float64 // line to line, V
	Voltage  [3]phasor.Spectrum
	Current  [3]phasor.Spectrum
	IscA     float64 // maximum short-circuit current, A
	DemandA  float64 // maximum demand load current IL, A
}

// NotAssessedError says why a quantity was not assessed.
type NotAssessedError struct{ Quantity, Reason string }

func (e *NotAssessedError) Error() string { return e.Quantity + ": " + e.Reason }

// Voltage returns the voltage rows of a point: each order the set limits, then
// THD. IEEE 519 sets refer to the nominal voltage, all others to the
// fundamental of the moment. The worst phase is shown. A set without voltage
// limits for the point's class, or a point without voltage, is a
// *NotAssessedError.
func (s *Set) Voltage(p Point) ([]Row, error) {
	t := s.voltageTable(p.NominalV)
	if t == nil {
		return nil, &NotAssessedError{"voltages", s.Title + " has no limits for this voltage"}
	}
	if cmplx.Abs(p.Voltage[0].At(1))+cmplx.Abs(p.Voltage[1].At(1))+cmplx.Abs(p.Voltage[2].At(1)) == 0 {
		return nil, &NotAssessedError{"voltages", "the bus has no voltage"}
	}
	top := min(s.Order, p.Voltage[0].Order())
	base := func(phase int) float64 {
		if t.Each > 0 {
			return p.NominalV / math.Sqrt(3)
		}
		return cmplx.Abs(p.Voltage[phase].At(1))
	}
	rows := make([]Row, 0, top+1)
	prefix := s.Title + " " + t.Table
	for h := 2; h <= top; h++ {
		limit, words := t.limit(h)
		if limit > 0 {
			rows = append(rows, worst(Row{Quantity: "voltage", Order: h, Limit: limit, Rule: prefix + words, Mark: t.Mark}, p.Voltage, base,
				func(x phasor.Spectrum) float64 { return cmplx.Abs(x.At(h)) }))
		}
	}
	return append(rows, worst(Row{Quantity: "voltage", Index: "THD", Limit: t.Total, Rule: prefix + ", THD", Mark: t.Mark}, p.Voltage, base,
		func(x phasor.Spectrum) float64 { return phasor.Distortion(upTo(x, top)) })), nil
}

func upTo(x phasor.Spectrum, order int) phasor.Spectrum { return x[:min(len(x), order+1)] }

func (s *Set) voltageTable(v float64) *VoltageTable {
	for i := range s.Volts {
		if inClass(v, s.Volts[i].AboveV, s.Volts[i].ToV) {
			return &s.Volts[i]
		}
	}
	return nil
}

func (t *VoltageTable) limit(h int) (float64, string) {
	if t.Each > 0 {
		return t.Each, ", each order"
	}
	for _, r := range t.Orders {
		if r.holds(h) {
			return r.at(h), ", " + r.words(h)
		}
	}
	return 0, ""
}

// Current returns the current rows of a point in per cent of IL: each order,
// then TDD. Missing IL or Isc, or a set without current limits, is a
// *NotAssessedError that says so.
func (s *Set) Current(p Point) ([]Row, error) {
	switch {
	case s.Amperes == nil:
		return nil, &NotAssessedError{"currents", s.Title + " has no current limits"}
	case p.DemandA <= 0:
		return nil, &NotAssessedError{"currents", "no maximum demand load current IL is stated"}
	case p.IscA <= 0:
		return nil, &NotAssessedError{"currents", "no short-circuit current is known at the point"}
	}
	ratio := p.IscA / p.DemandA
	t, r := s.Amperes.row(p.NominalV, ratio)
	if r == nil {
		return nil, &NotAssessedError{"currents", s.Title + " has no current limits for this voltage"}
	}
	top := min(s.Order, p.Current[0].Order())
	prefix := fmt.Sprintf("%s %s, Isc/IL %s", s.Title, t.Table, r.words())
	base := func(int) float64 { return p.DemandA }
	rows := make([]Row, 0, top+1)
	for h := 2; h <= top; h++ {
		for i, b := range s.Amperes.Bands {
			if h < b[0] || h > b[1] {
				continue
			}
			share, words := s.Amperes.even(h)
			rows = append(rows, worst(Row{Quantity: "current", Order: h, Limit: r.Limits[i] * share, Mark: t.Mark,
				Rule: fmt.Sprintf("%s, orders %d to %d%s", prefix, b[0], b[1], words)}, p.Current, base,
				func(x phasor.Spectrum) float64 { return cmplx.Abs(x.At(h)) }))
		}
	}
	return append(rows, worst(Row{Quantity: "current", Index: "TDD", Limit: r.Total, Rule: prefix + ", TDD", Mark: t.Mark}, p.Current, base,
		func(x phasor.Spectrum) float64 { return phasor.Distortion(upTo(x, top)) })), nil
}

// row returns the table of a voltage class and its row for Isc/IL. Lower
// bounds are inclusive; exactly 1000 stays in the row below, the stricter.
func (c *CurrentSection) row(v, ratio float64) (*CurrentTable, *CurrentRow) {
	for i := range c.Tables {
		t := &c.Tables[i]
		if !inClass(v, t.AboveV, t.ToV) {
			continue
		}
		for j := range t.Rows {
			r := &t.Rows[j]
			if r.ToRatio == nil || ratio < *r.ToRatio || (ratio == *r.ToRatio && ratio == 1000) {
				return t, r
			}
		}
	}
	return nil, nil
}

func (r *CurrentRow) words() string {
	switch {
	case r.ToRatio == nil:
		return fmt.Sprintf("above %g", r.FromRatio)
	case r.FromRatio == 0:
		return fmt.Sprintf("below %g", *r.ToRatio)
	}
	return fmt.Sprintf("%g to %g", r.FromRatio, *r.ToRatio)
}

func (c *CurrentSection) even(h int) (float64, string) {
	if h%2 == 1 {
		return 1, ""
	}
	for _, e := range c.Even {
		if h <= e.ToOrder {
			return e.Share, fmt.Sprintf(", even order: %g %%", 100*e.Share)
		}
	}
	return 1, ""
}

// worst fills in value, phase and share from the phase with the highest value.
func worst(row Row, x [3]phasor.Spectrum, base func(int) float64, size func(phasor.Spectrum) float64) Row {
	for i, phase := range [3]string{"a", "b", "c"} {
		b := base(i)
		if b == 0 {
			continue
		}
		if v := 100 * size(x[i]) / b; i == 0 || v > row.Value {
			row.Value, row.Phase = v, phase
		}
	}
	row.Share = row.Value / row.Limit
	return row
}
