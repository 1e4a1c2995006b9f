package figure

import (
	"fmt"
	"image/color"
	"slices"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
)

// View says what is marked on a single-line.
type View struct {
	Selected string // name of the item that is framed
	Plain    bool   // no switches: for paper
}

// SingleLine draws the study as a single-line diagram with IEC 60617 symbols:
// each bus with its distortion before and after and a small spectrum, each
// measure where it would stand, dashed while off. A nil layout is made by
// Tidy; before and after may be nil. The figure fits itself into its canvas;
// Size is its natural size.
func SingleLine(s *study.Study, before, after *study.Outcome, lay *Layout, view View) *Figure {
	if lay == nil {
		lay = Tidy(s)
	}
	f := &Figure{Key: "single-line", Title: "Single-line", Size: vg.Point{X: vg.Length(lay.W) * Step, Y: vg.Length(lay.H) * Step},
		Caption: "Each bus with its THD before and after. Measures stand dashed while off. Symbols after IEC 60617."}
	f.Draw = func(c draw.Canvas, st *Style) []Hot {
		p := newPen(c, st)
		if len(s.Buses) == 0 {
			return p.empty("No bus yet.\nAdd a supply and a bus to begin.")
		}
		w, h := c.Max.X-c.Min.X, c.Max.Y-c.Min.Y
		k := min(w/f.Size.X, h/f.Size.Y)
		ox, oy := c.Min.X+(w-k*f.Size.X)/2, c.Max.Y-(h-k*f.Size.Y)/2
		c.Push()
		c.Translate(vg.Point{X: ox, Y: oy})
		c.Scale(float64(k), float64(k))
		d := &diagram{pen: &pen{c: c, st: st}, s: s, before: before, after: after, lay: lay, view: view}
		d.draw()
		c.Pop()
		for i := range d.hots {
			r := &d.hots[i].Rect
			r.Min = vg.Point{X: ox + k*r.Min.X, Y: oy + k*r.Min.Y}
			r.Max = vg.Point{X: ox + k*r.Max.X, Y: oy + k*r.Max.Y}
		}
		return d.hots
	}
	return f
}

// diagram draws with the origin at the top left and y downwards negative.
type diagram struct {
	*pen
	s             *study.Study
	before, after *study.Outcome
	lay           *Layout
	view          View
}

func px(v float64) vg.Length { return vg.Length(v) * Step }

func at2(x, y float64) vg.Point { return vg.Point{X: px(x), Y: -px(y)} }

func (d *diagram) draw() {
	for i := range d.lay.Feeders {
		d.feeder(&d.lay.Feeders[i])
	}
	for i := range d.lay.Supplies {
		d.supply(&d.lay.Supplies[i])
	}
	for i := range d.lay.Buses {
		d.bus(&d.lay.Buses[i])
	}
}

func (d *diagram) frame(name string, r vg.Rectangle) {
	if name == d.view.Selected && name != "" {
		d.box(rect(r.Min.X-2, r.Min.Y-2, r.Max.X+2, r.Max.Y+2), d.st.Line, d.st.Accent, []vg.Length{3, 2})
	}
}

func (d *diagram) supply(s *PlacedSupply) {
	b := d.lay.Bus(s.Bus)
	q := at2(s.X, s.Y)
	d.stroke(d.st.Line, d.st.Ink, nil, vg.Point{X: q.X, Y: q.Y - 8}, at2(s.X, b.Y))
	d.infeed(q, 8, d.st.Line, d.st.Ink)
	for _, x := range d.s.Supplies {
		if x.Name == s.Name {
			level := plain(x.FaultMVA) + " MVA"
			if x.FaultKA > 0 {
				level = plain(x.FaultKA) + " kA"
			}
			d.writeBold(q.X+13, q.Y+4.5, left, d.st.Small, d.st.Ink, s.Name)
			d.write(q.X+13, q.Y-5, left, d.st.Small, d.st.Muted, level+", X/R "+plain(x.XOverR))
		}
	}
	r := rect(q.X-10, q.Y-10, q.X+14+d.width(d.st.Small, s.Name), q.Y+10)
	d.frame(s.Name, r)
	d.hot(r, "item", s.Name, s.Name+"\nsupply")
}

// bus draws the bar, its words and what hangs below it.
func (d *diagram) bus(b *PlacedBus) {
	y := -px(b.Y)
	x0, x1 := px(b.X), px(b.X+b.W)
	ink := d.st.Ink
	was, now := d.result(d.before, b.Name), d.result(d.after, b.Name)
	dead := now != nil && !now.Live
	if dead {
		ink = d.st.Muted
	}
	d.fill(rect(x0, y-1.3, x1, y+1.3), ink)
	text := d.wordsAt(b)
	d.writeBold(text, y+24, left, d.st.Head, ink, d.fit(d.st.Head, x1-text-44, b.Name))
	words := d.voltage(b.Name)
	switch {
	case dead:
		words += "   no supply"
	case now != nil:
		words += "   THD "
		if was != nil && was.Live && d.before != d.after {
			words += number(100*was.THD()) + " → "
		}
		words += number(100*now.THD()) + " %"
	}
	d.write(text, y+11, left, d.st.Small, d.st.Muted, words)
	if over, times := d.over(b.Name); over {
		at := vg.Point{X: text + d.st.text(d.st.Head, ink, true, false).Width(b.Name) + 12, Y: y + 24}
		if at.X+46 > x1-44 { // no room beside the name and the small spectrum
			at = vg.Point{X: text + d.width(d.st.Small, words) + 11, Y: y + 11}
		}
		var path vg.Path
		path.Move(vg.Point{X: at.X, Y: at.Y + 5})
		path.Line(vg.Point{X: at.X + 5, Y: at.Y})
		path.Line(vg.Point{X: at.X, Y: at.Y - 5})
		path.Line(vg.Point{X: at.X - 5, Y: at.Y})
		path.Close()
		d.fillPath(d.st.Over, path)
		d.writeBold(at.X+8, at.Y, left, d.st.Small, d.st.Over, fmt.Sprintf("over %.2g×", times))
	}
	d.sparkline(rect(x1-40, y+17, x1, y+33), was, now)
	r := rect(x0, y-3, x1, y+30)
	d.frame(b.Name, r)
	d.hot(r, "bus", b.Name, d.busText(b.Name, was, now))
	d.rake(b)
}

// wordsAt returns where the words of a bus begin: right of a feeder that comes
// down at the bar's left end, so that no line crosses text.
func (d *diagram) wordsAt(b *PlacedBus) vg.Length {
	x := px(b.X)
	for i := range d.lay.Feeders {
		if f := &d.lay.Feeders[i]; f.Tree && f.To == b.Name && f.X >= b.X && f.X < b.X+2 {
			x = px(f.X) + 6
		}
	}
	return x
}

func (d *diagram) result(o *study.Outcome, bus string) *study.BusResult {
	if o == nil {
		return nil
	}
	return o.Bus(bus)
}

func (d *diagram) voltage(bus string) string {
	for _, b := range d.s.Buses {
		if b.Name == bus {
			if b.NominalKV < 1 {
				return plain(1000*b.NominalKV) + " V"
			}
			return plain(b.NominalKV) + " kV"
		}
	}
	return ""
}

// over reports whether a limit at the bus is exceeded after, and the worst
// multiple.
func (d *diagram) over(bus string) (bool, float64) {
	worst := 0.0
	if d.after != nil {
		for i := range d.after.Points {
			if p := &d.after.Points[i]; p.Bus == bus {
				for _, r := range p.Rows {
					worst = max(worst, r.Share)
				}
			}
		}
	}
	return worst > 1, worst
}

func (d *diagram) busText(name string, was, now *study.BusResult) string {
	text := name + "\n" + d.voltage(name)
	if was != nil && was.Live && d.before != d.after {
		text += "\nTHD before\t" + number(100*was.THD()) + " %"
	}
	if now != nil && now.Live {
		text += map[bool]string{true: "\nTHD\t", false: "\nTHD after\t"}[was == nil || d.before == d.after] + number(100*now.THD()) + " %"
	}
	return text
}

// sparkline is a small spectrum: before thin beside after solid, orders 2 to 25.
func (d *diagram) sparkline(r vg.Rectangle, was, now *study.BusResult) {
	b := series{}
	a := series{}
	top := 0.0
	for i, x := range []*study.BusResult{was, now} {
		if x == nil || !x.Live {
			continue
		}
		s := Selection{Bus: x.Name}.read([]*study.Outcome{d.before, d.after}[i], 0)
		for _, v := range s.value {
			top = max(top, v)
		}
		if i == 0 {
			b = s
		} else {
			a = s
		}
	}
	if top == 0 {
		return
	}
	top = max(top, 3) // so that small distortion looks small
	d.stroke(d.st.Thin, d.st.Muted, nil, r.Min, vg.Point{X: r.Max.X, Y: r.Min.Y})
	slot := (r.Max.X - r.Min.X) / 24
	for i, s := range []series{b, a} {
		if !s.ok || (i == 0 && d.before == d.after) {
			continue
		}
		ink := []color.Color{d.st.Before, d.st.After}[i]
		var path vg.Path
		for h := 2; h <= 25 && h < len(s.value); h++ {
			if v := s.value[h]; v > 0.01*top {
				x := r.Min.X + slot*(vg.Length(h-2)+0.35+0.45*vg.Length(i))
				path.Move(vg.Point{X: x, Y: r.Min.Y})
				path.Line(vg.Point{X: x, Y: r.Min.Y + vg.Length(v/top)*(r.Max.Y-r.Min.Y)})
			}
		}
		if len(path) > 0 {
			d.strokePath(slot*0.42, ink, nil, path)
		}
	}
}

// rake draws what hangs on a bus, one below the other.
func (d *diagram) rake(b *PlacedBus) {
	if len(b.Rows) == 0 {
		return
	}
	stem := b.X + 1.7
	last := b.Y
	for i, row := range b.Rows {
		y := b.Y + rakeTop + rowHeight*(float64(i)+0.5)
		if !row.Inset {
			last = y
		}
		d.row(b, row, stem, y)
	}
	if last > b.Y {
		d.stroke(d.st.Line, d.st.Ink, nil, at2(stem, b.Y), at2(stem, last))
	}
}

func (d *diagram) row(b *PlacedBus, row Row, stem, y float64) {
	if row.Kind == study.KindMeasure {
		d.measure(b, row, stem, y)
		return
	}
	q := at2(stem+1.25, y)
	ink := d.st.Ink
	if d.gone(row.Name) {
		ink = d.st.Muted
	}
	d.stroke(d.st.Line, ink, d.dash(ink), at2(stem, y), vg.Point{X: q.X - 6, Y: q.Y})
	d.symbol(row.Kind, q, 6, d.st.Line, ink)
	x := q.X + 11
	end := px(b.X + min(b.W, columnWidth))
	d.write(x, q.Y+4.6, left, d.st.Body, ink, d.fit(d.st.Body, end-x, row.Name))
	d.write(x, q.Y-4.5, left, d.st.Small, d.st.Muted, d.fit(d.st.Small, end-x, d.rating(row)))
	r := rect(px(stem), q.Y-9, end, q.Y+9)
	d.frame(row.Name, r)
	d.hot(r, "item", row.Name, row.Name+"\n"+study.InfoOf(row.Kind).Singular+"\n"+d.rating(row))
}

func (d *diagram) dash(ink color.Color) []vg.Length {
	if ink == color.Color(d.st.Muted) {
		return []vg.Length{2, 2}
	}
	return nil
}

// gone reports whether a measure that is on takes the item out.
func (d *diagram) gone(name string) bool {
	if d.after == nil {
		return false
	}
	for _, m := range d.s.Measures {
		if slices.Contains(d.after.On, m.Name) && (slices.Contains(m.Replaces, name) || m.Kind == study.RemoveBank && m.Target == name) {
			return true
		}
	}
	return false
}

// rating says an item's size in a few words.
func (d *diagram) rating(row Row) string {
	_, item := d.s.Find(row.Name)
	switch x := item.(type) {
	case *study.NonlinearLoad:
		if x.CurrentA > 0 {
			return plain(x.CurrentA) + " A" + phaseWords(x.Connection)
		}
		return plain(x.KW) + " kW" + phaseWords(x.Connection)
	case *study.Load:
		return plain(x.KW) + " kW" + phaseWords(x.Connection)
	case *study.Motor:
		return plain(x.KW) + " kW"
	case *study.Generator:
		return plain(x.RatedKVA) + " kVA"
	case *study.Bank:
		text := plain(x.Kvar) + " kvar"
		if x.DetuningPercent > 0 {
			text += ", " + plain(x.DetuningPercent) + " %"
		}
		return text
	case *study.Filter:
		return plain(x.Kvar) + " kvar, order " + plain(x.Order)
	}
	return ""
}

func phaseWords(c study.Connection) string {
	if c == "" || c == study.ThreePhase {
		return ""
	}
	return ", phase " + string(c)
}

// MeasureWords says what a measure is in a few words.
func MeasureWords(m *study.Measure) string {
	switch m.Kind {
	case study.SingleTuned, study.DoubleTuned, study.FirstOrder, study.HighPass, study.ThirdOrder, study.CType:
		text := fmt.Sprintf("%s, %s kvar, order %s", strings.TrimSuffix(study.KindTitle(m.Kind), " filter"), plain(m.Kvar), plain(m.Order))
		if m.Order2 > 0 {
			text += " and " + plain(m.Order2)
		}
		return text
	case study.DetuneBank:
		return fmt.Sprintf("detune %s, %s %%", m.Target, plain(m.Percent))
	case study.RemoveBank:
		return "remove " + m.Target
	case study.ActiveFilter:
		return "active filter, " + plain(m.RatedA) + " A"
	case study.LineReactor:
		return fmt.Sprintf("line reactor %s %% on %s", plain(m.Percent), m.Target)
	case study.LowPassRC:
		return "R-C low-pass before " + m.Target
	case study.LowPassLC:
		return "L-C low-pass before " + m.Target
	}
	return strings.ReplaceAll(m.Kind, "-", " ")
}

func (d *diagram) measure(b *PlacedBus, row Row, stem, y float64) {
	index := slices.IndexFunc(d.s.Measures, func(m study.Measure) bool { return m.Name == row.Name })
	if index < 0 {
		return
	}
	m := &d.s.Measures[index]
	on := d.after != nil && slices.Contains(d.after.On, m.Name)
	ink, dash := color.Color(d.st.Muted), []vg.Length{2, 2}
	if on {
		ink, dash = d.st.After, nil
	}
	inset := 0.0
	if row.Inset {
		inset = 0.8
	}
	q := at2(stem+1.25+inset, y)
	if row.Inset {
		d.stroke(d.st.Line, ink, dash, vg.Point{X: q.X - 8, Y: q.Y + 10}, vg.Point{X: q.X - 8, Y: q.Y}, vg.Point{X: q.X - 5, Y: q.Y})
	} else {
		d.stroke(d.st.Line, ink, dash, at2(stem, y), vg.Point{X: q.X - 5, Y: q.Y})
	}
	MeasureMark(d.c, index, q, 5, ink, on)
	end := px(b.X + min(b.W, columnWidth))
	x := q.X + 9
	room := end - x
	if !d.view.Plain {
		room -= 25
		d.toggle(rect(end-22, q.Y-6, end, q.Y+6), on)
		d.hot(rect(end-24, q.Y-9, end+2, q.Y+9), "switch", m.Name, m.Name+"\n"+map[bool]string{true: "on: tap to switch off", false: "off: tap to switch on"}[on])
	}
	d.write(x, q.Y+4.6, left, d.st.Body, ink, d.fit(d.st.Body, room, m.Name))
	d.write(x, q.Y-4.5, left, d.st.Small, d.st.Muted, d.fit(d.st.Small, room, MeasureWords(m)))
	r := rect(px(stem), q.Y-9, end-24, q.Y+9)
	d.frame(m.Name, r)
	d.hot(r, "measure", m.Name, m.Name+"\n"+MeasureWords(m))
}

// toggle is a switch: a lever that lies closed when on and stands open when
// off.
func (d *diagram) toggle(r vg.Rectangle, on bool) {
	y := (r.Min.Y + r.Max.Y) / 2
	ink := color.Color(d.st.Muted)
	if on {
		ink = d.st.After
	}
	d.box(r, d.st.Line, ink, nil)
	half := (r.Min.X + r.Max.X) / 2
	if on {
		d.fill(rect(half, r.Min.Y, r.Max.X, r.Max.Y), ink)
		d.write((r.Min.X+half)/2, y, centre, d.st.Small*0.8, ink, "on")
		return
	}
	d.box(rect(r.Min.X, r.Min.Y, half, r.Max.Y), d.st.Line, ink, nil)
	d.write((half+r.Max.X)/2, y, centre, d.st.Small*0.8, ink, "off")
}

// feeder draws a transformer, cable, reactor or coupler between two buses.
func (d *diagram) feeder(f *Feeder) {
	from, to := d.lay.Bus(f.From), d.lay.Bus(f.To)
	if from == nil || to == nil {
		return
	}
	if !f.Tree {
		d.tie(f, from, to)
		return
	}
	x := f.X
	if x < from.X || x > from.X+from.W || x < to.X || x > to.X+to.W {
		d.tie(f, from, to)
		return
	}
	top, bottom := min(from.Y, to.Y), max(from.Y, to.Y)
	middle := bottom - busHead - 1.5
	if f.Kind != study.KindTransformer {
		middle = bottom - busHead - 0.3
	}
	middle = max(middle, top+1.4)
	d.stroke(d.st.Line, d.st.Ink, nil, at2(x, top), at2(x, bottom))
	d.device(f, at2(x, middle))
}

// device draws the symbol of a feeder on its line, with its words to the right.
func (d *diagram) device(f *Feeder, q vg.Point) {
	var words [2]string
	words[0] = f.Name
	switch f.Kind {
	case study.KindTransformer:
		d.fill(rect(q.X-2, q.Y-14, q.X+2, q.Y+14), d.st.Ground)
		d.transformer(q, 8, d.st.Line, d.st.Ink)
		for _, t := range d.s.Transformers {
			if t.Name == f.Name {
				words[1] = plain(t.RatedKVA) + " kVA  " + t.VectorGroup
				if t.PhaseShiftDeg != 0 {
					words[1] += fmt.Sprintf(" %+g°", t.PhaseShiftDeg)
				}
			}
		}
	case study.KindReactor:
		d.fill(rect(q.X-1.5, q.Y-8, q.X+1.5, q.Y+8), d.st.Ground)
		d.coilDown(q, 8, d.st.Line, d.st.Ink)
	case study.KindCoupler:
		d.couplerSwitch(f, q)
	default:
		d.fillPath(d.st.Ink, circle(q, 1.6))
		for _, c := range d.s.Cables {
			if c.Name == f.Name {
				words[1] = plain(c.LengthM) + " m"
			}
		}
	}
	x := q.X + 14
	if f.Kind == study.KindCoupler {
		w := d.width(d.st.Small, words[0])
		d.patch(q.X-w/2, q.Y+14, d.st.Small, d.st.Ink, false, words[0])
		r := rect(q.X-max(w/2, 8), q.Y-9, q.X+max(w/2, 8), q.Y+18)
		d.frame(f.Name, r)
		d.hot(r, "item", f.Name, f.Name+"\n"+study.InfoOf(f.Kind).Singular)
		return
	}
	if f.Kind == study.KindCable {
		x = q.X + 6
		words[0], words[1] = words[0]+"  "+words[1], ""
	}
	if words[1] == "" {
		d.write(x, q.Y, left, d.st.Small, d.st.Ink, words[0])
	} else {
		d.write(x, q.Y+4.5, left, d.st.Small, d.st.Ink, words[0])
		d.write(x, q.Y-5, left, d.st.Small, d.st.Muted, words[1])
	}
	r := rect(q.X-12, q.Y-12, x+max(d.width(d.st.Small, words[0]), d.width(d.st.Small, words[1])), q.Y+12)
	if f.Kind == study.KindCable {
		r = rect(q.X-6, q.Y-7, r.Max.X, q.Y+7)
	}
	d.frame(f.Name, r)
	d.hot(r, "item", f.Name, f.Name+"\n"+study.InfoOf(f.Kind).Singular+"\n"+words[1])
}

func (d *diagram) couplerSwitch(f *Feeder, q vg.Point) {
	closed := false
	for _, c := range d.s.Couplers {
		if c.Name == f.Name {
			closed = c.Closed
		}
	}
	d.fill(rect(q.X-8, q.Y-8, q.X+8, q.Y+8), d.st.Ground)
	d.box(rect(q.X-7, q.Y-7, q.X+7, q.Y+7), d.st.Line, d.st.Ink, nil)
	if closed {
		d.stroke(d.st.Bold, d.st.Ink, nil, vg.Point{X: q.X - 7, Y: q.Y}, vg.Point{X: q.X + 7, Y: q.Y})
	} else {
		d.stroke(d.st.Bold, d.st.Ink, nil, vg.Point{X: q.X - 5, Y: q.Y - 2}, vg.Point{X: q.X + 4, Y: q.Y + 5})
	}
}

// tie draws a connection outside the tree: out of the right end of one bar and
// into the other.
func (d *diagram) tie(f *Feeder, a, b *PlacedBus) {
	if b.X < a.X {
		a, b = b, a
	}
	start := at2(a.X+a.W, a.Y)
	end := at2(b.X, b.Y)
	mid := vg.Point{X: (start.X + end.X) / 2, Y: start.Y}
	if b.X < a.X+a.W {
		end = at2(b.X+b.W, b.Y)
		mid.X = max(start.X, end.X) + 8
	}
	d.stroke(d.st.Line, d.st.Ink, nil, start, mid, vg.Point{X: mid.X, Y: end.Y}, end)
	d.device(f, vg.Point{X: mid.X, Y: (start.Y + end.Y) / 2})
}
