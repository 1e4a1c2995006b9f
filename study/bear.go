package study

import (
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/filter"
	"quietbus/study/phasor"
)

// measure tells what a measure that is on is made of and bears.
func (m *model) measure(x *Measure, sol *solution, o *Outcome) MeasureResult {
	r := MeasureResult{Name: x.Name, Kind: x.Kind, Bus: x.Bus, Notes: m.plan.notes[x.Name]}
	if _, target := m.plan.origin.Find(x.Target); target != nil && r.Bus == "" {
		r.Bus = GetField(target, "bus") // also when it is out of service in this state
	}
	if IsFilter(x.Kind) {
		m.bears(&r, x.Name, m.branch[x.Name], x.RatedKV, "", o)
		return r
	}
	switch x.Kind {
	case DetuneBank:
		for i := range m.plan.banks {
			if b := &m.plan.banks[i]; b.Name == x.Target {
				r.Bus = b.Bus
				m.bears(&r, b.Name, m.branch[b.Name], b.RatedKV, b.connection(), o)
			}
		}
	case RemoveBank:
		for i := range m.plan.study.Banks {
			if b := &m.plan.study.Banks[i]; b.Name == x.Target {
				r.Bus = b.Bus
			}
		}
	case LineReactor:
		for _, l := range m.plan.study.NonlinearLoads {
			if l.Name == x.Target {
				r.Bus = l.Bus
				r.Components = []Component{m.lineReactor(x, &l, o)}
			}
		}
	case ActiveFilter:
		m.activeDuty(&r, x, sol.active[x.Name])
	case LowPassRC, LowPassLC:
		m.response(&r, x, o)
	}
	return r
}

// bears fills in components and duty of a passive branch from its currents.
// Capacitor voltages are those across each capacitor as it is connected:
// between phases in delta, else phase to star point.
func (m *model) bears(r *MeasureResult, element string, b *filter.Branch, ratedKV float64, connection string, o *Outcome) {
	e := o.Element(element)
	delta := connection == "delta"
	d := b.Bear(e.Ends[0].Phase, delta)
	output := 0.0
	for p, current := range e.Ends[0].Phase {
		output -= imag(o.Bus(e.Ends[0].Bus).Phase[p].At(1) * cmplx.Conj(current.At(1)))
	}
	across := math.Sqrt(3) // line-to-line rating over the voltage across one capacitor
	if delta {
		across = 1
	}
	rated, note := 1000*ratedKV, "rating stated"
	if rated == 0 {
		rated, note = filter.PreferredVoltage(across*needsV(b, d, across)), "next preferred voltage above the duty"
	}
	kvar := b.RatedVar(rated) / 1000
	r.Duty = &Duty{CurrentA1: d.Current1, CurrentA: d.Current, VoltageV1: d.Voltage1, VoltageV: d.Voltage, PeakV: d.Peak,
		RatedV: rated / across, RatedA: b.RatedCurrent(rated), LossW1: d.Loss1, LossW: d.Loss, KvarRated: kvar, KvarOutput: output / 1000}
	for _, part := range b.Parts() {
		c := Component{Part: part.Name, Symbol: part.Symbol, Value: part.Value}
		switch part.Name {
		case "capacitor":
			c.Note = fmt.Sprintf("star equivalent; %.4g kvar at %.4g V rated (%s)", kvar, rated, note)
			if delta {
				c.Note += fmt.Sprintf("; %.4g uF in each side of the delta", 1e6*part.Value/3)
			}
		case "reactor":
			c.Note = fmt.Sprintf("tuned to order %.4g, Q %.3g there", b.TunedOrder(), b.Quality())
		}
		r.Components = append(r.Components, c)
	}
}

// needsV returns the voltage across one capacitor that its rating must have to
// keep rms within the rating itself, the crest within 1.2 times and the current
// within 1.3 times it (IEEE 18-2012, found; IEC 60831-1, from memory).
func needsV(b *filter.Branch, d filter.Duty, across float64) float64 {
	return max(d.Voltage, d.Peak/(math.Sqrt2*1.2), d.Current*b.Xc*math.Sqrt(3)/across/1.3)
}

func (m *model) lineReactor(x *Measure, l *NonlinearLoad, o *Outcome) Component {
	v := m.volts[l.Bus]
	power := 1000 * l.KW / or(l.Displacement, 1)
	if l.CurrentA > 0 {
		power = math.Sqrt(3) * v * l.CurrentA
	}
	ohm := x.Percent / 100 * v * v / power
	return Component{Part: "line reactor", Symbol: "L", Value: ohm / (2 * math.Pi * m.plan.study.FrequencyHz),
		Note: fmt.Sprintf("%.3g %% of the load's own rating, per phase", x.Percent)}
}

func (m *model) activeDuty(r *MeasureResult, x *Measure, c activeResult) {
	r.Saturated = c.Saturated
	r.Duty = &Duty{CurrentA: c.Delivered, RatedA: x.RatedA}
	if c.Saturated {
		r.Notes = append(r.Notes, fmt.Sprintf("Asked for %.4g A, rated %.4g A: every order is scaled to %.3g %%.", c.Requested, x.RatedA, 100*x.RatedA/c.Requested))
	} else {
		r.Notes = append(r.Notes, fmt.Sprintf("Injects %.4g A of its %.4g A.", c.Delivered, x.RatedA))
	}
}

// response fills in gain, lag, components and duty of an outlet low-pass.
func (m *model) response(r *MeasureResult, x *Measure, o *Outcome) {
	out, ok := m.outlets[x.Name]
	if !ok {
		return
	}
	r.Bus = out.load.Bus
	for h := 1; h <= m.plan.study.Order(); h++ {
		g := out.pass.Ratio(float64(h))
		r.Response = append(r.Response, Gain{Order: h, Ratio: cmplx.Abs(g), LagDeg: out.pass.Lag(float64(h))})
	}
	if x.Kind == LowPassRC {
		r.Components = append(r.Components, Component{Part: "series resistor", Symbol: "R", Value: x.ROhm})
	} else {
		r.Components = append(r.Components, Component{Part: "series reactor", Symbol: "L", Value: x.LMH / 1000})
	}
	r.Components = append(r.Components, Component{Part: "outlet capacitor", Symbol: "C", Value: x.CUF / 1e6, Note: "phase to neutral"})
	e, outlet := o.Element(out.load.Name), o.Bus(OutletName(x.Name))
	d := &Duty{}
	for p, current := range e.Ends[0].Phase {
		i, v := phasor.RMS(current), phasor.RMS(outlet.Phase[p])
		if i >= d.CurrentA {
			d.CurrentA, d.CurrentA1 = i, cmplx.Abs(current.At(1))
			d.VoltageV, d.VoltageV1, d.PeakV = v, cmplx.Abs(outlet.Phase[p].At(1)), phasor.Peak(outlet.Phase[p])
		}
		d.LossW += i * i * out.pass.R
		d.LossW1 += cmplx.Abs(current.At(1)) * cmplx.Abs(current.At(1)) * out.pass.R
	}
	r.Duty = d
	g1 := r.Response[0]
	r.Notes = append(r.Notes, fmt.Sprintf("At order 1 the outlet has %.3g %% of the bus voltage and lags it by %.3g degrees.", 100*g1.Ratio, g1.LagDeg))
}

// connection returns how the bank's capacitors are connected.
func (b *Bank) connection() string {
	if b.Connection == "" {
		return "delta"
	}
	return b.Connection
}
