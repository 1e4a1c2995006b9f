package figure

import (
	"math/cmplx"
	"slices"

	"quietbus/study"
	"quietbus/study/phasor"
)

// Input is what a whole figure set is made from. Before may be nil. The scans
// are driving-point impedances, with and without the measures, of whichever
// buses they are at hand for.
type Input struct {
	Before, After           *study.Outcome
	ScansBefore, ScansAfter []*study.ScanResult
}

// All returns the figure set of a study in print order, each with its caption:
// the single-line, the margins, at each assessed bus its voltage, impedance and
// current, the other scans, the duties and what low-pass measures let through.
// It is empty without an outcome.
func All(in Input) []*Figure {
	o := in.After
	if o == nil {
		return nil
	}
	list := []*Figure{SingleLine(o.Study, in.Before, o, nil, View{Plain: true})}
	if len(o.Points) > 0 {
		list = append(list, Margins(in.Before, o))
	}
	sources := Sources(o)
	var shown []*study.ScanResult
	scan := func(now *study.ScanResult) {
		if slices.Contains(shown, now) {
			return
		}
		shown = append(shown, now)
		var was []*study.ScanResult
		if k := slices.IndexFunc(in.ScansBefore, func(r *study.ScanResult) bool {
			return r.Bus == now.Bus && r.At == now.At && r.Sequence == now.Sequence
		}); k >= 0 {
			was = in.ScansBefore[k : k+1]
		}
		f := Impedance(was, []*study.ScanResult{now}, sources)
		if now.Sequence != phasor.Positive {
			f.Key += "-" + now.Sequence.String()
		}
		list = append(list, f)
	}
	var done []Selection
	wave := func(sel Selection) {
		if !slices.Contains(done, sel) {
			done = append(done, sel)
			list = append(list, Spectrum(in.Before, o, sel), Waveform(in.Before, o, sel))
		}
	}
	for i := range o.Study.Assessments {
		a := &o.Study.Assessments[i]
		wave(Selection{Bus: a.Bus})
		for _, r := range in.ScansAfter {
			if r.Bus == a.Bus && r.At == "" && r.Sequence == phasor.Positive {
				scan(r)
			}
		}
		if a.Current != "" {
			wave(Selection{Element: a.Current, Bus: a.Bus})
		}
	}
	for _, r := range in.ScansAfter {
		scan(r)
	}
	list = append(list, Duty(in.Before, o))
	for i := range o.Measures {
		if m := &o.Measures[i]; len(m.Response) > 0 {
			list = append(list, Response(o, m.Name))
		}
	}
	return list
}

// Sources lists the orders at which a non-linear load draws more than 1 % of
// its own fundamental, rising.
func Sources(o *study.Outcome) (orders []int) {
	if o == nil {
		return nil
	}
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
