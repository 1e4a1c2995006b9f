package handout

import (
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// NewResults collects in into the document of results.json. It fails, naming
// the item, when an outcome holds a value that is not a finite number.
func NewResults(in Input) (*Results, error) {
	b := &builder{}
	s := in.study()
	if s == nil {
		return nil, fmt.Errorf("results: no study to report on")
	}
	digest, err := in.digest()
	if err != nil {
		return nil, err
	}
	doc := &Results{
		Format:  ResultsFormat,
		Program: Program{Name: "Quietbus", Version: in.Version},
		Study: StudyInfo{
			Title: s.Title.Study, Client: s.Title.Client, Site: s.Title.Site, Author: s.Title.Author,
			Revision: s.Title.Revision, Date: s.Title.Date, Remarks: s.Title.Remarks,
			Invented: s.Title.Invented, SHA256: digest,
		},
		Settings: Settings{FrequencyHz: Num(s.FrequencyHz), MaxOrder: s.Order(), Summation: s.SummationWords()},
		Verdict:  []Verdict{},
	}
	for _, v := range in.verdict() {
		doc.Verdict = append(doc.Verdict, Verdict{v.Point, v.Bus, v.State.String(), v.Text, v.Before})
	}
	after := in.AfterStates
	if after == nil && in.After != nil {
		after = []*study.Outcome{in.After}
	}
	before := in.BeforeStates
	if before == nil && in.Before != nil && in.After != nil {
		before = []*study.Outcome{in.Before}
	}
	doc.States = b.operating(s, before, after)
	doc.Before = b.state("before", in.Before)
	doc.After = b.state("after", in.After)
	if doc.Provenance, doc.Defaults, err = inputs(s); err != nil {
		return nil, err
	}
	if b.err != nil {
		return nil, b.err
	}
	return doc, nil
}

// builder turns outcomes into the document's types and remembers the first
// value that is not finite.
type builder struct {
	where string
	err   error
}

func (b *builder) num(v float64) Num {
	if (math.IsNaN(v) || math.IsInf(v, 0)) && b.err == nil {
		b.err = fmt.Errorf("results: %s has a value that is not a finite number", b.where)
	}
	return Num(v)
}

func (b *builder) state(which string, o *study.Outcome) *State {
	if o == nil {
		return nil
	}
	s := &State{
		MeasuresOn: texts(o.On), MeetsAll: o.MeetsAll(), Warnings: texts(o.Warnings),
		Buses: []BusState{}, Elements: []ElementState{}, Points: []PointState{},
		Measures: []MeasureState{}, Scans: []ScanState{},
	}
	at := func(kind, name string) { b.where = fmt.Sprintf("%s, %s %s", which, kind, name) }
	for i := range o.Buses {
		at("bus", o.Buses[i].Name)
		s.Buses = append(s.Buses, b.bus(&o.Buses[i]))
	}
	for i := range o.Elements {
		e := &o.Elements[i]
		at(string(e.Kind), e.Name)
		s.Elements = append(s.Elements, b.element(e))
	}
	for i := range o.Points {
		at("assessment", o.Points[i].Name)
		s.Points = append(s.Points, b.point(&o.Points[i]))
	}
	for i := range o.Measures {
		at("measure", o.Measures[i].Name)
		s.Measures = append(s.Measures, b.measure(&o.Measures[i]))
	}
	for i := range o.Scans {
		at("scan", o.Scans[i].Name)
		s.Scans = append(s.Scans, b.scan(&o.Scans[i]))
	}
	b.where = which + ", check of the solution"
	s.Check = CheckState{b.num(o.Check.Residual), b.num(o.Check.Balance), o.Check.Fallback, o.Check.Rounds, b.num(o.Check.Reciprocity)}
	return s
}

func (b *builder) bus(r *study.BusResult) BusState {
	s := BusState{Name: r.Name, NominalV: b.num(r.NominalV), Live: r.Live}
	for i, p := range []*PhaseVoltage{&s.Phases.A, &s.Phases.B, &s.Phases.C} {
		x := r.Phase[i]
		base := cmplx.Abs(x.At(1))
		p.Percent, p.Degrees = b.polar(x, percentOf(base), base)
		p.FundamentalV, p.FundamentalDegrees = b.num(base), b.degrees(x.At(1))
		p.RMSV, p.THDPercent = b.num(phasor.RMS(x)), b.distortion(x)
	}
	base := cmplx.Abs(r.Seq[phasor.Positive].At(1))
	for q, p := range map[phasor.Sequence]*SequenceVoltage{
		phasor.Positive: &s.Sequences.Positive, phasor.Negative: &s.Sequences.Negative, phasor.Zero: &s.Sequences.Zero,
	} {
		x := r.Seq[q]
		p.Percent, p.Degrees = b.polar(x, percentOf(base), base)
		p.FundamentalV = b.num(cmplx.Abs(x.At(1)))
		if n := len(p.Degrees); n > 1 {
			p.FundamentalDegrees = p.Degrees[1]
		}
	}
	return s
}

func (b *builder) element(r *study.ElementResult) ElementState {
	s := ElementState{Name: r.Name, Kind: string(r.Kind), Ends: []EndState{}}
	for i := range r.Ends {
		e := &r.Ends[i]
		end := EndState{Bus: e.Bus, Phases: Phases[Current]{b.current(e.Phase[0]), b.current(e.Phase[1]), b.current(e.Phase[2])}}
		if e.Neutral != nil {
			n := b.current(e.Neutral)
			end.Neutral = &n
		}
		s.Ends = append(s.Ends, end)
	}
	return s
}

func (b *builder) current(x phasor.Spectrum) Current {
	c := Current{RMSA: b.num(phasor.RMS(x)), THDPercent: b.distortion(x)}
	c.A, c.Degrees = b.polar(x, 1, phasor.RMS(x))
	return c
}

func (b *builder) point(r *study.PointResult) PointState {
	s := PointState{
		Name: r.Name, Bus: r.Bus, Set: r.Set, SetTitle: r.SetTitle, State: r.State().String(),
		IscA: b.num(r.IscA), DemandA: b.num(r.ILA), Rows: []LimitRow{}, NotAssessed: texts(r.NotAssessed),
	}
	for _, row := range r.Rows {
		s.Rows = append(s.Rows, LimitRow{
			Name: study.RowName(row), Quantity: row.Quantity, Order: row.Order, Index: row.Index, Phase: row.Phase,
			Value: b.num(row.Value), Limit: b.num(row.Limit), Unit: row.Unit, Share: b.num(row.Share),
			Verdict: rowVerdict(row), Rule: row.Rule, Mark: string(row.Mark),
		})
	}
	return s
}

func rowVerdict(r limits.Row) string {
	if r.Meets() {
		return "meets"
	}
	return "over"
}

func (b *builder) measure(r *study.MeasureResult) MeasureState {
	s := MeasureState{
		Name: r.Name, Kind: r.Kind, Bus: r.Bus, Saturated: r.Saturated, Notes: texts(r.Notes),
		Components: []PartState{}, Response: []GainState{},
	}
	for _, c := range r.Components {
		s.Components = append(s.Components, PartState{c.Part, c.Symbol, b.num(c.Value), unitOf(c.Symbol), c.Note})
	}
	if d := r.Duty; d != nil {
		s.Duty = &DutyState{
			FundamentalA: b.num(d.CurrentA1), RMSA: b.num(d.CurrentA), RatedA: b.num(d.RatedA),
			FundamentalV: b.num(d.VoltageV1), RMSV: b.num(d.VoltageV), PeakV: b.num(d.PeakV), RatedV: b.num(d.RatedV),
			FundamentalW: b.num(d.LossW1), LossW: b.num(d.LossW),
			RatedKvar: b.num(d.KvarRated), OutputKvar: b.num(d.KvarOutput),
		}
	}
	for _, g := range r.Response {
		s.Response = append(s.Response, GainState{g.Order, b.num(g.Ratio), b.num(g.LagDeg)})
	}
	return s
}

// unitOf returns the SI unit of a component by its symbol.
func unitOf(symbol string) string {
	switch symbol {
	case "C":
		return "F"
	case "L":
		return "H"
	}
	return "ohm"
}

func (b *builder) scan(r *study.ScanResult) ScanState {
	s := ScanState{
		Name: r.Name, Bus: r.Bus, At: r.At, Sequence: r.Sequence.String(),
		Orders: []Num{}, Ohm: []Num{}, Degrees: []Num{}, Peaks: b.peaks(r.Peaks), Valleys: b.peaks(r.Valleys),
	}
	for i, h := range r.Orders {
		s.Orders = append(s.Orders, b.num(h))
		s.Ohm = append(s.Ohm, b.num(cmplx.Abs(r.Z[i])))
		s.Degrees = append(s.Degrees, b.degrees(r.Z[i]))
	}
	return s
}

func (b *builder) peaks(ps []study.Peak) []PeakState {
	out := []PeakState{}
	for _, p := range ps {
		x := PeakState{Order: b.num(p.Order), Ohm: b.num(p.Ohm), Q: b.num(p.Q),
			Capacitive: append([]string{}, p.Capacitive...), Inductive: append([]string{}, p.Inductive...), Buses: []BusPart{}}
		for _, at := range p.Buses {
			x.Buses = append(x.Buses, BusPart{at.Bus, b.num(at.Share)})
		}
		out = append(out, x)
	}
	return out
}

// negligible is the share of a signal below which a value is numerical noise:
// it is written as nought, so that its angle does not differ from one machine
// to the next.
const negligible = 1e-12

// polar returns magnitude times scale and degrees of each order.
func (b *builder) polar(x phasor.Spectrum, scale, base float64) (magnitude, degrees []Num) {
	magnitude, degrees = make([]Num, len(x)), make([]Num, len(x))
	for h, v := range x {
		if cmplx.Abs(v) <= negligible*base {
			continue
		}
		magnitude[h] = b.num(cmplx.Abs(v) * scale)
		degrees[h] = b.degrees(v)
	}
	return magnitude, degrees
}

func (b *builder) degrees(v complex128) Num { return b.num(cmplx.Phase(v) * 180 / math.Pi) }

// distortion returns the THD in per cent, 0 without a fundamental.
func (b *builder) distortion(x phasor.Spectrum) Num {
	if x.At(1) == 0 {
		return 0
	}
	return b.num(100 * phasor.THD(x))
}

// percentOf returns the factor from a value to per cent of base.
func percentOf(base float64) float64 {
	if base == 0 {
		return 0
	}
	return 100 / base
}

// texts returns list, empty instead of nil.
func texts(list []string) []string {
	if list == nil {
		return []string{}
	}
	return list
}
