package figure

import (
	"fmt"
	"math"
	"sort"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/filter"
	"quietbus/study/phasor"
)

// What a capacitor bears for long beyond its rated current and the crest of its
// rated voltage: IEC 60831-1 (current, from memory) and IEEE 18 (peak, from
// memory).
const (
	capacitorOvercurrent = 1.3
	capacitorOverpeak    = 1.2
)

// Duty shows what transformers, cables, capacitor banks and measures bear as
// share of what they bear for long, worst first, before beside after. before
// may be nil.
func Duty(before, after *study.Outcome) *Figure {
	f := &Figure{Key: "duty", Title: "Duty of the equipment", Size: vg.Point{X: 480, Y: 280}}
	rows := duties(before, after)
	f.Caption = "Share of what each part bears for long, worst phase, all orders: rated current; for capacitors 1.3 times it (IEC 60831-1), rated voltage and 1.2 times its crest (IEEE 18), all from memory: confirm with the manufacturer."
	if words := losses(after); words != "" {
		f.Caption += " Losses of the measures: " + words + "."
	}
	f.Draw = func(c draw.Canvas, st *Style) []Hot {
		p := newPen(c, st)
		if len(rows) == 0 {
			return p.empty("Nothing with a rating carries current.\nA transformer, a bank or a measure that is on shows its duty here.")
		}
		return p.shareBars(rows, "bears 100 %", before != nil, after != nil)
	}
	return f
}

// A stress is one value against what is borne.
type stress struct {
	part, what  string
	value, bear float64
	unit, rule  string
}

// duties pairs the stresses of two outcomes by name, the worst first.
func duties(before, after *study.Outcome) []barRow {
	var rows []barRow
	at := map[string]int{}
	var found [2]map[string]stress
	for i, o := range []*study.Outcome{before, after} {
		found[i] = map[string]stress{}
		for _, s := range stresses(o) {
			row := barRow{point: s.part, what: s.what, rule: s.rule, before: math.NaN(), after: math.NaN()}
			name := row.name()
			found[i][name] = s
			if _, ok := at[name]; !ok {
				at[name] = len(rows)
				rows = append(rows, row)
			}
			share := s.value / s.bear
			if i == 0 {
				rows[at[name]].before = share
			} else {
				rows[at[name]].after = share
			}
		}
	}
	for i := range rows {
		name := rows[i].name()
		rows[i].detail = func() (d [2]string) {
			for k := range d {
				if s, ok := found[k][name]; ok {
					d[k] = number(s.value) + " of " + number(s.bear) + " " + s.unit
				}
			}
			return d
		}
	}
	sort.SliceStable(rows, func(i, j int) bool { return rows[i].worst() > rows[j].worst() })
	return rows
}

// stresses lists what the parts of one outcome bear.
func stresses(o *study.Outcome) []stress {
	if o == nil {
		return nil
	}
	var list []stress
	add := func(part, what string, value, bear float64, unit, rule string) {
		if value > 0 && bear > 0 {
			list = append(list, stress{part, what, value, bear, unit, rule})
		}
	}
	for i := range o.Study.Transformers {
		t := &o.Study.Transformers[i]
		if e := o.Element(t.Name); e != nil && len(e.Ends) > 1 {
			add(t.Name, "current", worstRMS(e.Ends[1].Phase), t.RatedKVA/t.LVKV/math.Sqrt(3), "A", "rms against rated current of the low-voltage winding; extra losses of the orders come on top")
		}
	}
	for i := range o.Study.Cables {
		c := &o.Study.Cables[i]
		if e := o.Element(c.Name); e != nil && len(e.Ends) > 0 {
			add(c.Name, "current", worstRMS(e.Ends[0].Phase), c.AmpacityA*float64(max(c.Parallel, 1)), "A", "rms against the ampacity of its circuits")
		}
	}
	borne := map[string]bool{} // banks that a measure accounts for
	for i := range o.Measures {
		m := &o.Measures[i]
		name := m.Name
		for k := range o.Study.Measures {
			if x := &o.Study.Measures[k]; x.Name == m.Name && x.Kind == study.DetuneBank {
				name = x.Target // the same capacitors as before
				borne[name] = true
			}
		}
		if d := m.Duty; d != nil {
			bears, rule := 1.0, "rms against rated current"
			if d.RatedV > 0 {
				bears, rule = capacitorOvercurrent, "rms against 1.3 times rated current (IEC 60831-1, from memory)"
			}
			add(name, "current", d.CurrentA, bears*d.RatedA, "A", rule)
			add(name, "voltage", d.VoltageV, d.RatedV, "V", "rms across one capacitor against its rating")
			add(name, "crest", d.PeakV, capacitorOverpeak*math.Sqrt2*d.RatedV, "V", "crest across one capacitor against 1.2 times that of its rating (IEEE 18, from memory)")
		}
	}
	for i := range o.Study.Banks {
		b := &o.Study.Banks[i]
		e := o.Element(b.Name)
		if e == nil || len(e.Ends) == 0 || borne[b.Name] {
			continue
		}
		branch, rated := bankBranch(o, b)
		if branch == nil {
			continue
		}
		delta := b.Connection == "" || b.Connection == "delta"
		d := branch.Bear(e.Ends[0].Phase, delta)
		across := rated / math.Sqrt(3)
		if delta {
			across = rated
		}
		add(b.Name, "current", d.Current, capacitorOvercurrent*branch.RatedCurrent(rated), "A", "rms against 1.3 times rated current (IEC 60831-1, from memory)")
		if b.RatedKV > 0 { // else a rating to suit is presumed
			add(b.Name, "voltage", d.Voltage, across, "V", "rms across one capacitor against its rating")
			add(b.Name, "crest", d.Peak, capacitorOverpeak*math.Sqrt2*across, "V", "crest across one capacitor against 1.2 times that of its rating (IEEE 18, from memory)")
		}
	}
	return list
}

// bankBranch returns the branch of a bank that stands and the line-to-line
// voltage its capacitors are rated for: as stated, else what order 1 puts on
// them at the voltage of the bank's output.
func bankBranch(o *study.Outcome, b *study.Bank) (*filter.Branch, float64) {
	bus := o.Bus(b.Bus)
	if bus == nil {
		return nil, 0
	}
	v := 1000 * b.AtKV
	if v == 0 {
		v = bus.NominalV
	}
	p := b.DetuningPercent / 100
	rated := 1000 * b.RatedKV
	if rated == 0 {
		rated = v / (1 - p)
	}
	const lossless, anyQ = 0, 50 // currents are given, so losses play no part
	branch, err := filter.Bank(1000*b.Kvar, v, o.Study.FrequencyHz, lossless)
	if p > 0 {
		branch, err = filter.Detuned(1000*b.Kvar, v, o.Study.FrequencyHz, p, anyQ, lossless)
	}
	if err != nil { // a study that was solved has none
		return nil, 0
	}
	return branch, rated
}

func worstRMS(p [3]phasor.Spectrum) float64 {
	return math.Max(phasor.RMS(p[0]), math.Max(phasor.RMS(p[1]), phasor.RMS(p[2])))
}

// losses lists the losses of the measures that are on.
func losses(o *study.Outcome) string {
	if o == nil {
		return ""
	}
	var words []string
	for i := range o.Measures {
		if d := o.Measures[i].Duty; d != nil && d.LossW > 0 {
			words = append(words, fmt.Sprintf("%s %s W, of which %s W at order 1", o.Measures[i].Name, number(d.LossW), number(d.LossW1)))
		}
	}
	return strings.Join(words, "; ")
}
