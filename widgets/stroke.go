package widgets

import "math"

// A pixelPoint is a place in the picture, in pixels, y down.
type pixelPoint struct{ x, y float64 }

// A polyline is a flattened sub-path.
type polyline struct {
	pts    []pixelPoint
	closed bool
}

// thin leaves out points of a polyline that no one would miss: those within
// tolerance of the line between their neighbours that stay. It keeps a cone of
// directions from the last point kept that passes all since, so it looks at
// each point once. The result overwrites the input.
func thin(pts []pixelPoint, tolerance float64) []pixelPoint {
	if len(pts) < 3 {
		return pts
	}
	out := pts[:1]
	start, last := pts[0], pts[0]
	reach := 0.0               // farthest point since start
	var lx, ly, rx, ry float64 // sides of the cone, unit vectors
	open := true               // any direction passes
	for _, p := range pts[1:] {
		dx, dy := p.x-start.x, p.y-start.y
		d := math.Sqrt(dx*dx + dy*dy)
		passes := open || (d >= reach && lx*dy-ly*dx >= 0 && rx*dy-ry*dx <= 0)
		if !passes {
			out = append(out, last)
			start, open, reach = last, true, 0
			dx, dy = p.x-start.x, p.y-start.y
			d = math.Sqrt(dx*dx + dy*dy)
		}
		last = p
		if d <= tolerance {
			continue
		}
		reach = d
		s := tolerance / d
		k := math.Sqrt(1 - s*s)
		ux, uy := dx/d, dy/d
		alx, aly := ux*k+uy*s, uy*k-ux*s // turned back by the tolerance
		arx, ary := ux*k-uy*s, uy*k+ux*s // turned on
		if open || lx*aly-ly*alx > 0 {
			lx, ly = alx, aly
		}
		if open || rx*ary-ry*arx < 0 {
			rx, ry = arx, ary
		}
		open = false
	}
	return append(out, last)
}

// stroke adds the outline of a polyline drawn with a pen of the given width:
// one quadrilateral a segment, and a wedge on the outer side of each turn. All
// have the same orientation, so overlaps cut off at full coverage and nothing
// cancels. Ends are square-cut at the end points.
func (c *coverage) stroke(line polyline, width float64) {
	pts := line.pts
	half := width / 2
	first := true
	var fx, fy, px, py float64 // normals of the first and the previous segment
	var start, prev pixelPoint
	n := len(pts)
	if line.closed {
		n++
	}
	for i := 1; i < n; i++ {
		a := pts[i-1]
		b := pts[i%len(pts)]
		if !first {
			a = prev
		}
		dx, dy := b.x-a.x, b.y-a.y
		length := math.Hypot(dx, dy)
		if length < 1e-6 {
			if first {
				start, prev = a, a
			}
			continue
		}
		nx, ny := -dy/length*half, dx/length*half
		if first {
			start, fx, fy = a, nx, ny
			first = false
		} else {
			c.turn(a, px, py, nx, ny, half)
		}
		c.quad(a, b, nx, ny)
		px, py, prev = nx, ny, b
	}
	if line.closed && !first {
		c.turn(start, px, py, fx, fy, half)
	}
}

// quad adds the band of one segment.
func (c *coverage) quad(a, b pixelPoint, nx, ny float64) {
	c.edge(a.x-nx, a.y-ny, b.x-nx, b.y-ny)
	c.edge(b.x-nx, b.y-ny, b.x+nx, b.y+ny)
	c.edge(b.x+nx, b.y+ny, a.x+nx, a.y+ny)
	c.edge(a.x+nx, a.y+ny, a.x-nx, a.y-ny)
}

// turn fills the gap on the outer side between two segments that meet at p,
// round for a pen one can see, cut straight for a hairline.
func (c *coverage) turn(p pixelPoint, ax, ay, bx, by, half float64) {
	cross := ax*by - ay*bx
	if math.Abs(cross) < 1e-9 && ax*bx+ay*by > 0 {
		return
	}
	steps, angle := 1, 0.0
	if half > 0.75 {
		angle = math.Atan2(cross, ax*bx+ay*by)
		steps = 1 + int(math.Abs(angle)*math.Sqrt(half)*1.2)
	}
	// The outer side is along -n when turning towards +n, else along +n. The
	// band of a segment runs clockwise in these coordinates, and so must this.
	sx, sy, ex, ey := -ax, -ay, -bx, -by
	if cross < 0 {
		sx, sy, ex, ey, angle = bx, by, ax, ay, -angle
	}
	px, py := sx, sy
	c.edge(p.x, p.y, p.x+px, p.y+py)
	for i := 1; i <= steps; i++ {
		qx, qy := ex, ey
		if i < steps {
			s, k := math.Sincos(angle * float64(i) / float64(steps))
			qx, qy = sx*k-sy*s, sx*s+sy*k
		}
		c.edge(p.x+px, p.y+py, p.x+qx, p.y+qy)
		px, py = qx, qy
	}
	c.edge(p.x+px, p.y+py, p.x, p.y)
}

// dash cuts a polyline into its dashes. The pattern holds lengths of dashes and
// gaps in turn; offset is how far into it the line starts.
func dash(line polyline, pattern []float64, offset float64, emit func(polyline)) {
	total := 0.0
	for _, d := range pattern {
		if d < 0 || math.IsNaN(d) || math.IsInf(d, 0) {
			emit(line)
			return
		}
		total += d
	}
	if len(pattern)%2 == 1 { // an odd pattern alternates its meaning
		pattern = append(pattern[:len(pattern):len(pattern)], pattern...)
		total *= 2
	}
	if total < 0.1 || math.IsNaN(offset) || math.IsInf(offset, 0) {
		emit(line) // dashes too fine to see
		return
	}
	offset = math.Mod(offset, total)
	if offset < 0 {
		offset += total
	}
	at := 0
	for offset >= pattern[at] {
		offset -= pattern[at]
		at = (at + 1) % len(pattern)
	}
	left := pattern[at] - offset
	pts := line.pts
	if line.closed && len(pts) > 1 {
		pts = append(pts[:len(pts):len(pts)], pts[0])
	}
	if len(pts) == 0 {
		return
	}
	piece := make([]pixelPoint, 0, 8)
	if at%2 == 0 {
		piece = append(piece, pts[0])
	}
	for i := 1; i < len(pts); i++ {
		a, b := pts[i-1], pts[i]
		length := math.Hypot(b.x-a.x, b.y-a.y)
		gone := 0.0
		for length-gone > left {
			gone += left
			p := pixelPoint{a.x + (b.x-a.x)*gone/length, a.y + (b.y-a.y)*gone/length}
			if at%2 == 0 {
				emit(polyline{pts: append(piece, p)})
				piece = piece[:0]
			} else {
				piece = append(piece[:0], p)
			}
			at = (at + 1) % len(pattern)
			left = pattern[at]
		}
		left -= length - gone
		if at%2 == 0 {
			piece = append(piece, b)
		}
	}
	if at%2 == 0 && len(piece) > 1 {
		emit(polyline{pts: piece})
	}
}
