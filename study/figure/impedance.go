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
		f.Caption = "Magnitude against order, EMFs shorted and non-linear loads open." + resonances("before", b) + resonances("after", a)
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
	x := p.open("", "ohm", "harmonic order")
	x.key(b != nil, a != nil, [2]string{})
	x.x0, x.x1 = any.Orders[0], any.Orders[len(any.Orders)-1]
	x.scaleLog(lo, hi*1.3)
	for _, h := range sources {
		if float64(h) >= x.x0 && float64(h) <= x.x1 {
			at := x.x(float64(h))
			x.stroke(x.st.Thin, x.st.Muted, []vg.Length{1, 2}, vg.Point{X: at, Y: x.area.Min.Y}, vg.Point{X: at, Y: x.area.Max.Y})
		}
	}
	x.base(x.y0)
	labels := sources
	if len(labels) == 0 {
		labels = []int{1, 5, 10, 15, 20, 25, 30, 35, 40, 45, 50}
	}
	var shown []int
	for _, h := range labels {
		if float64(h) >= x.x0 && float64(h) <= x.x1 {
			shown = append(shown, h)
		}
	}
	x.orderLabels(shown)
	x.curve(b, x.st.Before, x.st.Line)
	x.curve(a, x.st.After, x.st.Bold)
	x.peaks(b, a)
	x.readouts(b, a)
	return p.hots
}

func (x *axes) curve(r *study.ScanResult, ink color.Color, width vg.Length) {
	if r == nil {
		return
	}
	var path vg.Path
	last := vg.Point{X: -1e9}
	for i, z := range r.Z {
		y := math.Min(math.Max(cmplx.Abs(z), x.y0), x.y1)
		q := vg.Point{X: x.x(r.Orders[i]), Y: x.y(y)}
		if i == 0 {
			path.Move(q)
		} else if q.X-last.X > 0.15 || abs(q.Y-last.Y) > 0.3 || i == len(r.Z)-1 {
			path.Line(q)
		} else {
			continue
		}
		last = q
	}
	x.strokePath(width, ink, nil, path)
}

func abs(v vg.Length) vg.Length {
	if v < 0 {
		return -v
	}
	return v
}

// peaks names the highest resonances of both scans, where there is room beside
// the peak; one at which both have a peak is named once.
func (x *axes) peaks(b, a *study.ScanResult) {
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
			words := fmt.Sprintf("%s Ω at order %s", number(k.Ohm), strconv.FormatFloat(k.Order, 'f', 1, 64))
			if who := k.Words(); who != "" && x.width(x.st.Small, words+who) < 0.6*(x.area.Max.X-x.area.Min.X) {
				words += ", " + who
			}
			if place, ok := x.room(k, words, taken, b, a); ok {
				taken = append(taken, place)
				x.write(place.Min.X, (place.Min.Y+place.Max.Y)/2, left, x.st.Small, ink, words)
				named++
			}
		}
	}
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
func (x *axes) room(k study.Peak, words string, taken []vg.Rectangle, scans ...*study.ScanResult) (vg.Rectangle, bool) {
	size := x.st.Small
	w := x.width(size, words)
	top := vg.Point{X: x.x(k.Order), Y: x.y(k.Ohm)}
	for _, up := range []vg.Length{0.2, 0.9, 1.7, 2.6, -0.6} {
		for _, from := range []vg.Length{top.X + 0.6*size, top.X - 0.6*size - w, top.X - w/2} {
			place := rect(from, top.Y+(up-0.55)*size, from+w, top.Y+(up+0.55)*size)
			if place.Min.X < x.area.Min.X || place.Max.X > x.area.Max.X || place.Max.Y > x.area.Max.Y+0.4*size {
				continue
			}
			free := true
			for _, t := range taken {
				free = free && !meet(place, t)
			}
			for _, r := range scans {
				free = free && (r == nil || !x.crosses(r, place))
			}
			if free {
				return place, true
			}
		}
	}
	return vg.Rectangle{}, false
}

// crosses reports whether a curve runs through a place.
func (x *axes) crosses(r *study.ScanResult, place vg.Rectangle) bool {
	for i := 1; i < len(r.Orders); i++ {
		x0, x1 := x.x(r.Orders[i-1]), x.x(r.Orders[i])
		if x1 < place.Min.X || x0 > place.Max.X {
			continue
		}
		y0, y1 := x.y(cmplx.Abs(r.Z[i-1])), x.y(cmplx.Abs(r.Z[i]))
		if max(y0, y1) >= place.Min.Y && min(y0, y1) <= place.Max.Y {
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
