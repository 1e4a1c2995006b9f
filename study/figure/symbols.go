package figure

import (
	"image/color"
	"math"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
)

// Graphical symbols after IEC 60617, drawn around a point with a size of about
// u in each direction.

// symbol draws the symbol of a kind of item with its middle at q.
func (p *pen) symbol(kind study.Kind, q vg.Point, u, line vg.Length, ink color.Color) {
	switch kind {
	case study.KindMotor, study.KindGenerator:
		p.strokePath(line, ink, nil, circle(q, u))
		p.writeBold(q.X, q.Y, centre, 1.2*u, ink, map[study.Kind]string{study.KindMotor: "M", study.KindGenerator: "G"}[kind])
	case study.KindNonlinearLoad:
		p.converter(q, u, line, ink)
	case study.KindBank:
		p.capacitor(q, u, line, ink)
	case study.KindFilter:
		p.coil(vg.Point{X: q.X - 0.7*u, Y: q.Y}, 0.7*u, line, ink)
		p.capacitor(vg.Point{X: q.X + 0.6*u, Y: q.Y}, 0.8*u, line, ink)
	default:
		p.arrow(q, u, line, ink)
	}
}

// arrow is a load: a line that ends in an arrow head, to the right.
func (p *pen) arrow(q vg.Point, u, line vg.Length, ink color.Color) {
	p.stroke(line, ink, nil, vg.Point{X: q.X - u, Y: q.Y}, vg.Point{X: q.X + 0.4*u, Y: q.Y})
	var head vg.Path
	head.Move(vg.Point{X: q.X + u, Y: q.Y})
	head.Line(vg.Point{X: q.X, Y: q.Y + 0.55*u})
	head.Line(vg.Point{X: q.X, Y: q.Y - 0.55*u})
	head.Close()
	p.fillPath(ink, head)
}

// converter is a square with a rectifier diode in it.
func (p *pen) converter(q vg.Point, u, line vg.Length, ink color.Color) {
	p.box(rect(q.X-u, q.Y-u, q.X+u, q.Y+u), line, ink, nil)
	var path vg.Path
	path.Move(vg.Point{X: q.X - 0.75*u, Y: q.Y})
	path.Line(vg.Point{X: q.X + 0.75*u, Y: q.Y})
	path.Move(vg.Point{X: q.X + 0.4*u, Y: q.Y + 0.5*u})
	path.Line(vg.Point{X: q.X + 0.4*u, Y: q.Y - 0.5*u})
	p.strokePath(line, ink, nil, path)
	var tri vg.Path
	tri.Move(vg.Point{X: q.X - 0.4*u, Y: q.Y + 0.5*u})
	tri.Line(vg.Point{X: q.X + 0.4*u, Y: q.Y})
	tri.Line(vg.Point{X: q.X - 0.4*u, Y: q.Y - 0.5*u})
	tri.Close()
	p.fillPath(ink, tri)
}

// capacitor is two plates across the line.
func (p *pen) capacitor(q vg.Point, u, line vg.Length, ink color.Color) {
	var path vg.Path
	path.Move(vg.Point{X: q.X - u, Y: q.Y})
	path.Line(vg.Point{X: q.X - 0.25*u, Y: q.Y})
	path.Move(vg.Point{X: q.X + 0.25*u, Y: q.Y})
	path.Line(vg.Point{X: q.X + u, Y: q.Y})
	p.strokePath(line, ink, nil, path)
	var plates vg.Path
	for _, x := range []vg.Length{-0.25, 0.25} {
		plates.Move(vg.Point{X: q.X + x*u, Y: q.Y - 0.85*u})
		plates.Line(vg.Point{X: q.X + x*u, Y: q.Y + 0.85*u})
	}
	p.strokePath(line*1.8, ink, nil, plates)
}

// coil is a reactor of three half rounds along the line.
func (p *pen) coil(q vg.Point, u, line vg.Length, ink color.Color) {
	var path vg.Path
	r := u / 3
	for i := range 3 {
		at := vg.Point{X: q.X + vg.Length(2*i-2)*r, Y: q.Y}
		path.Move(vg.Point{X: at.X + r, Y: at.Y})
		path.Arc(at, r, 0, math.Pi)
	}
	p.strokePath(line*1.2, ink, nil, path)
}

// coilDown is a reactor along a vertical line.
func (p *pen) coilDown(q vg.Point, u, line vg.Length, ink color.Color) {
	var path vg.Path
	r := u / 3
	for i := range 3 {
		at := vg.Point{X: q.X, Y: q.Y + vg.Length(2*i-2)*r}
		path.Move(vg.Point{X: at.X, Y: at.Y - r})
		path.Arc(at, r, -math.Pi/2, math.Pi)
	}
	p.strokePath(line*1.2, ink, nil, path)
}

// transformer is two circles that overlap, along a line that leads down or
// sideways.
func (p *pen) transformer(q vg.Point, u, line vg.Length, ink color.Color, upright bool) {
	d := vg.Point{Y: 0.6 * u}
	gap := rect(q.X-2, q.Y-1.6*u, q.X+2, q.Y+1.6*u)
	if !upright {
		d = vg.Point{X: 0.6 * u}
		gap = rect(q.X-1.6*u, q.Y-2, q.X+1.6*u, q.Y+2)
	}
	p.fill(gap, p.st.Ground)
	p.strokePath(line, ink, nil, append(circle(q.Add(d), u), circle(q.Sub(d), u)...))
}

// infeed is the supply: a hatched square.
func (p *pen) infeed(q vg.Point, u, line vg.Length, ink color.Color) {
	r := rect(q.X-u, q.Y-u, q.X+u, q.Y+u)
	p.box(r, line, ink, nil)
	var path vg.Path
	for _, d := range []vg.Length{-1, 0, 1} {
		path.Move(vg.Point{X: q.X - u + max(0, d)*u, Y: q.Y - u + max(0, -d)*u})
		path.Line(vg.Point{X: q.X + u + min(0, d)*u, Y: q.Y + u - max(0, d)*u})
		path.Move(vg.Point{X: q.X - u + max(0, d)*u, Y: q.Y + u - max(0, -d)*u})
		path.Line(vg.Point{X: q.X + u + min(0, d)*u, Y: q.Y - u + max(0, d)*u})
	}
	p.strokePath(line*0.6, ink, nil, path)
}

// MeasureMark draws the small geometric mark of the study's i-th measure, the
// same on card, single-line and figure.
func MeasureMark(c vg.Canvas, i int, q vg.Point, u vg.Length, ink color.Color, solid bool) {
	path := measureShape(i, q, u)
	c.SetColor(ink)
	if solid {
		c.Fill(path)
		return
	}
	c.SetLineWidth(u / 5)
	c.SetLineDash(nil, 0)
	c.Stroke(path)
}

func measureShape(i int, q vg.Point, u vg.Length) vg.Path {
	corners := [...]int{0, 3, 4, 5, 6, 8}
	turn := [...]float64{0, math.Pi / 2, 0, math.Pi / 2, 0, math.Pi / 8}
	k := i % (2 * len(corners))
	star := k >= len(corners)
	k %= len(corners)
	if corners[k] == 0 && !star {
		return circle(q, u*0.85)
	}
	n := max(corners[k], 4)
	var path vg.Path
	steps := n
	if star {
		steps = 2 * n
	}
	for j := range steps {
		r := u
		if star && j%2 == 1 {
			r = u * 0.5
		}
		a := turn[k] + 2*math.Pi*float64(j)/float64(steps)
		v := vg.Point{X: q.X + r*vg.Length(math.Cos(a)), Y: q.Y + r*vg.Length(math.Sin(a))}
		if j == 0 {
			path.Move(v)
		} else {
			path.Line(v)
		}
	}
	path.Close()
	return path
}
