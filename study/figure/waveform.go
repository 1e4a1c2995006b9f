package figure

import (
	"fmt"
	"math"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
	"quietbus/study/phasor"
)

// samples of one period in a waveform figure.
const samples = 256

// waveform is what one such figure shows.
type waveform struct {
	curves  [2][]float64 // one period, before and after; nil where there is none
	unit    string       // "V" or "A"
	title   string       // of the y axis, after the unit
	period  float64      // ms
	periods int
}

// Waveform shows a period (or two) of one phase, synthesised from the spectrum,
// before beside after.
func Waveform(before, after *study.Outcome, sel Selection) *Figure {
	f := &Figure{Key: "waveform-" + sel.key(), Title: "Waveform of the " + sel.Name(), Size: vg.Point{X: 480, Y: 220}}
	phase, hz := max(sel.phase(), 0), 50.0
	for _, o := range []*study.Outcome{before, after} {
		if o != nil {
			hz = o.Study.FrequencyHz
			if p, ok := sel.phases(o); ok && sel.phase() < 0 {
				phase = firstCarrying(p)
			}
		}
	}
	w := &waveform{period: 1000 / hz, periods: min(max(sel.Periods, 1), 2)}
	crest := ""
	for i, o := range []*study.Outcome{before, after} {
		p, ok := sel.phases(o)
		if !ok {
			continue
		}
		w.curves[i] = phasor.Synthesize(p[phase], samples, nil)
		if c := phasor.Crest(p[phase]); c > 0 {
			crest += fmt.Sprintf(" Crest factor %s %s.", number(c), [2]string{"before", "after"}[i])
		}
	}
	w.unit, w.title = "V", ", line to neutral, phase "+phaseNames[phase]
	if sel.Element != "" {
		w.unit, w.title = "A", ", phase "+phaseNames[phase]
	}
	many := "One period"
	if w.periods == 2 {
		many = "Two periods"
	}
	f.Caption = fmt.Sprintf("%s of phase %s, synthesised from the spectrum.%s%s", many, phaseNames[phase], crest, summedWave(after))
	f.Draw = func(c draw.Canvas, st *Style) []Hot { return w.draw(newPen(c, st), sel) }
	return f
}

func firstCarrying(p [3]phasor.Spectrum) int {
	for i := range p {
		if phasor.RMS(p[i]) > 0 {
			return i
		}
	}
	return 0
}

func (w *waveform) draw(p *pen, sel Selection) []Hot {
	if w.curves[0] == nil && w.curves[1] == nil {
		return p.empty("Nothing to show for the " + sel.Name() + ".\nIt has no supply or does not stand with these measures.")
	}
	top := 0.0
	for _, c := range w.curves {
		for _, v := range c {
			top = math.Max(top, math.Abs(v))
		}
	}
	unit, scale := w.unit, 1.0
	if top >= 5000 {
		unit, scale = "k"+unit, 1000
	}
	span := w.period * float64(w.periods)
	x := p.open(unit+w.title, "time, ms")
	x.key(w.curves[0] != nil, w.curves[1] != nil)
	x.x0, x.x1 = 0, span
	x.scaleY(top/scale, true)
	x.base(0)
	step := niceStep(span / 5)
	for i := 0.0; i*step <= span*1.0001; i++ {
		x.labelX(i*step, tick(i*step, step))
	}
	for _, i := range []int{1, 0} { // before, thin, over after, bold: both are seen where they agree
		c := w.curves[i]
		if c == nil {
			continue
		}
		n := len(c) * w.periods
		path := make(vg.Path, 0, n+1)
		for k := 0; k <= n; k++ {
			q := vg.Point{X: x.x(span * float64(k) / float64(n)), Y: x.y(c[k%len(c)] / scale)}
			if k == 0 {
				path.Move(q)
			} else {
				path.Line(q)
			}
		}
		if i == 0 {
			x.strokePath(x.st.Line, x.st.Before, nil, path)
		} else {
			x.strokePath(x.st.Bold, x.st.After, nil, path)
		}
	}
	w.readouts(x)
	return p.hots
}

// readouts lays strips over the area that say the values in their middle.
func (w *waveform) readouts(x *axes) {
	parts := 32 * w.periods
	span := w.period * float64(w.periods)
	for k := range parts {
		t0, t1 := span*float64(k)/float64(parts), span*float64(k+1)/float64(parts)
		text := number((t0+t1)/2) + " ms"
		for i, c := range w.curves {
			if c != nil {
				at := (2*k + 1) * samples * w.periods / (2 * parts) % samples
				text += "\n" + [2]string{"before", "after"}[i] + "\t" + number(c[at]) + " " + w.unit
			}
		}
		x.hot(rect(x.x(t0), x.area.Min.Y, x.x(t1), x.area.Max.Y), "value", fmt.Sprint("t", k), text)
	}
}
