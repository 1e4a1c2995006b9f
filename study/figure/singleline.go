package figure

import (
	"cmp"
	"fmt"
	"image/color"
	"math"
	"slices"
	"strconv"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
)

// View says what is marked on a single-line.
type View struct {
	Selected string // name of the item that is framed
	Plain    bool   // no switches: for paper

	Resonances []study.Peak // after, beside those of the outcome's own scans: named at the bus where they swing most
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
	sizes := sizesOf(s)
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
		d := &diagram{pen: &pen{c: c, st: st}, s: s, sizes: sizes, before: before, after: after, lay: lay, view: view}
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
	sizes         map[string]string // of each item in few words
	before, after *study.Outcome
	lay           *Layout
	view          View
}

// both reports whether before and after can differ.
func (d *diagram) both() bool {
	return d.before != nil && d.after != nil && !slices.Equal(d.before.On, d.after.On)
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
		d.box(rect(r.Min.X-1, r.Min.Y, r.Max.X+1, r.Max.Y), d.st.Line, d.st.Accent, []vg.Length{3, 2})
	}
}

func (d *diagram) supply(s *PlacedSupply) {
	b := d.lay.Bus(s.Bus)
	q := at2(s.X, s.Y)
	d.stroke(d.st.Line, d.st.Ink, nil, vg.Point{X: q.X, Y: q.Y - 8}, at2(s.X, b.Y))
	d.infeed(q, 8, d.st.Line, d.st.Ink)
	level := d.sizes[s.Name]
	room := px(supplyPitch) - 24
	name, short := d.fitBold(d.st.Head, room, s.Name), d.fit(d.st.Body, room, level)
	d.writeBold(q.X+13, q.Y+5.5, left, d.st.Head, d.st.Ink, name)
	d.write(q.X+13, q.Y-5.5, left, d.st.Body, d.st.Muted, short)
	r := rect(q.X-10, q.Y-11, q.X+14+max(d.widthBold(d.st.Head, name), d.width(d.st.Body, short)), q.Y+11)
	d.frame(s.Name, r)
	d.hot(r, "item", s.Name, s.Name+"\nsupply\n"+level)
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
	d.fill(rect(x0, y-1.4, x1, y+1.4), ink)
	d.head(b, ink, dead, was, now)
	r := rect(x0, y-3, x1, y+px(b.Head)-3)
	d.frame(b.Name, r)
	d.hot(r, "bus", b.Name, d.busText(b.Name, was, now))
	d.rake(b)
	if !d.view.Plain {
		bottom := -px(b.Bottom)
		d.hot(rect(px(b.X+b.Stem)+2, bottom-px(freeHeight)+2, px(b.X+columnWidth), min(bottom, y-4)), "place", b.Name, "")
	}
}

// head writes a bus's name and distortion above its bar, on one line where the
// bar is long. Over a limit, a mark stands beside the name; the small spectrum
// gives way to words.
func (d *diagram) head(b *PlacedBus, ink color.Color, dead bool, was, now *study.BusResult) {
	y, x1 := -px(b.Y), px(b.X+b.W)
	brief := b.Head < busHead
	nameY, low := y+24, y+16
	if brief {
		nameY, low = y+11, y+6
	}
	badge := ""
	if over, worst := d.over(b.Name); over {
		badge = fmt.Sprintf("over %.2g×", worst)
		if worst >= 9.95 {
			badge = fmt.Sprintf("over %.0f×", worst)
		}
	}
	text, size := d.wordsAt(b), d.st.Title
	room := x1 - text - d.badgeWidth(badge)
	if d.widthBold(size, b.Name) > room {
		size = d.st.Head
	}
	name := d.fitBold(size, room, b.Name)
	d.writeBold(text, nameY, left, size, ink, name)
	x := text + d.widthBold(size, name) + 6
	if badge != "" {
		d.badge(vg.Point{X: x, Y: nameY}, badge)
		x += d.badgeWidth(badge) + 4
	}
	end := x1
	if spark := min(0.32*px(columnWidth), x1-x); spark > 2*d.st.Title {
		end = x1 - spark - 6
		d.sparkline(rect(x1-spark, low, x1, low+15), was, now)
	}
	words := d.busWords(b.Name, was, now, dead)
	if brief {
		d.write(x+3, nameY, left, d.st.Body, d.st.Muted, d.fit(d.st.Body, end-x-3, d.resonant(b.Name, words, end-x-3)))
	} else {
		d.write(text, y+10, left, d.st.Body, d.st.Muted, d.fit(d.st.Body, x1-text, d.resonant(b.Name, words, x1-text)))
	}
}

// resonant adds to a bus's words, where there is room, the resonance that
// swings most there and who makes it.
func (d *diagram) resonant(bus, words string, room vg.Length) string {
	for _, p := range d.resonancesAt(bus) {
		at := "  resonance at " + number(p.Order)
		for _, more := range []string{at + ", " + p.Words(), at} {
			if d.width(d.st.Body, words+more) <= room {
				return words + more
			}
		}
	}
	return words
}

// busWords says voltage and distortion of a bus on one line.
func (d *diagram) busWords(name string, was, now *study.BusResult, dead bool) string {
	words := d.sizes[name]
	switch {
	case dead:
		words += "  no supply"
	case now != nil:
		words += "  THD "
		if was != nil && was.Live && d.both() {
			words += number(100*was.THD()) + " → "
		}
		words += number(100*now.THD()) + " %"
	}
	return words
}

// badge is the mark of a bus over a limit: a shape and a word.
func (d *diagram) badge(at vg.Point, words string) {
	var path vg.Path
	path.Move(at)
	path.Line(vg.Point{X: at.X + 5, Y: at.Y + 5})
	path.Line(vg.Point{X: at.X + 10, Y: at.Y})
	path.Line(vg.Point{X: at.X + 5, Y: at.Y - 5})
	path.Close()
	d.fillPath(d.st.Over, path)
	d.writeBold(at.X+12, at.Y, left, d.st.Body, d.st.Over, words)
}

func (d *diagram) badgeWidth(words string) vg.Length {
	if words == "" {
		return 0
	}
	return d.widthBold(d.st.Body, words) + 18 // with the mark and the air before it
}

// wordsAt returns where the words of a bus begin: right of a feeder that comes
// down at the bar's left end, so that no line crosses text.
func (d *diagram) wordsAt(b *PlacedBus) vg.Length {
	x := px(b.X)
	for i := range d.lay.Feeders {
		f := &d.lay.Feeders[i]
		from := d.lay.Bus(f.From)
		switch {
		case f.To != b.Name || from == nil:
		case f.straight(from, b):
			x = max(x, px(f.X)+5)
		case f.sideways(from, b):
			if n, _ := d.among(f); n > 0 { // joins the bar's end from above
				x = max(x, px(b.X)+4)
			}
		}
	}
	for i := range d.lay.Supplies {
		if s := &d.lay.Supplies[i]; s.Bus == b.Name {
			x = max(x, px(s.X)+5)
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
	text := name + "\n" + d.sizes[name]
	if was != nil && was.Live && d.before != d.after {
		text += "\nTHD before\t" + number(100*was.THD()) + " %"
	}
	if now != nil && now.Live {
		text += map[bool]string{true: "\nTHD\t", false: "\nTHD after\t"}[was == nil || d.before == d.after] + number(100*now.THD()) + " %"
	}
	for _, p := range d.resonancesAt(name) {
		text += fmt.Sprintf("\nresonance\torder %s, %s", number(p.Order), p.Words())
	}
	return text
}

// peaking returns the size of an item and, where it is a capacitor that makes
// a resonance and there is room, the order of that.
func (d *diagram) peaking(name string, room vg.Length) string {
	words := d.sizes[name]
	for _, p := range d.resonances() {
		if slices.Contains(p.Capacitive, name) {
			if more := words + ", peak at " + strconv.FormatFloat(p.Order, 'f', 1, 64); d.width(d.st.Body, more) <= room {
				return more
			}
		}
	}
	return words
}

// peakText lists the resonances that an item takes part in.
func (d *diagram) peakText(name string) string {
	text := ""
	for _, p := range d.resonances() {
		if slices.Contains(p.Capacitive, name) || slices.Contains(p.Inductive, name) {
			text += fmt.Sprintf("\nresonance\torder %s, %s", number(p.Order), p.Words())
		}
	}
	return text
}

// resonances lists the resonances after whose makers are known, rising.
func (d *diagram) resonances() []study.Peak {
	all := d.view.Resonances
	if d.after != nil {
		for i := range d.after.Scans {
			all = append(all[:len(all):len(all)], d.after.Scans[i].Peaks...)
		}
	}
	var out []study.Peak
	for _, p := range all {
		if p.Words() == "" || p.Q < 1.5 {
			continue
		}
		if !slices.ContainsFunc(out, func(q study.Peak) bool { return math.Abs(q.Order-p.Order) < 0.02*p.Order }) {
			out = append(out, p)
		}
	}
	slices.SortFunc(out, func(a, b study.Peak) int { return cmp.Compare(a.Order, b.Order) })
	return out
}

// resonancesAt lists those that swing most at a bus.
func (d *diagram) resonancesAt(bus string) []study.Peak {
	var out []study.Peak
	for _, p := range d.resonances() {
		if len(p.Buses) > 0 && p.Buses[0].Bus == bus {
			out = append(out, p)
		}
	}
	return out
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
		if !s.ok || i == 0 && !d.both() {
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

// rake draws what hangs on a bus, one below the other, on a trunk that goes on
// to the buses that hang there too.
func (d *diagram) rake(b *PlacedBus) {
	last := b.Y
	for _, row := range b.Rows {
		y := b.Y + row.Y
		if !row.Inset {
			last = max(last, y)
		}
		d.row(b, row, b.X+b.Stem, y)
	}
	for i := range d.lay.Feeders {
		f := &d.lay.Feeders[i]
		if to := d.lay.Bus(f.To); f.Hung && f.From == b.Name && to != nil && f.sideways(b, to) {
			last = max(last, to.Y)
		}
	}
	if last > b.Y {
		d.stroke(d.st.Line, d.st.Ink, nil, at2(b.X+b.Stem, b.Y), at2(b.X+b.Stem, last))
	}
}

const (
	branch      = 1.2 // steps from the trunk to the middle of a symbol
	switchWidth = 23  // points
)

func (d *diagram) row(b *PlacedBus, row Row, stem, y float64) {
	if row.Kind == study.KindMeasure {
		d.measure(b, row, stem, y)
		return
	}
	q := at2(stem+branch, y)
	ink := d.st.Ink
	if d.gone(row.Name) {
		ink = d.st.Muted
	}
	d.stroke(d.st.Line, ink, d.dash(ink), at2(stem, y), vg.Point{X: q.X - 6, Y: q.Y})
	d.symbol(row.Kind, q, 6, d.st.Line, ink)
	x := q.X + 10
	end := px(b.X + columnWidth)
	d.write(x, q.Y+5, left, d.st.Head, ink, d.fit(d.st.Head, end-x, row.Name))
	d.write(x, q.Y-5.2, left, d.st.Body, d.st.Muted, d.fit(d.st.Body, end-x, d.peaking(row.Name, end-x)))
	half := px(itemHeight)/2 - 0.5
	r := rect(px(stem)+2, q.Y-half, end, q.Y+half)
	d.frame(row.Name, r)
	d.hot(r, "item", row.Name, row.Name+"\n"+study.InfoOf(row.Kind).Singular+"\n"+d.sizes[row.Name]+d.peakText(row.Name))
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
		inset = 0.7
	}
	q := at2(stem+branch+inset, y)
	if row.Inset {
		d.stroke(d.st.Line, ink, dash, vg.Point{X: q.X - 8, Y: q.Y + 11}, vg.Point{X: q.X - 8, Y: q.Y}, vg.Point{X: q.X - 5, Y: q.Y})
	} else {
		d.stroke(d.st.Line, ink, dash, at2(stem, y), vg.Point{X: q.X - 5, Y: q.Y})
	}
	MeasureMark(d.c, index, q, 5, ink, on)
	end := px(b.X + columnWidth)
	x := q.X + 9
	room := end - x
	half := px(switchHeight) / 2
	if !d.view.Plain {
		room -= switchWidth + 3
		d.toggle(rect(end-switchWidth, q.Y-6.5, end, q.Y+6.5), on)
		d.hot(rect(end-switchWidth-1, q.Y-half, end, q.Y+half), "switch", m.Name, m.Name+"\n"+map[bool]string{true: "on: tap to switch off", false: "off: tap to switch on"}[on])
	}
	d.write(x, q.Y+5, left, d.st.Head, ink, d.fit(d.st.Head, room, m.Name))
	d.write(x, q.Y-5.2, left, d.st.Body, d.st.Muted, d.firstFit(d.st.Body, room, measureBrief(m)...))
	r := rect(px(stem)+2, q.Y-half+0.5, x+room, q.Y+half-0.5)
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
		d.write((r.Min.X+half)/2, y, centre, d.st.Small, ink, "on")
		return
	}
	d.box(rect(r.Min.X, r.Min.Y, half, r.Max.Y), d.st.Line, ink, nil)
	d.write((half+r.Max.X)/2, y, centre, d.st.Small, ink, "off")
}
