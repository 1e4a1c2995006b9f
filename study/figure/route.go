package figure

import (
	"math"

	"quietbus/study"
)

// routes gives every feeder that does not lead straight to a bus below its bus
// a way around what stands between.
func (t *tree) routes(lay *Layout) {
	ways := 0
	var lines []segment // that stand already
	for i := range lay.Feeders {
		f := &lay.Feeders[i]
		from, to := lay.Bus(f.From), lay.Bus(f.To)
		switch {
		case from == nil || to == nil:
		case f.straight(from, to):
			lines = append(lines, segment{study.Point{X: f.X, Y: from.Y}, study.Point{X: f.X, Y: to.Y}})
		case f.sideways(from, to):
			corner := study.Point{X: from.X + from.Stem, Y: to.Y}
			lines = append(lines, segment{study.Point{X: corner.X, Y: from.Y}, corner}, segment{corner, study.Point{X: to.X, Y: to.Y}})
		}
	}
	for i := range lay.Feeders {
		f := &lay.Feeders[i]
		from, to := lay.Bus(f.From), lay.Bus(f.To)
		if from == nil || to == nil || f.straight(from, to) || f.sideways(from, to) {
			continue
		}
		f.Tree, f.Hung = false, false
		f.Way = lay.way(from, to, ways, lines)
		for k := 1; k < len(f.Way); k++ {
			lines = append(lines, segment{f.Way[k-1], f.Way[k]})
		}
		ways++
	}
	for i := range lay.Feeders {
		for _, q := range lay.Feeders[i].Way {
			lay.W, lay.H = max(lay.W, q.X+margin), max(lay.H, q.Y+margin)
		}
	}
}

// straight reports whether a feeder can lead straight down to its bus.
func (f *Feeder) straight(from, to *PlacedBus) bool {
	return f.Tree && !f.Hung && f.X >= from.X && f.X <= from.X+from.W && f.X >= to.X && f.X <= to.X+to.W && to.Y-to.Head >= from.Y
}

// sideways reports whether a feeder can lead from its bus's trunk to the left
// end of a bar.
func (f *Feeder) sideways(from, to *PlacedBus) bool {
	return f.Tree && f.Hung && to.X >= from.X+from.Stem+1 && to.Y-to.Head >= from.Y
}

// way finds a line from one bar's end to another's that crosses the places of
// as few buses as may be, and is short. Ways that go round below everything
// keep apart by their number.
func (l *Layout) way(a, b *PlacedBus, number int, lines []segment) []study.Point {
	if b.X < a.X {
		a, b = b, a
	}
	const off = 0.45
	la, ra := study.Point{X: a.X, Y: a.Y}, study.Point{X: a.X + a.W, Y: a.Y}
	lb, rb := study.Point{X: b.X, Y: b.Y}, study.Point{X: b.X + b.W, Y: b.Y}
	over := func(p, q study.Point, x float64) []study.Point {
		return []study.Point{p, {X: x, Y: p.Y}, {X: x, Y: q.Y}, q}
	}
	below := l.H + 0.9 + 1.4*float64(number)
	under := func(p, q study.Point, dp, dq float64) []study.Point {
		return []study.Point{p, {X: p.X + dp, Y: p.Y}, {X: p.X + dp, Y: below}, {X: q.X + dq, Y: below}, {X: q.X + dq, Y: q.Y}, q}
	}
	ways := [][]study.Point{
		over(ra, lb, ra.X+off), over(ra, lb, lb.X-off), over(ra, lb, (ra.X+lb.X)/2),
		over(ra, rb, max(ra.X, rb.X)+off), over(la, lb, min(la.X, lb.X)-off),
		under(ra, lb, off, -off), under(ra, rb, off, off), under(la, lb, -off, -off),
	}
	above := func(p, q study.Point, dp, dq float64, c *PlacedBus) []study.Point {
		y := c.Y - c.Head - hangLabel - 0.15
		return []study.Point{p, {X: p.X + dp, Y: p.Y}, {X: p.X + dp, Y: y}, {X: q.X + dq, Y: y}, {X: q.X + dq, Y: q.Y}, q}
	}
	for _, c := range []*PlacedBus{a, b} {
		ways = append(ways, above(ra, rb, off, off, c), above(ra, lb, off, -off, c), above(la, lb, -off, -off, c))
	}
	if math.Abs(ra.Y-lb.Y) < 0.05 && lb.X > ra.X {
		ways = append(ways, []study.Point{ra, lb})
	}
	var best []study.Point
	least := math.Inf(1)
	for _, w := range ways {
		cost := 0.0
		for i := 1; i < len(w); i++ {
			piece := segment{w[i-1], w[i]}
			cost += piece.length() + 200*float64(l.crossed(w[i-1], w[i]))
			for _, other := range lines {
				cost += 5 * piece.clash(other)
			}
			if min(w[i].X, w[i].Y) < 0 {
				cost += 1000
			}
		}
		if cost < least {
			best, least = w, cost
		}
	}
	return best
}

// A segment is an upright or level piece of a line.
type segment struct{ p, q study.Point }

func (s segment) length() float64 { return math.Abs(s.p.X-s.q.X) + math.Abs(s.p.Y-s.q.Y) }

// clash is 1 where two pieces cross and much more where one lies on the other.
func (s segment) clash(o segment) float64 {
	const air = 0.2
	w := min(max(s.p.X, s.q.X), max(o.p.X, o.q.X)) - max(min(s.p.X, s.q.X), min(o.p.X, o.q.X))
	h := min(max(s.p.Y, s.q.Y), max(o.p.Y, o.q.Y)) - max(min(s.p.Y, s.q.Y), min(o.p.Y, o.q.Y))
	switch {
	case w < -air || h < -air:
		return 0
	case w > air || h > air:
		return 20
	}
	return 1
}

// crossed counts the buses whose words or rows an upright or level line runs
// through.
func (l *Layout) crossed(p, q study.Point) (n int) {
	const air = 0.1
	x0, x1 := min(p.X, q.X), max(p.X, q.X)
	y0, y1 := min(p.Y, q.Y), max(p.Y, q.Y)
	for i := range l.Buses {
		b := &l.Buses[i]
		head := x1 > b.X+air && x0 < b.X+b.W-air && y1 > b.Y-b.Head+air && y0 < b.Y-air
		rows := len(b.Rows) > 0 && x1 > b.X+air && x0 < b.X+columnWidth-air && y1 > b.Y+air && y0 < b.Bottom-air
		bar := x1 > b.X+air && x0 < b.X+b.W-air && y0 <= b.Y+air && y1 >= b.Y-air
		if head || rows || bar {
			n++
		}
	}
	return n
}
