package limits

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"quietbus/study/phasor"
)

// Equipment is what the emission standards for a piece of equipment need to
// know of it (IEC 61000-3-2 and IEC 61000-3-12).
type Equipment struct {
	NominalV float64 // line to line, V
	Current  [3]phasor.Spectrum
	Wires    Wires
	// ReferenceA is the rated line current Iref, A rms; 0 takes the computed
	// one, which the rule then says.
	ReferenceA  float64
	PowerW      float64 // active input power
	PowerFactor float64 // P/S of the circuit
	IscA        float64 // three-phase short-circuit current where it is connected, A
}

// Wires says how equipment is connected.
type Wires int

// Between three phases, from one phase to neutral, between two phases.
const (
	ThreePhase Wires = iota
	PhaseNeutral
	PhasePhase
)

// apparent returns the apparent power at a current, VA.
func (w Wires) apparent(v, a float64) float64 {
	switch w {
	case PhaseNeutral:
		return v / math.Sqrt(3) * a
	case PhasePhase:
		return v * a
	}
	return math.Sqrt(3) * v * a
}

// LimitsEquipment reports whether the set is one for a piece of equipment
// rather than for a point of the network.
func (s *Set) LimitsEquipment() bool { return s.appliance != nil }

// appliance is all a set says about equipment.
type appliance struct {
	of         string // "ampere", "fundamental", "watt" or "reference"
	aboveA     float64
	toA        float64
	lineV      [2]float64 // from, to, line to line
	phaseV     [2]float64 // the same for systems stated phase to neutral
	watt       [2]float64
	balanced   bool
	condition  string
	factor     float64
	classes    []applianceClass
	powerMark  Mark
	currentFor string // words of the current range
}

// applianceClass is one row of a table by short-circuit ratio, or the whole
// table.
type applianceClass struct {
	name      string
	fromRsce  float64
	limit     []float64 // by order
	rule      []string
	mark      []Mark
	timesPF   []bool
	cap       []float64 // A, by order
	thc, pwhc float64   // per cent
	totalMark Mark
}

// ShortCircuitRatio returns Rsce, the short-circuit power over the apparent
// power of the equipment as IEC 61000-3-12 counts it for its connection, and
// the two powers in VA (three-phase Ssc/Sequ, interphase Ssc/(2 Sequ),
// single-phase Ssc/(3 Sequ)).
func (e Equipment) ShortCircuitRatio() (ratio, ssc, sequ float64) {
	ssc = math.Sqrt(3) * e.NominalV * e.IscA
	sequ = e.Wires.apparent(e.NominalV, e.reference())
	switch e.Wires {
	case PhaseNeutral:
		return ssc / (3 * sequ), ssc, sequ
	case PhasePhase:
		return ssc / (2 * sequ), ssc, sequ
	}
	return ssc / sequ, ssc, sequ
}

// reference returns Iref: as stated, else the rms current of the worst phase.
func (e Equipment) reference() float64 {
	if e.ReferenceA > 0 {
		return e.ReferenceA
	}
	worst := 0.0
	for _, x := range e.Current {
		worst = math.Max(worst, phasor.RMS(x))
	}
	return worst
}

// Equipment returns the rows of a piece of equipment: each order that the set
// limits, then the totals THC and PWHC where the document has them. What lies
// outside the scope of the document, or lacks a value, gives a
// *NotAssessedError.
func (s *Set) Equipment(e Equipment) ([]Row, error) {
	a := s.appliance
	if a == nil {
		return nil, &NotAssessedError{"currents", s.Title + " is no limit set for equipment"}
	}
	if why := a.outside(s, e); why != "" {
		return nil, &NotAssessedError{"currents", why}
	}
	if a.of != "reference" {
		return a.fixed(e), nil
	}
	if !(e.IscA > 0) {
		return nil, &NotAssessedError{"currents", "no short-circuit current is known at the point, by which " + s.Title + " chooses its row"}
	}
	return a.byRatio(s, e)
}

// outside says why a document does not cover the equipment, "" when it does.
func (a *appliance) outside(s *Set, e Equipment) string {
	ref, phaseV := e.reference(), e.NominalV/math.Sqrt(3)
	within := func(v float64, r [2]float64) bool { return v >= r[0]*(1-1e-9) && v <= r[1]*(1+1e-9) }
	switch {
	case len(e.Current[0]) < 2 && len(e.Current[1]) < 2 && len(e.Current[2]) < 2 || !(ref > 0):
		return "no current of the equipment is known"
	case !(e.NominalV > 0):
		return "the nominal voltage of the equipment is not known"
	case !within(e.NominalV, a.lineV) && !(a.phaseV[1] > 0 && (within(phaseV, a.phaseV) || within(e.NominalV, a.phaseV))):
		return fmt.Sprintf("%s does not cover equipment at %.4g V between lines", s.Title, e.NominalV)
	case ref > a.toA*(1+1e-9) || ref <= a.aboveA:
		return fmt.Sprintf("the equipment takes %.4g A a phase; %s covers %s", ref, s.Title, a.currentFor)
	case a.balanced && (e.Wires != ThreePhase || unbalanced(e.Current)):
		return s.Title + " is for balanced three-phase equipment; choose the table for other equipment"
	case a.watt != [2]float64{} && !(e.PowerW > 0):
		return "the active power of the equipment is not known"
	case a.watt[0] > 0 && e.PowerW < a.watt[0]:
		return fmt.Sprintf("the equipment takes %.4g W; %s has no limits below %.4g W%s", e.PowerW, s.Title, a.watt[0], confirm(a.powerMark))
	case a.watt[1] > 0 && e.PowerW > a.watt[1]:
		return fmt.Sprintf("the equipment takes %.4g W; %s covers up to %.4g W%s", e.PowerW, s.Title, a.watt[1], confirm(a.powerMark))
	}
	return ""
}

func confirm(m Mark) string {
	if m == Memory {
		return " (from memory: to be confirmed against the document)"
	}
	return ""
}

// unbalanced reports whether the phases differ by more than a hundredth of the
// greatest rms current.
func unbalanced(x [3]phasor.Spectrum) bool {
	r := []float64{phasor.RMS(x[0]), phasor.RMS(x[1]), phasor.RMS(x[2])}
	return slices.Max(r)-slices.Min(r) > 0.01*slices.Max(r)
}

// fixed assesses a set whose limits do not depend on the network.
func (a *appliance) fixed(e Equipment) []Row {
	c := &a.classes[0]
	var rows []Row
	for h := range c.limit {
		if c.limit[h] == 0 || h >= e.orders() {
			continue
		}
		row := Row{Quantity: "current", Order: h, Limit: a.factor * c.limit[h], Rule: c.rule[h], Mark: c.mark[h], Unit: "A"}
		switch a.of {
		case "fundamental":
			row.Unit = Percent
			if c.timesPF[h] {
				row.Limit *= e.PowerFactor
				row.Rule += fmt.Sprintf(", %g x the power factor %.3f", c.limit[h], e.PowerFactor)
			}
			row.worst(e.Current, fundamentals(e.Current), func(x phasor.Spectrum) float64 { return size2(x.At(h)) })
		case "watt":
			row.Limit *= e.PowerW / 1000
			row.Rule += fmt.Sprintf(", %.4g mA/W x %.4g W", c.limit[h], e.PowerW)
			if h < len(c.cap) && c.cap[h] > 0 && row.Limit > c.cap[h] {
				row.Limit = c.cap[h]
				row.Rule += ", at most the class A value"
			}
			fallthrough
		default:
			// a base of 100 leaves amperes
			row.worst(e.Current, [3]float64{100, 100, 100}, func(x phasor.Spectrum) float64 { return size2(x.At(h)) })
		}
		rows = append(rows, row)
	}
	return rows
}

func (e Equipment) orders() int { return max(len(e.Current[0]), len(e.Current[1]), len(e.Current[2])) }

func fundamentals(x [3]phasor.Spectrum) (of [3]float64) {
	for i := range x {
		of[i] = math.Sqrt(size2(x[i].At(1)))
	}
	return of
}

// byRatio assesses a set whose rows follow from Rsce, interpolated between the
// two rows that enclose it.
func (a *appliance) byRatio(s *Set, e Equipment) ([]Row, error) {
	ratio, _, _ := e.ShortCircuitRatio()
	lo, hi, t := a.enclosing(ratio)
	if lo == nil {
		return nil, &NotAssessedError{"currents", fmt.Sprintf("Rsce is %.4g, below the lowest row of %s, %g: the supplier has to be asked", ratio, s.Title, a.classes[0].fromRsce)}
	}
	words := fmt.Sprintf("Rsce %.4g, row %g", ratio, lo.fromRsce)
	if t > 0 {
		words = fmt.Sprintf("Rsce %.4g, between rows %g and %g", ratio, lo.fromRsce, hi.fromRsce)
	}
	tail := ", of Iref"
	if e.ReferenceA == 0 {
		tail = ", of Iref as computed"
	}
	if a.condition != "" {
		tail += "; " + a.condition
	}
	ref := e.reference()
	of := [3]float64{ref, ref, ref}
	mix := func(x, y float64) float64 { return x + t*(y-x) }
	var rows []Row
	for h := range lo.limit {
		if lo.limit[h] == 0 || h >= e.orders() {
			continue
		}
		row := Row{Quantity: "current", Order: h, Limit: mix(lo.limit[h], hi.limit[h]), Rule: lo.rule[h] + ", " + words + tail, Mark: lo.mark[h], Unit: Percent}
		row.worst(e.Current, of, func(x phasor.Spectrum) float64 { return size2(x.At(h)) })
		rows = append(rows, row)
	}
	for _, total := range []struct {
		index  string
		limit  float64
		from   int
		weight func(h int) float64
		words  string
	}{
		{"THC", mix(lo.thc, hi.thc), 2, func(int) float64 { return 1 }, "THC over orders 2 to 40"},
		{"PWHC", mix(lo.pwhc, hi.pwhc), 14, func(h int) float64 { return float64(h) }, "PWHC, orders 14 to 40 weighted with the order"},
	} {
		row := Row{Quantity: "current", Index: total.index, Limit: total.limit, Mark: lo.totalMark, Unit: Percent, Rule: lo.name + ", " + total.words + ", " + words + tail}
		if n := e.orders() - 1; n < 40 {
			row.Rule += fmt.Sprintf(" (computed to order %d)", n)
		}
		row.worst(e.Current, of, func(x phasor.Spectrum) float64 {
			var sum float64
			for h := total.from; h <= 40 && h < len(x); h++ {
				sum += total.weight(h) * size2(x[h])
			}
			return sum
		})
		rows = append(rows, row)
	}
	return rows, nil
}

// enclosing returns the rows below and above a ratio and how far it lies
// between them, 0 to 1; nil below the lowest.
func (a *appliance) enclosing(ratio float64) (lo, hi *applianceClass, t float64) {
	for i := range a.classes {
		c := &a.classes[i]
		if !(ratio >= c.fromRsce) {
			break
		}
		lo, hi, t = c, c, 0
		if i+1 < len(a.classes) {
			if next := &a.classes[i+1]; ratio < next.fromRsce {
				hi, t = next, (ratio-c.fromRsce)/(next.fromRsce-c.fromRsce)
			}
		}
	}
	return lo, hi, t
}

// IsNotAssessed returns the reason when err says that something was not
// assessed.
func IsNotAssessed(err error) (reason string, ok bool) {
	var why *NotAssessedError
	if errors.As(err, &why) {
		return why.Error(), true
	}
	return "", false
}
