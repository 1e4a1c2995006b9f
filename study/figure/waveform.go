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

// Waveform shows one period of phase a (or of the first phase that carries
// anything), synthesised from the spectrum, before beside after.
func Waveform(before, after *study.Outcome, sel Selection) *Figure {
	f := &Figure{Key: "waveform-" + sel.key(), Title: "Waveform of the " + sel.Name(), Size: vg.Point{X: 480, Y: 220}}
	var curves [2][]float64
	phase, hz := 0, 50.0
	for _, o := range []*study.Outcome{before, after} {
		if o != nil {
			hz = o.Study.FrequencyHz
			if p, ok := sel.phases(o); ok {
				phase = firstCarrying(p)
			}
		}
	}
	crest := ""
	for i, o := range []*study.Outcome{before, after} {
		if p, ok := sel.phases(o); ok {
			curves[i] = phasor.Synthesize(p[phase], samples, nil)
			crest += fmt.Sprintf(" Crest factor %.3g %s.", phasor.Crest(p[phase]), [2]string{"before", "after"}[i])
		}
	}
	name := [3]string{"a", "b", "c"}[phase]
	f.Caption = fmt.Sprintf("One period of phase %s, synthesised from the spectrum.%s", name, crest)
	unit := "V, line to neutral, phase " + name
	if sel.Element != "" {
		unit = "A, phase " + name
	}
	f.Draw = func(c draw.Canvas, st *Style) []Hot {
		return drawWaveform(newPen(c, st), sel, curves, unit, 1000/hz)
	}
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

func drawWaveform(p *pen, sel Selection, curves [2][]float64, unit string, period float64) []Hot {
	if curves[0] == nil && curves[1] == nil {
		return p.empty("Nothing to show for the " + sel.Name() + ".\nIt has no supply or does not stand with these measures.")
	}
	top := 0.0
	for _, c := range curves {
		for _, v := range c {
			top = math.Max(top, math.Abs(v))
		}
	}
	x := p.open("", unit, "ms")
	x.key(curves[0] != nil, curves[1] != nil, [2]string{})
	x.x0, x.x1 = 0, period
	x.scaleY(top, true)
	x.base(0)
	step := niceStep(period / 5)
	for i := 0.0; i*step <= period*1.0001; i++ {
		x.labelX(i*step, tick(i*step, step))
	}
	for i, c := range curves {
		if c == nil {
			continue
		}
		var path vg.Path
		for k := 0; k <= len(c); k++ {
			q := vg.Point{X: x.x(period * float64(k) / float64(len(c))), Y: x.y(c[k%len(c)])}
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
	const parts = 32
	for k := range parts {
		t0, t1 := period*float64(k)/parts, period*float64(k+1)/parts
		at := (2*k + 1) * samples / (2 * parts)
		text := fmt.Sprintf("%s ms", number((t0+t1)/2))
		for i, c := range curves {
			if c != nil {
				text += "\n" + [2]string{"before", "after"}[i] + "\t" + number(c[at]) + " " + unit[:1]
			}
		}
		x.hot(rect(x.x(t0), x.area.Min.Y, x.x(t1), x.area.Max.Y), "value", fmt.Sprint("t", k), text)
	}
	return p.hots
}
