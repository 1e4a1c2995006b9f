package limits

import (
	"fmt"
	"math"
	"strings"

	"quietbus/study/phasor"
)

// Point is what is assessed: line-to-neutral voltages and line currents by
// phase (complex rms, V and A), and what the rules rest on.
type Point struct {
	NominalV float64 // line to line, V
	Voltage  [3]phasor.Spectrum
	Current  [3]phasor.Spectrum
	IscA     float64 // maximum short-circuit current, A
	DemandA  float64 // maximum demand load current IL, A

	// LowOrderAllowance applies the rule that raises the other limits where
	// the listed low orders are held far below theirs (as behind multi-pulse
	// converters). Off by default: it has to be agreed with the supplier.
	LowOrderAllowance bool
	// Percentile applies the document's multiplier for a measured statistic,
	// one of the set's own; nil is the plain limit.
	Percentile *Percentile
}

// NotAssessedError says why a quantity was not assessed. What is not assessed
// must never be counted as met.
type NotAssessedError struct {
	Quantity string // "voltages" or "currents"
	Reason   string // why, and what would help
}

func (e *NotAssessedError) Error() string { return e.Quantity + ": " + e.Reason }

var phaseNames = [3]string{"a", "b", "c"}

// Voltage returns the voltage rows of a point: each order that the set limits
// and the spectra hold, then THD. The worst phase is shown. A set that limits
// no voltage at all gives no rows and no error; a set without limits for the
// point's voltage, or a point without voltage, gives a *NotAssessedError.
func (s *Set) Voltage(p Point) ([]Row, error) {
	if s.volts == nil {
		return nil, nil
	}
	missing := func(reason string, args ...any) ([]Row, error) {
		return nil, &NotAssessedError{"voltages", fmt.Sprintf(reason, args...)}
	}
	if !(p.NominalV > 0) {
		return missing("the nominal voltage of the point is not known")
	}
	c := s.volts.find(p.NominalV, math.NaN())
	if c == nil {
		return missing("%s has no voltage limits for %.4g kV: it covers %s", s.Title, p.NominalV/1000, s.volts.covers())
	}
	var of [3]float64
	live := false
	for i, x := range p.Voltage {
		of[i] = math.Sqrt(size2(x.At(1)))
		live = live || of[i] > 0
	}
	if !live {
		return missing("the point has no voltage")
	}
	if s.volts.of == ofNominal {
		v := p.NominalV / math.Sqrt(3)
		of = [3]float64{v, v, v}
	}
	return s.rows("voltage", s.volts, c, p.Voltage, of, p), nil
}

// Current returns the current rows of a point: each order that the set limits
// and the spectra hold, then the direct component where there is one and the
// document forbids it, then TDD (THD where the set is of the fundamental). The
// worst phase is shown.
//
// Where currents cannot be assessed, for want of limits in the set, of the
// demand current IL or of the short-circuit current Isc, it returns a
// *NotAssessedError that says so, beside the rows that need none of them.
func (s *Set) Current(p Point) ([]Row, error) {
	if s.inAmpere == nil {
		return s.currentPercent(p)
	}
	if len(p.Current[0]) < 2 && len(p.Current[1]) < 2 && len(p.Current[2]) < 2 {
		return nil, &NotAssessedError{"currents", "no current is known at the point"}
	}
	rows := s.rows("current", s.inAmpere, &s.inAmpere.classes[0], p.Current, [3]float64{100, 100, 100}, p)
	if s.amperes == nil {
		return rows, nil
	}
	more, err := s.currentPercent(p)
	return append(more, rows...), err
}

func (s *Set) currentPercent(p Point) ([]Row, error) {
	missing := func(reason string, args ...any) ([]Row, error) {
		return nil, &NotAssessedError{"currents", fmt.Sprintf(reason, args...)}
	}
	ratio := p.IscA / p.DemandA
	switch {
	case s.amperes == nil:
		return missing("%s has no current limits", s.Title)
	case s.amperes.of == ofDemand && !(p.DemandA > 0):
		return missing("no maximum demand load current IL is stated, which every current limit of %s is a percentage of", s.Title)
	case s.amperes.needsRatio() && !(p.IscA > 0):
		return missing("no short-circuit current Isc is known at the point, by which %s chooses its row", s.Title)
	case s.amperes.needsRatio() && !(p.DemandA > 0):
		return missing("no maximum demand load current IL is stated, by which %s chooses its row", s.Title)
	case !(p.NominalV > 0):
		return missing("the nominal voltage of the point is not known")
	case len(p.Current[0]) < 2 && len(p.Current[1]) < 2 && len(p.Current[2]) < 2:
		return missing("no current is known at the point")
	}
	c := s.amperes.find(p.NominalV, ratio)
	if c == nil {
		return missing("%s has no current limits for %.4g kV and Isc/IL %.4g: it covers %s", s.Title, p.NominalV/1000, ratio, s.amperes.covers())
	}
	of := [3]float64{p.DemandA, p.DemandA, p.DemandA}
	if s.amperes.of == ofFundamental {
		for i, x := range p.Current {
			of[i] = math.Sqrt(size2(x.At(1)))
		}
	}
	return s.rows("current", s.amperes, c, p.Current, of, p), nil
}

// find returns the class for a voltage (V) and a short-circuit ratio, nil when
// there is none. A ratio that is not a number is left out of account.
func (s *section) find(v, ratio float64) *class {
	for i := range s.classes {
		c := &s.classes[i]
		if c.in(v) && (math.IsNaN(ratio) || c.holds(ratio)) {
			return c
		}
	}
	return nil
}

// covers names the voltage and ratio ranges of a section's classes.
func (s *section) covers() string {
	var names []string
	for i := range s.classes {
		if n := s.classes[i].fullName; len(names) == 0 || names[len(names)-1] != n {
			names = append(names, n)
		}
	}
	return strings.Join(names, "; ")
}

// rows assesses every order of a class, then direct component and total.
func (s *Set) rows(quantity string, part *section, c *class, x [3]phasor.Spectrum, of [3]float64, p Point) []Row {
	unit := Percent
	if part.of == ofAmpere {
		unit = "A"
	}
	computed := 0
	for _, phase := range x {
		computed = max(computed, phase.Order())
	}
	top := min(c.top(), computed)
	rows := make([]Row, 0, top+2)
	for h := 2; h <= top; h++ {
		if c.limit[h] == 0 {
			continue
		}
		row := Row{Unit: unit, Quantity: quantity, Order: h, Limit: c.limit[h], Rule: c.rule[h], Mark: c.mark[h]}
		row.worst(x, of, func(phase phasor.Spectrum) float64 { return size2(phase.At(h)) })
		rows = append(rows, row)
	}
	if p.LowOrderAllowance {
		allow(part.lowOrder, rows)
	}
	if d := part.direct; d != nil {
		row := Row{Unit: Percent, Quantity: quantity, Rule: s.Title + " " + d.rule, Mark: d.mark}
		row.worst(x, of, func(phase phasor.Spectrum) float64 { return size2(phase.At(0)) })
		// Below a billionth of the base it is the rounding of a solution.
		if row.Value > 1e-7 {
			row.Share = 1 + row.Value
			rows = append(rows, row)
		}
	}
	if c.total > 0 {
		row := Row{Unit: Percent, Quantity: quantity, Index: part.index(), Limit: c.total, Rule: c.totalRule, Mark: c.totalMark}
		to := c.totalTo
		if computed < to {
			to = computed
			row.Rule += fmt.Sprintf(" (computed to order %d)", to)
		}
		row.worst(x, of, func(phase phasor.Spectrum) float64 {
			var sum float64
			for h := 2; h <= to && h < len(phase); h++ {
				sum += size2(phase[h])
			}
			return sum
		})
		rows = append(rows, row)
	}
	if q := p.Percentile; q != nil && q.Quantity == quantity && q.Multiplier != 1 {
		for i := range rows {
			rows[i].scale(q.Multiplier, fmt.Sprintf("x %g for the %s (%s)", q.Multiplier, q.Statistic, q.Rule), q.Mark)
		}
	}
	return rows
}

func (s *section) index() string {
	if s.of == ofDemand {
		return "TDD"
	}
	return "THD"
}

// worst fills in value, phase and share from the phase with the highest value.
func (r *Row) worst(x [3]phasor.Spectrum, of [3]float64, square func(phasor.Spectrum) float64) {
	for i, phase := range x {
		if !(of[i] > 0) {
			continue
		}
		if v := 100 * math.Sqrt(square(phase)) / of[i]; r.Phase == "" || v > r.Value {
			r.Value, r.Phase = v, phaseNames[i]
		}
	}
	if r.Limit > 0 {
		r.Share = r.Value / r.Limit
	}
}

// scale multiplies the limit of a row and says why in its rule.
func (r *Row) scale(by float64, why string, mark Mark) {
	if r.Limit == 0 {
		return
	}
	r.Limit *= by
	r.Share = r.Value / r.Limit
	r.Rule += ", " + why
	r.Mark = weaker(r.Mark, mark)
}

func size2(v complex128) float64 { return real(v)*real(v) + imag(v)*imag(v) }
