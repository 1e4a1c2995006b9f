package figure

import (
	"math"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
)

// feeder draws a transformer, cable, reactor or coupler between two buses.
func (d *diagram) feeder(f *Feeder) {
	from, to := d.lay.Bus(f.From), d.lay.Bus(f.To)
	switch {
	case from == nil || to == nil:
	case f.straight(from, to):
		middle := to.Y - to.Head - 0.3
		switch f.Kind {
		case study.KindTransformer:
			middle -= 1.15
		case study.KindReactor, study.KindCoupler:
			middle -= 0.45
		}
		d.stroke(d.st.Line, d.st.Ink, nil, at2(f.X, from.Y), at2(f.X, to.Y))
		end := px(max(f.X+feederPitch-1, to.X+columnWidth))
		if _, of := d.among(f); of > 1 {
			end = px(f.X + feederPitch - 1)
		}
		d.upright(f, at2(f.X, max(middle, from.Y+1.4)), end)
	case f.sideways(from, to):
		d.hung(f, from, to)
	default:
		d.tie(f)
	}
}

// upright draws the symbol of a feeder on a line that leads down, with its
// words to the right, as far as end.
func (d *diagram) upright(f *Feeder, q vg.Point, end vg.Length) {
	d.device(f, q, true)
	words := d.feederWords(f)
	if f.Kind != study.KindTransformer {
		x, half := q.X+13, vg.Length(9)
		if f.Kind == study.KindCable {
			x, half = q.X+6, 6
		}
		far := d.inline(x, q.Y, end, words)
		d.feederHot(f, rect(q.X-10, q.Y-half, far, q.Y+half), words)
		return
	}
	size, x := d.st.Body, q.X+13
	first, second := d.fit(size, end-x, words[0]), d.fit(size, end-x, words[1])
	d.write(x, q.Y+5, left, size, d.st.Ink, first)
	d.write(x, q.Y-5, left, size, d.st.Muted, second)
	d.feederHot(f, rect(q.X-10, q.Y-14, x+max(d.width(size, first), d.width(size, second)), q.Y+14), words)
}

// inline writes a feeder's name and size on one line as far as end, and returns
// where they end.
func (d *diagram) inline(x, y, end vg.Length, words [2]string) vg.Length {
	size := d.st.Body
	first := d.fit(size, end-x, words[0])
	d.write(x, y, left, size, d.st.Ink, first)
	x += d.width(size, first)
	if second := d.fit(size, end-x-5, words[1]); second != "" {
		d.write(x+5, y, left, size, d.st.Muted, second)
		x += 5 + d.width(size, second)
	}
	return x
}

// hung draws a feeder from the trunk under its bus to the left end of a bar,
// with its words above those of that bus.
func (d *diagram) hung(f *Feeder, from, to *PlacedBus) {
	n, of := d.among(f)
	trunk := from.X + from.Stem
	y := to.Y - 1.2*float64(n)
	end := at2(to.X, y)
	d.stroke(d.st.Line, d.st.Ink, nil, at2(trunk, y), end, at2(to.X, to.Y))
	q := vg.Point{X: (px(trunk) + end.X) / 2, Y: end.Y}
	d.device(f, q, false)
	words := d.feederWords(f)
	top := -px(to.Y-to.Head-hangLabel*(0.5+float64(of-1-n))) - 1
	x := px(to.X)
	far := d.inline(x, top, px(to.X+columnWidth), words)
	d.feederHot(f, rect(px(trunk)+2, q.Y-7, end.X-1, q.Y+7), words)
	d.hot(rect(x, top-5, far, top+5), "item", f.Name, d.feederText(f, words))
}

// among returns the place of a feeder among those in parallel and how many they
// are.
func (d *diagram) among(f *Feeder) (n, of int) {
	for i := range d.lay.Feeders {
		if g := &d.lay.Feeders[i]; g.Tree && g.To == f.To && g.From == f.From {
			if g.Name == f.Name {
				n = of
			}
			of++
		}
	}
	return n, of
}

// tie draws a connection that closes a loop, along its way; its symbol stands
// in the middle of the longest piece, its words above it.
func (d *diagram) tie(f *Feeder) {
	if len(f.Way) < 2 {
		return
	}
	points := make([]vg.Point, len(f.Way))
	longest, at := -1.0, 1
	for i, w := range f.Way {
		points[i] = at2(w.X, w.Y)
		if i > 0 {
			if l := math.Hypot(w.X-f.Way[i-1].X, w.Y-f.Way[i-1].Y); l > longest+0.01 {
				longest, at = l, i
			}
		}
	}
	d.stroke(d.st.Line, d.st.Ink, nil, points...)
	p, q := points[at-1], points[at]
	middle := vg.Point{X: (p.X + q.X) / 2, Y: (p.Y + q.Y) / 2}
	upright := abs(p.X-q.X) < abs(p.Y-q.Y)
	d.device(f, middle, upright)
	words := d.feederWords(f)
	size := d.st.Body
	up := vg.Length(15)
	switch {
	case f.Kind == study.KindTransformer && upright:
		up = 20
	case f.Kind == study.KindCable && !upright:
		up = 9
	}
	w := d.width(size, words[0])
	d.patch(middle.X-w/2, middle.Y+up, size, d.st.Ink, false, words[0])
	d.feederHot(f, rect(middle.X-max(w/2, 9), middle.Y-9, middle.X+max(w/2, 9), middle.Y+up+5), words)
}

// device draws the symbol of a feeder on its line.
func (d *diagram) device(f *Feeder, q vg.Point, upright bool) {
	switch f.Kind {
	case study.KindTransformer:
		u := vg.Length(8)
		if !upright {
			u = 6
		}
		d.transformer(q, u, d.st.Line, d.st.Ink, upright)
	case study.KindReactor:
		if upright {
			d.fill(rect(q.X-1.5, q.Y-8, q.X+1.5, q.Y+8), d.st.Ground)
			d.coilDown(q, 8, d.st.Line, d.st.Ink)
		} else {
			d.fill(rect(q.X-8, q.Y-1.5, q.X+8, q.Y+1.5), d.st.Ground)
			d.coil(q, 8, d.st.Line, d.st.Ink)
		}
	case study.KindCoupler:
		d.couplerSwitch(f, q, upright)
	default:
		d.fillPath(d.st.Ink, circle(q, 2))
	}
}

// feederWords names a feeder and says its size.
func (d *diagram) feederWords(f *Feeder) [2]string { return [2]string{f.Name, d.sizes[f.Name]} }

func (d *diagram) feederText(f *Feeder, words [2]string) string {
	return f.Name + "\n" + study.InfoOf(f.Kind).Singular + "\n" + words[1]
}

func (d *diagram) feederHot(f *Feeder, r vg.Rectangle, words [2]string) {
	d.frame(f.Name, r)
	d.hot(r, "item", f.Name, d.feederText(f, words))
}

// couplerSwitch is a square with a contact in it, closed or open.
func (d *diagram) couplerSwitch(f *Feeder, q vg.Point, upright bool) {
	d.fill(rect(q.X-7, q.Y-7, q.X+7, q.Y+7), d.st.Ground)
	d.box(rect(q.X-7, q.Y-7, q.X+7, q.Y+7), d.st.Line, d.st.Ink, nil)
	a, b := vg.Point{X: -5, Y: -2}, vg.Point{X: 4, Y: 5}
	if d.sizes[f.Name] == isClosed {
		a, b = vg.Point{X: -7}, vg.Point{X: 7}
	}
	if upright {
		a, b = vg.Point{X: a.Y, Y: a.X}, vg.Point{X: b.Y, Y: b.X}
	}
	d.stroke(d.st.Bold, d.st.Ink, nil, q.Add(a), q.Add(b))
}
