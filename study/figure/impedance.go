package figure

import (
	"fmt"
	"image/color"
	"math"
	"math/cmplx"
	"sort"
	"strconv"
	"strings"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study"
)

// Impedance shows |Z| against order on a logarithmic scale, before beside
// after: the first scan of each list. Orders in sources, those that loads
// inject, are marked. Either list may be empty.
func Impedance(before, after []*study.ScanResult, sources []int) *Figure {
	var b, a *study.ScanResult
	if len(before) > 0 {
		b = before[0]
	}
	if len(after) > 0 {
		a = after[0]
	}
	f := &Figure{Key: "impedance", Title: "Impedance", Size: vg.Point{X: 480, Y: 240}}
	if any := first(a, b); any != nil {
		f.Key = "impedance-" + slug("bus "+any.Bus)
		f.Title = fmt.Sprintf("Driving-point impedance at %s, %s sequence", any.Bus, any.Sequence)
		if any.At != "" {
			f.Key += "-" + slug(any.At)
			f.Title = fmt.Sprintf("Transfer impedance from %s to %s, %s sequence", any.Bus, any.At, any.Sequence)
		}
		f.Caption = "Magnitude against order, EMFs shorted and non-linear loads open." + resonances("before", b) + resonances("after", a) + moves(b, a)
	}
	if len(sources) > 0 {
		f.Caption += " Dots: the orders that loads inject."
	}
	f.Draw = func(c draw.Canvas, st *Style) []Hot { return drawImpedance(newPen(c, st), b, a, sources) }
	return f
}

func first(list ...*study.ScanResult) *study.ScanResult {
	for _, r := range list {
		if r != nil {
			return r
		}
	}
	return nil
}

func resonances(when string, r *study.ScanResult) string {
	if r == nil || len(r.Peaks) == 0 {
		return ""
	}
	words := make([]string, 0, 4)
	for _, p := range r.Peaks {
		if len(words) == 4 {
			break
		}
		text := fmt.Sprintf("%s ohm at order %s", number(p.Ohm), number(p.Order))
		if who := p.Words(); who != "" {
			text += " (" + who + ")"
		}
		words = append(words, text)
	}
	return fmt.Sprintf(" Peaks %s: %s.", when, strings.Join(words, ", "))
}

// moves says what becomes of each resonance when the measures are on.
func moves(b, a *study.ScanResult) string {
	if b == nil || a == nil {
		return ""
	}
	words := make([]string, 0, 6)
	for _, m := range study.Moves(b.Peaks, a.Peaks) {
		if len(words) < cap(words) {
			words = append(words, m.Words())
		}
	}
	if len(words) == 0 {
		return ""
	}
	return " With the measures on, " + strings.Join(words, "; ") + "."
}

// peakText says of the resonances between two orders who makes them, where
// they swing and what becomes of them.
func peakText(b, a *study.ScanResult, from, to float64) string {
	within := func(p *study.Peak) bool { return p != nil && p.Order >= from && p.Order < to }
	text := ""
	say := func(when string, p study.Peak) {
		text += fmt.Sprintf("\n%s: %s Ω at order %s", when, number(p.Ohm), number(p.Order))
		for _, words := range []string{p.Words(), p.Place()} {
			if words != "" {
				text += ", " + words
			}
		}
	}
	if a == nil || b == nil {
		for _, p := range first(a, b).Peaks {
			if within(&p) {
				say("resonance", p)
			}
		}
		return text
	}
	for _, m := range study.Moves(b.Peaks, a.Peaks) {
		if within(m.Before) || within(m.After) {
			if m.Before != nil {
				say("resonance before", *m.Before)
			}
			switch {
			case m.After == nil:
				text += "\nafter: gone"
			case m.Before == nil:
				say("new resonance", *m.After)
			default:
				say("after", *m.After)
			}
		}
	}
	return text
}

func drawImpedance(p *pen, b, a *study.ScanResult, sources []int) []Hot {
	any := first(a, b)
	if any == nil || len(any.Orders) < 2 {
		return p.empty("No impedance to show.\nSelect a bus that has a supply.")
	}
	lo, hi := math.Inf(1), 0.0
	for _, r := range []*study.ScanResult{b, a} {
		if r == nil {
			continue
		}
		for _, z := range r.Z {
			if v := cmplx.Abs(z); v > 0 {
				lo, hi = math.Min(lo, v), math.Max(hi, v)
			}
		}
	}
	lo = math.Max(lo, hi*1e-5)
	x := p.open("impedance, Ω", "order")
	x.key(b != nil, a != nil)
	x.x0, x.x1 = any.Orders[0], any.Orders[len(any.Orders)-1]
	x.scaleLog(lo, hi*1.4)
	x.base(x.y0)
	var shown []int
	for _, h := range sources {
		if float64(h) >= x.x0 && float64(h) <= x.x1 {
			shown = append(shown, h)
		}
	}
	curves := [2]curve{x.curve(b), x.curve(a)}
	x.marks(shown, b, a)
	if len(shown) == 0 {
		for _, h := range []int{1, 5, 10, 15, 20, 25, 30, 35, 40, 45, 50, 60, 70, 80, 90, 100} {
			if float64(h) >= x.x0 && float64(h) <= x.x1 {
				shown = append(shown, h)
			}
		}
	}
	x.orderLabels(shown)
	if a != nil {
		x.strokePath(x.st.Bold, x.st.After, nil, curves[1].path())
	}
	if b != nil { // thin over bold: both are seen where they agree
		x.strokePath(x.st.Line, x.st.Before, nil, curves[0].path())
	}
	x.peaks(b, a, curves)
	x.readouts(b, a)
	return p.hots
}

// A curve is a scan in the coordinates of the canvas, without points too close
// to tell apart.
type curve []vg.Point

func (c curve) path() vg.Path {
	path := make(vg.Path, 0, len(c))
	for i, q := range c {
		if i == 0 {
			path.Move(q)
		} else {
			path.Line(q)
		}
	}
	return path
}

func (x *axes) curve(r *study.ScanResult) curve {
	if r == nil {
		return nil
	}
	c := make(curve, 0, 512)
	last := vg.Point{X: -1e9}
	for i, z := range r.Z {
		y := math.Min(math.Max(cmplx.Abs(z), x.y0), x.y1)
		q := vg.Point{X: x.x(r.Orders[i]), Y: x.y(y)}
		if i == 0 || i == len(r.Z)-1 || q.X-last.X > 0.15 || abs(q.Y-last.Y) > 0.3 {
			c = append(c, q)
			last = q
		}
	}
	return c
}

func abs(v vg.Length) vg.Length {
	if v < 0 {
		return -v
	}
	return v
}

// marks shows at which impedance each order meets the network that a load
// injects: a line from the axis up to a dot on each curve.
func (x *axes) marks(sources []int, b, a *study.ScanResult) {
	if len(sources) == 0 {
		return
	}
	var lines, hollow, solid vg.Path
	radius := 0.28 * x.st.Small
	for _, h := range sources {
		here := x.x(float64(h))
		top := x.area.Min.Y
		for i, r := range []*study.ScanResult{b, a} {
			if r == nil {
				continue
			}
			q := vg.Point{X: here, Y: x.y(math.Min(math.Max(at(r, float64(h)), x.y0), x.y1))}
			top = max(top, q.Y)
			if i == 0 {
				hollow = append(hollow, circle(q, radius)...)
			} else {
				solid = append(solid, circle(q, radius)...)
			}
		}
		lines.Move(vg.Point{X: here, Y: x.area.Min.Y})
		lines.Line(vg.Point{X: here, Y: top})
	}
	x.strokePath(x.st.Thin, x.st.Muted, nil, lines)
	if len(hollow) > 0 {
		x.fillPath(x.st.Ground, hollow)
		x.strokePath(x.st.Line, x.st.Before, nil, hollow)
	}
	if len(solid) > 0 {
		x.fillPath(x.st.After, solid)
	}
}

// peaks names the highest resonances of both scans, where there is room beside
// the peak; one at which both have a peak is named once.
func (x *axes) peaks(b, a *study.ScanResult, curves [2]curve) {
	var taken []vg.Rectangle
	for i, r := range []*study.ScanResult{a, b} {
		if r == nil {
			continue
		}
		ink := color.Color(x.st.After)
		if i == 1 {
			ink = x.st.Muted
		}
		list := append([]study.Peak(nil), r.Peaks...)
		sort.Slice(list, func(i, j int) bool { return list[i].Ohm*list[i].Q > list[j].Ohm*list[j].Q })
		named := 0
		for _, k := range list {
			if named == 2 || k.Q < 1.5 {
				break
			}
			if i == 1 && a != nil && hasPeak(a, k.Order) {
				continue
			}
			if x.peak(k, ink, &taken, curves) {
				named++
			}
		}
	}
}

// peak names one peak in the fullest wording for which there is room.
func (x *axes) peak(k study.Peak, ink color.Color, taken *[]vg.Rectangle, curves [2]curve) bool {
	order := "order " + strconv.FormatFloat(k.Order, 'f', 1, 64)
	ohm := number(k.Ohm) + " Ω"
	wordings := [][]string{{ohm + " at " + order}, {ohm, order}, {order}}
	if who := k.Words(); who != "" {
		wordings = append([][]string{{ohm + " at " + order + ", " + who}}, wordings...)
	}
	size := x.st.Small
	for _, lines := range wordings {
		if place, ok := x.room(k, lines, *taken, curves); ok {
			*taken = append(*taken, place)
			for i, words := range lines {
				x.patch(place.Min.X, place.Max.Y-(0.55+1.15*vg.Length(i))*size, size, ink, false, words)
			}
			return true
		}
	}
	return false
}

func hasPeak(r *study.ScanResult, order float64) bool {
	for _, p := range r.Peaks {
		if math.Abs(p.Order-order) < 0.15 {
			return true
		}
	}
	return false
}

// room finds a place for a peak's words near its top that no curve and no other
// words cross.
func (x *axes) room(k study.Peak, lines []string, taken []vg.Rectangle, curves [2]curve) (vg.Rectangle, bool) {
	size := x.st.Small
	w, h := vg.Length(0), (1.1+1.15*vg.Length(len(lines)-1))*size
	for _, words := range lines {
		w = max(w, x.width(size, words))
	}
	top := vg.Point{X: x.x(k.Order), Y: x.y(k.Ohm)}
	for _, up := range []vg.Length{0.2, 0.9, 1.7, 2.6, -0.6} {
		for _, from := range []vg.Length{top.X + 0.6*size, top.X - 0.6*size - w, top.X - w/2} {
			foot := top.Y + (up-0.55)*size
			place := rect(from, foot, from+w, foot+h)
			if place.Min.X < x.area.Min.X || place.Max.X > x.area.Max.X || place.Max.Y > x.area.Max.Y+0.4*size {
				continue
			}
			free := true
			for _, t := range taken {
				free = free && !meet(place, t)
			}
			for _, c := range curves {
				free = free && !c.crosses(place)
			}
			if free {
				return place, true
			}
		}
	}
	return vg.Rectangle{}, false
}

// crosses reports whether a curve runs through a place.
func (c curve) crosses(place vg.Rectangle) bool {
	i := sort.Search(len(c), func(i int) bool { return c[i].X >= place.Min.X })
	for i = max(i, 1); i < len(c) && c[i-1].X <= place.Max.X; i++ {
		if max(c[i-1].Y, c[i].Y) >= place.Min.Y && min(c[i-1].Y, c[i].Y) <= place.Max.Y {
			return true
		}
	}
	return false
}

func (x *axes) readouts(b, a *study.ScanResult) {
	const parts = 60
	for k := range parts {
		h0 := x.x0 + (x.x1-x.x0)*float64(k)/parts
		h1 := x.x0 + (x.x1-x.x0)*float64(k+1)/parts
		text := "Order " + strconv.FormatFloat((h0+h1)/2, 'f', 1, 64)
		for i, r := range []*study.ScanResult{b, a} {
			if r != nil {
				text += "\n" + [2]string{"before", "after"}[i] + "\t" + number(at(r, (h0+h1)/2)) + " Ω"
			}
		}
		text += peakText(b, a, h0, h1)
		x.hot(rect(x.x(h0), x.area.Min.Y, x.x(h1), x.area.Max.Y), "value", fmt.Sprint("h", k), text)
	}
}

// at returns |Z| at an order, from the nearest point of the scan.
func at(r *study.ScanResult, h float64) float64 {
	i := sort.SearchFloat64s(r.Orders, h)
	if i == len(r.Orders) || i > 0 && h-r.Orders[i-1] < r.Orders[i]-h {
		i--
	}
	return cmplx.Abs(r.Z[i])
}
