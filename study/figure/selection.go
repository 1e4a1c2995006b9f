package figure

import (
	"math"
	"math/cmplx"
	"slices"
	"strings"

	"quietbus/study"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// Selection names what a figure shows: the voltage of a bus, or the current
// of an element at its end on the bus (its first end when Bus is empty).
type Selection struct {
	Bus     string
	Element string
	Phase   string // "a", "b" or "c"; empty is the worst by order in a spectrum, the first that carries something in a waveform
	Periods int    // of a waveform, one or two; 0 is one
}

// Name returns the selection in words.
func (s Selection) Name() string {
	if s.Element == "" {
		return "voltage at " + s.Bus
	}
	if s.Bus == "" {
		return "current of " + s.Element
	}
	return "current of " + s.Element + " at " + s.Bus
}

func (s Selection) key() string {
	parts := []string{"bus", s.Bus}
	if s.Element != "" {
		parts = []string{"element", s.Element, s.Bus}
	}
	if s.Phase != "" {
		parts = append(parts, "phase", s.Phase)
	}
	return slug(strings.Join(parts, " "))
}

// phase returns the index of the phase that is asked for, -1 for none.
func (s Selection) phase() int { return slices.Index(phaseNames, s.Phase) }

var phaseNames = []string{"a", "b", "c"}

func slug(text string) string {
	var b strings.Builder
	for _, r := range strings.ToLower(text) {
		switch {
		case r >= 'a' && r <= 'z', r >= '0' && r <= '9':
			b.WriteRune(r)
		case !strings.HasSuffix(b.String(), "-"):
			b.WriteByte('-')
		}
	}
	return strings.Trim(b.String(), "-")
}

// phases returns the selected spectra; false when the outcome does not hold
// the selection or it carries nothing.
func (s Selection) phases(o *study.Outcome) ([3]phasor.Spectrum, bool) {
	var none [3]phasor.Spectrum
	if o == nil {
		return none, false
	}
	if s.Element == "" {
		b := o.Bus(s.Bus)
		if b == nil || !b.Live {
			return none, false
		}
		return b.Phase, true
	}
	e := o.Element(s.Element)
	if e == nil || len(e.Ends) == 0 {
		return none, false
	}
	for _, end := range e.Ends {
		if end.Bus == s.Bus {
			return end.Phase, true
		}
	}
	return e.Ends[0].Phase, true
}

// series is what one outcome shows: the worst phase by order or the one chosen,
// in the unit of the axis.
type series struct {
	ok    bool
	value []float64 // by order, 0 and 1 unused
	thd   float64   // per cent
	tdd   float64   // per cent of the demand current, where there is one
}

func (s series) at(h int) float64 {
	if h < len(s.value) {
		return s.value[h]
	}
	return 0
}

// read takes voltages in per cent of the phase's own fundamental, currents in A
// or, with a demand current, in per cent of it.
func (s Selection) read(o *study.Outcome, demand float64) series {
	phase, ok := s.phases(o)
	out := series{ok: ok}
	if !ok {
		return out
	}
	out.value = make([]float64, len(phase[0]))
	chosen := s.phase()
	for i, p := range phase {
		if chosen >= 0 && i != chosen {
			continue
		}
		base := cmplx.Abs(p.At(1))
		if base > 0 {
			out.thd = math.Max(out.thd, 100*phasor.THD(p))
		}
		switch {
		case s.Element == "" && base == 0:
			continue
		case s.Element == "":
			base /= 100
		case demand > 0:
			base = demand / 100
			out.tdd = math.Max(out.tdd, 100*phasor.TDD(p, demand))
		default:
			base = 1
		}
		for h := 2; h < len(p); h++ {
			out.value[h] = math.Max(out.value[h], cmplx.Abs(p[h])/base)
		}
	}
	return out
}

// rows returns the limit rows that belong to the selection, by order, with the
// name of their set and, for currents, the maximum demand current they refer to.
func (s Selection) rows(o *study.Outcome) (rows map[int]limits.Row, title string, demand float64) {
	if o == nil {
		return nil, "", 0
	}
	for i := range o.Points {
		p := &o.Points[i]
		if p.Bus != s.Bus {
			continue
		}
		quantity := "voltage"
		if s.Element != "" {
			quantity = "current"
			if i >= len(o.Study.Assessments) || o.Study.Assessments[i].Current != s.Element {
				continue
			}
		}
		rows = map[int]limits.Row{}
		for _, r := range p.Rows {
			// per cent of something other than IL cannot be drawn on an axis in amperes
			drawable := quantity == "voltage" || r.Unit == "A" || p.ILA > 0
			if r.Quantity == quantity && r.Index == "" && drawable {
				rows[r.Order] = r
			}
		}
		if len(rows) > 0 {
			if s.Element == "" {
				return rows, p.SetTitle, 0
			}
			return rows, p.SetTitle, p.ILA
		}
	}
	return nil, "", 0
}
