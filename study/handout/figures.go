package handout

import (
	"context"
	"math/cmplx"
	"slices"

	"quietbus/study"
	"quietbus/study/figure"
	"quietbus/study/phasor"
)

// drawn is a figure of the handout; a wide one takes a page's whole width.
type drawn struct {
	*figure.Figure
	wide bool
}

// figureSheet is a page of figures that belong together.
type figureSheet struct {
	title   string
	figures []drawn
}

// rows pairs the figures that are not wide.
func (s *figureSheet) rows() (rows [][]drawn) {
	for _, f := range s.figures {
		if n := len(rows); n > 0 && !f.wide && len(rows[n-1]) == 1 && !rows[n-1][0].wide {
			rows[n-1] = append(rows[n-1], f)
			continue
		}
		rows = append(rows, []drawn{f})
	}
	return rows
}

// figureSet holds every figure of a handout.
type figureSet struct {
	single  *drawn
	margins *drawn
	sheets  []figureSheet
}

// all lists the figures, each key once.
func (s *figureSet) all() (list []drawn) {
	for _, f := range []*drawn{s.single, s.margins} {
		if f != nil {
			list = append(list, *f)
		}
	}
	for _, sh := range s.sheets {
		for _, f := range sh.figures {
			if !slices.ContainsFunc(list, func(d drawn) bool { return d.Key == f.Key }) {
				list = append(list, f)
			}
		}
	}
	return list
}

// figures draws up every figure: the single-line, the margins, and for each
// assessment point its voltage, impedance and, where assessed, current.
func figures(ctx context.Context, in *Input, before *study.Outcome) (*figureSet, error) {
	s, after := in.study(), in.After
	set := &figureSet{}
	look := &scans{study: s}
	peaks, err := look.peaks(ctx, after)
	if err != nil {
		return nil, err
	}
	if f := figure.SingleLine(s, before, after, nil, figure.View{Plain: true, Resonances: peaks}); f.Size.X > 0 && f.Size.Y > 0 {
		set.single = &drawn{f, true}
	}
	if len(after.Points) > 0 {
		set.margins = &drawn{figure.Margins(before, after), true}
	}
	var done []string
	for i := range s.Assessments {
		a := &s.Assessments[i]
		if !slices.Contains(done, a.Bus) {
			done = append(done, a.Bus)
			sh, err := busFigures(ctx, look, before, after, a.Bus)
			if err != nil {
				return nil, err
			}
			set.sheets = append(set.sheets, sh)
		}
		if a.Current != "" {
			sel := figure.Selection{Element: a.Current, Bus: a.Bus}
			set.sheets = append(set.sheets, figureSheet{"Current of " + a.Current + " at " + a.Bus, []drawn{
				{figure.Spectrum(before, after, sel), true}, {figure.Waveform(before, after, sel), true},
			}})
		}
	}
	if rest := scanFigures(before, after, done); len(rest) > 0 {
		for i := 0; i < len(rest); i += 4 {
			set.sheets = append(set.sheets, figureSheet{"Impedance scans", rest[i:min(i+4, len(rest))]})
		}
	}
	return set, nil
}

// scanFigures returns the impedances that the study asks for and that no bus
// in shown shows.
func scanFigures(before, after *study.Outcome, shown []string) (list []drawn) {
	for i := range after.Scans {
		now := &after.Scans[i]
		if now.At == "" && now.Sequence == phasor.Positive && slices.Contains(shown, now.Bus) {
			continue
		}
		var old []*study.ScanResult
		if before != nil && i < len(before.Scans) && before.Scans[i].Name == now.Name {
			old = scanList(&before.Scans[i])
		}
		f := figure.Impedance(old, scanList(now), injected(after))
		f.Key += "-" + now.Sequence.String()
		list = append(list, drawn{f, false})
	}
	return list
}

// busFigures returns the voltage and the impedance at one bus.
func busFigures(ctx context.Context, look *scans, before, after *study.Outcome, bus string) (figureSheet, error) {
	sel := figure.Selection{Bus: bus}
	sh := figureSheet{"Bus " + bus, []drawn{{figure.Spectrum(before, after, sel), true}, {figure.Waveform(before, after, sel), false}}}
	now, err := look.at(ctx, after, bus)
	if err != nil {
		return sh, err
	}
	var old *study.ScanResult
	if before != nil {
		if old, err = look.at(ctx, before, bus); err != nil {
			return sh, err
		}
	}
	if now != nil {
		sh.figures = append(sh.figures, drawn{figure.Impedance(scanList(old), scanList(now), injected(after)), false})
	}
	return sh, nil
}

// injected lists the orders at which a non-linear load draws more than 1 % of
// its own fundamental.
func injected(o *study.Outcome) (orders []int) {
	for i := range o.Elements {
		e := &o.Elements[i]
		if e.Kind != study.KindNonlinearLoad || len(e.Ends) == 0 {
			continue
		}
		for _, x := range e.Ends[0].Phase {
			for h := 2; h < len(x); h++ {
				if cmplx.Abs(x[h]) > 0.01*cmplx.Abs(x[1]) && !slices.Contains(orders, h) {
					orders = append(orders, h)
				}
			}
		}
	}
	slices.Sort(orders)
	return orders
}

func scanList(r *study.ScanResult) []*study.ScanResult {
	if r == nil {
		return nil
	}
	return []*study.ScanResult{r}
}

// scans finds impedances: those the study asked for, or made on the spot.
type scans struct {
	study    *study.Study
	prepared *study.Prepared // nil until one is made
	seen     map[*study.Outcome]map[string]*study.ScanResult
}

// peaks returns the resonances that show at the assessed buses.
func (s *scans) peaks(ctx context.Context, o *study.Outcome) (list []study.Peak, err error) {
	for i := range s.study.Assessments {
		r, err := s.at(ctx, o, s.study.Assessments[i].Bus)
		if err != nil {
			return nil, err
		}
		if r != nil {
			list = append(list, r.Peaks...)
		}
	}
	return list, nil
}

// at returns the positive-sequence impedance at a bus, nil for a bus without
// supply.
func (s *scans) at(ctx context.Context, o *study.Outcome, bus string) (*study.ScanResult, error) {
	for i := range o.Scans {
		if r := &o.Scans[i]; r.Bus == bus && r.At == "" && r.Sequence == phasor.Positive {
			return r, nil
		}
	}
	if b := o.Bus(bus); b == nil || !b.Live {
		return nil, nil
	}
	if s.prepared == nil {
		p, err := study.Prepare(s.study)
		if err != nil {
			return nil, err
		}
		s.prepared = p
	}
	if r := s.seen[o][bus]; r != nil {
		return r, nil
	}
	r, err := s.prepared.Impedance(ctx, o.On, bus, phasor.Positive, 1, float64(s.study.Order()))
	if err == nil {
		if s.seen == nil {
			s.seen = map[*study.Outcome]map[string]*study.ScanResult{}
		}
		if s.seen[o] == nil {
			s.seen[o] = map[string]*study.ScanResult{}
		}
		s.seen[o][bus] = r
	}
	return r, err
}
