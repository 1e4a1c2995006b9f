package figure

import (
	"quietbus/study"
)

// Step is the grid of the single-line in points at zoom 1; study.Drawing
// counts in it.
const Step = 12

// Sizes of the single-line, in steps.
const (
	margin       = 0.6
	columnWidth  = 11.4
	columnGap    = 0.9
	tieGap       = 3.6 // more, between columns that a coupler joins
	busHead      = 2.9 // from the top of a bus's place to its bar: name and distortion
	briefHead    = 1.9 // the same on one line, for a long bar
	briefFrom    = 2 * columnWidth
	itemHeight   = 1.75
	switchHeight = 2.0 // 24 points: a switch that can be hit
	feederHeight = 3.3
	linkHeight   = 1.7
	supplyHeight = 2.2
	supplyPitch  = 8.0 // between supplies of one bus
	rakeTop      = 0.4
	feederPitch  = 8.0 // between parallel feeders
	hangIndent   = 3.0 // of a bus that hangs beside its feeder
	hangLabel    = 0.9 // above its head, for the feeder's name
	freeHeight   = 1.0 // empty place under a bus
)

// Layout places everything on the single-line, in steps from the top left.
type Layout struct {
	Buses    []PlacedBus
	Feeders  []Feeder
	Supplies []PlacedSupply
	W, H     float64
}

// PlacedBus is a bus with what hangs on it.
type PlacedBus struct {
	Name    string
	X, Y, W float64 // left end, height and length of the bar
	Head    float64 // room above the bar for its words
	Stem    float64 // of the trunk that its rows hang on, from the left end
	Rows    []Row
	Bottom  float64 // below its last row
}

// Row is one item or measure under a bus.
type Row struct {
	Kind  study.Kind
	Name  string
	Inset bool    // acts on the row above it
	Y     float64 // of its middle, below the bar
}

// Feeder joins two buses: a transformer, cable, reactor or coupler.
type Feeder struct {
	Kind     study.Kind
	Name     string
	From, To string
	Tree     bool          // leads to a bus placed under its bus
	Hung     bool          // leads sideways from the trunk under its bus
	X        float64       // of its line, for a tree feeder that leads straight down
	Way      []study.Point // of its line, for one that does not
}

// PlacedSupply stands above its bus.
type PlacedSupply struct {
	Name, Bus string
	X, Y      float64
}

// Tidy lays a study out by itself: supplies at the top, each bus above what it
// feeds, loads hanging below their bus, no two places overlapping. Buses that
// one bus feeds stand side by side, or, deep in a wide tree, one below the
// other, whichever fills a page better. Positions in study.Drawing take
// precedence for their bus.
func Tidy(s *study.Study) *Layout {
	t := grow(s)
	best, least := (*Layout)(nil), 0.0
	for hang := t.depth(); hang >= 0; hang-- {
		lay := t.arrange(hang)
		if size := max(lay.W, 1.05*lay.H); best == nil || size < 0.9*least {
			best, least = lay, size
		}
	}
	t.finish(best)
	return best
}

// arrangement is the state of one way to lay a tree out.
type arrangement struct {
	t    *tree
	hang int // buses from this depth on hang what they feed below each other
	lay  *Layout
}

// arrange lays the tree out; the buses that a bus at depth hang or deeper feeds
// stand one below the other.
func (t *tree) arrange(hang int) *Layout {
	a := &arrangement{t, hang, &Layout{}}
	x := margin
	for i, root := range t.roots {
		if i > 0 {
			x += 2*columnGap + t.between(t.roots[:i], root)
		}
		w := a.width(root)
		a.place(root, x, supplyHeight, w)
		x += w
	}
	a.lay.extent()
	return a.lay
}

// extent takes the size of the drawing.
func (l *Layout) extent() {
	l.W, l.H = 0, 0
	for i := range l.Buses {
		b := &l.Buses[i]
		l.W = max(l.W, b.X+b.W+margin)
		l.H = max(l.H, b.Bottom+freeHeight)
	}
}

func (a *arrangement) hangs(n *node) bool { return n.depth >= a.hang && len(n.kids) > 0 }

// width returns how wide a bus and all below it is.
func (a *arrangement) width(n *node) float64 {
	w := max(columnWidth, supplyPitch*float64(n.supplies-1)+columnWidth)
	if a.hangs(n) {
		for _, k := range n.kids {
			w = max(w, hangIndent+a.width(k))
		}
		return w
	}
	sum := 0.0
	for i, k := range n.kids {
		if i > 0 {
			sum += columnGap + a.t.between(n.kids[:i], k)
		}
		sum += a.share(k)
	}
	return max(w, sum)
}

// share is the width of a bus that stands beside others, and of its feeders.
func (a *arrangement) share(k *node) float64 {
	return max(a.width(k), feederPitch*float64(len(k.up)-1)+columnWidth)
}

// place puts a bus and all below it from x on, with the top of its place at
// top, and returns the bottom.
func (a *arrangement) place(n *node, x, top, width float64) float64 {
	hangs := a.hangs(n)
	b := PlacedBus{Name: n.bus, X: x, W: width, Head: busHead, Stem: 0.8}
	if hangs {
		b.W = supplyPitch*float64(max(n.supplies, 1)-1) + columnWidth
		if n.parent != nil && !a.hangs(n.parent) {
			b.W = max(b.W, feederPitch*float64(len(n.up)-1)+columnWidth)
		}
	}
	if b.W >= briefFrom && len(n.up) < 2 {
		b.Head = briefHead
	}
	if !hangs && len(n.kids) > 0 && len(n.rows) > 0 {
		b.Stem = 1.6 // right of the feeder that passes down
	}
	b.Y = top + b.Head
	y := b.Y + rakeTop
	for _, r := range n.rows {
		h := itemHeight
		if r.Kind == study.KindMeasure {
			h = switchHeight
		}
		r.Y = y + h/2 - b.Y
		y += h
		b.Rows = append(b.Rows, r)
	}
	b.Bottom = y
	a.lay.Buses = append(a.lay.Buses, b)
	if hangs {
		return a.hangBelow(n, x, y)
	}
	bottom := y + freeHeight
	for i, k := range n.kids {
		if i > 0 {
			x += columnGap + a.t.between(n.kids[:i], k)
		}
		drop := linkHeight
		for j, f := range k.up {
			switch f.Kind {
			case study.KindTransformer:
				drop = feederHeight
			case study.KindReactor, study.KindCoupler:
				drop = max(drop, linkHeight+0.8)
			}
			f.Tree, f.X = true, x+0.6+feederPitch*float64(j)
			a.lay.Feeders = append(a.lay.Feeders, f)
		}
		from := b.Y + 0.2
		if i == 0 && len(n.rows) > 0 {
			from = b.Bottom - 0.1*drop
		}
		w := a.share(k)
		bottom = max(bottom, a.place(k, x, from+drop, w))
		x += w
	}
	return bottom
}

// hangBelow puts what a bus feeds one below the other beside its trunk, from y
// on, and returns the bottom.
func (a *arrangement) hangBelow(n *node, x, y float64) float64 {
	for _, k := range n.kids {
		for _, f := range k.up {
			f.Tree, f.Hung = true, true
			a.lay.Feeders = append(a.lay.Feeders, f)
		}
		y = a.place(k, x+hangIndent, y+0.3+hangLabel*float64(len(k.up)), a.width(k))
	}
	return y
}

// finish moves drawn buses to their places, adds ties and supplies and takes
// the extent.
func (t *tree) finish(lay *Layout) {
	for i := range lay.Buses {
		b := &lay.Buses[i]
		p, ok := t.s.Drawing[b.Name]
		if !ok {
			continue
		}
		dx, dy := p.X-b.X, p.Y-b.Y
		b.X, b.Y, b.Bottom = p.X, p.Y, b.Bottom+dy
		for j := range lay.Feeders {
			if f := &lay.Feeders[j]; f.Tree && f.To == b.Name {
				f.X += dx
			}
		}
	}
	lay.Feeders = append(lay.Feeders, t.ties...)
	count := map[string]int{}
	for _, sup := range t.s.Supplies {
		b := lay.Bus(sup.Bus)
		if b == nil {
			continue
		}
		x := b.X + 0.6 + supplyPitch*float64(count[sup.Bus])
		count[sup.Bus]++
		lay.Supplies = append(lay.Supplies, PlacedSupply{Name: sup.Name, Bus: sup.Bus, X: x, Y: b.Y - b.Head - supplyHeight + 1.1})
	}
	lay.extent()
	t.routes(lay)
}

// Bus returns the place of a bus, nil when there is none.
func (l *Layout) Bus(name string) *PlacedBus {
	for i := range l.Buses {
		if l.Buses[i].Name == name {
			return &l.Buses[i]
		}
	}
	return nil
}
