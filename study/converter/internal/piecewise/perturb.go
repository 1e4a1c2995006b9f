package piecewise

import "math"

// A variation is the work space of a linearisation.
type variation struct {
	o      *Orbit
	c      *Circuit
	order  int
	zero   bool // the circuit sees the zero sequence
	parts  int
	at     []place
	flow   []float64 // d0 x d0: derivative over the part, in the frame of its start
	means  []float64 // np x d0
	home   []float64 // d0 x dEnd, nil without symmetry
	n0, d0 int
	np     int

	states   []complex128 // the variation, in the order of the weights
	turns    []complex128 // integrals of e^jk theta by k = -order..2 order and place
	up, down reading
}

// A place is one segment in a linearisation.
type place struct {
	*segment
	*link
	inv    []complex128    // (jkI - A)^-1
	za, zb []complex128    // e^jk theta at both ends, k = 0..2 order
	turns  []complex128    // integral of e^jk theta, k = -order..2 order
	B      [][3]complex128 // n: forces by sequence
	xa, xb []complex128    // variation at both ends, d
	X      []complex128    // driven part, n
	xi     []complex128
}

// A reading turns the variation into Fourier integrals of the line currents at
// +k, or at -k, by order (from 1) and sequence of the current.
type reading struct {
	weights []complex128 // 3 order x states: of the states at both ends of every place, then of the parameters
	force   []complex128 // 3 order x 3 x places: of the integral of the driving
}

func newVariation(o *Orbit, order int) *variation {
	e := o.solver.e
	v := &variation{o: o, c: e.c, order: order, parts: o.parts, n0: o.segs[0].m.n, d0: o.segs[0].m.d, np: len(e.c.Controls)}
	for _, k := range e.c.K {
		v.zero = v.zero || math.Abs(k[0]+k[1]+k[2]) > 1e-9
	}
	wide := v.np
	for i := range o.segs {
		v.at = append(v.at, newPlace(&o.segs[i], &o.links[i], order))
		wide += 2 * o.segs[i].m.n
	}
	v.states = make([]complex128, wide)
	v.turns = make([]complex128, (3*order+1)*len(v.at))
	for i := range v.at {
		for k, z := range v.at[i].turns {
			v.turns[k*len(v.at)+i] = z
		}
	}
	v.fill(&v.up, false)
	v.fill(&v.down, true)
	// derivative works on the engine's pass: lend it that of the orbit
	segs, links, sym, parts := e.segs, e.links, e.sym, e.parts
	e.segs, e.links, e.sym, e.parts = o.segs, o.links, o.sym, o.parts
	flow, means := e.derivative()
	v.flow, v.means = append([]float64(nil), flow[:v.d0*v.d0]...), append([]float64(nil), means...)
	if _, _, H := e.home(); H != nil {
		v.home = append([]float64(nil), H...)
	}
	e.segs, e.links, e.sym, e.parts = segs, links, sym, parts
	return v
}

func newPlace(s *segment, l *link, order int) place {
	m := s.m
	n := m.n
	p := place{
		segment: s, link: l, inv: m.inverse(order),
		za: make([]complex128, 2*order+1), zb: make([]complex128, 2*order+1), turns: make([]complex128, 3*order+1),
		B: make([][3]complex128, n), xa: make([]complex128, m.d), xb: make([]complex128, m.d), X: make([]complex128, n), xi: make([]complex128, m.d),
	}
	for k := range p.za {
		p.za[k], p.zb[k] = turn(float64(k)*s.a), turn(float64(k)*s.b)
	}
	for k := -order; k <= 2*order; k++ {
		if k == 0 {
			p.turns[order] = complex(s.b-s.a, 0)
		} else {
			p.turns[order+k] = (signed(p.zb, k) - signed(p.za, k)) * complex(0, -1/float64(k))
		}
	}
	for j := range p.B {
		for t := range p.B[j] {
			for q := 0; q < 3; q++ {
				p.B[j][t] += complex(m.B[j*3+q], 0) * sequence[t][q]
			}
		}
	}
	return p
}

// fill makes the reading at +k, or at -k.
func (v *variation) fill(r *reading, down bool) {
	order, places, wide := v.order, len(v.at), len(v.states)
	r.weights, r.force = make([]complex128, 3*order*wide), make([]complex128, 9*order*places)
	col := 0
	for i := range v.at {
		p := &v.at[i]
		m := p.m
		n, outs := m.n, m.outputs(order)
		for k := 1; k <= order; k++ {
			za, zb, one := conj(p.za[k]), conj(p.zb[k]), p.turns[order-k]
			if down {
				za, zb, one = p.za[k], p.zb[k], p.turns[order+k]
			}
			for s := 0; s < 3; s++ {
				row := (k-1)*3 + s
				weights := r.weights[row*wide : (row+1)*wide]
				for j := 0; j < n; j++ {
					// component of the sequence in out (jkI - A)^-1, or in its conjugate
					var g complex128
					for q := 0; q < 3; q++ {
						z := outs[(k*3+q)*n+j]
						if down {
							z = conj(z)
						}
						g += conj(sequence[s][q]) * z
					}
					g /= 3
					weights[col+j], weights[col+n+j] = g*za, -g*zb
					for t, b := range p.B[j] {
						r.force[(row*3+t)*places+i] += g * b
					}
					for c := 0; c < v.np; c++ {
						weights[wide-v.np+c] += g * complex(m.A[j*m.d+n+1+c], 0) * one
					}
				}
			}
		}
		col += 2 * n
	}
}

// factor is what the variation under e^jht of a sequence is multiplied by from
// one part of the period to the next.
func (v *variation) factor(h, s int) complex128 {
	if v.o.sym == nil {
		return 1
	}
	return turn(2*math.Pi*float64(h)/float64(v.parts)) / v.own(s)
}

// own is the factor by which a sequence itself turns under the symmetry.
func (v *variation) own(s int) complex128 {
	if v.o.sym == nil {
		return 1
	}
	return -sequence[s][v.o.sym.Phase[0]]
}

// drive fills xa, xb and X with the periodic variation under e^jht of sequence s.
func (v *variation) drive(h, s int) bool {
	for i := range v.at {
		p := &v.at[i]
		n := p.m.n
		for r := 0; r < n; r++ {
			var sum complex128
			for j := 0; j < n; j++ {
				sum += p.inv[(h*n+r)*n+j] * p.B[j][s]
			}
			p.X[r] = sum
		}
	}
	// once with a zero start, for the right-hand side; once with the solution
	clear(v.at[0].xa)
	end, means := v.run(h, s)
	f := v.factor(h, s)
	// the parameters repeat, so they stand still unless the factor is 1
	held := cabs1(f-1) > 1e-9
	size := v.n0 + v.np
	a, b := make([]float64, 4*size*size), make([]float64, 2*size)
	set := func(i, j int, z complex128) {
		a[2*i*2*size+2*j], a[2*i*2*size+2*j+1] = real(z), -imag(z)
		a[(2*i+1)*2*size+2*j], a[(2*i+1)*2*size+2*j+1] = imag(z), real(z)
	}
	for i := 0; i < v.n0; i++ {
		for j := 0; j < v.n0; j++ {
			z := complex(-v.flow[i*v.d0+j], 0)
			if i == j {
				z += f
			}
			set(i, j, z)
		}
		for j := 0; j < v.np; j++ {
			set(i, v.n0+j, complex(-v.flow[i*v.d0+v.n0+1+j], 0))
		}
		b[2*i], b[2*i+1] = real(end[i]), imag(end[i])
	}
	span := 2 * math.Pi / float64(v.parts)
	for c, w := range v.o.watts {
		row := v.n0 + c
		if held {
			set(row, row, 1)
			continue
		}
		g := w.gain()
		for j := 0; j < v.n0; j++ {
			set(row, j, complex(g*v.means[c*v.d0+j]/span, 0))
		}
		for j := 0; j < v.np; j++ {
			z := g * v.means[c*v.d0+v.n0+1+j] / span
			if w.Power && j == c {
				z += w.mean
			}
			set(row, v.n0+j, complex(z, 0))
		}
		b[2*row], b[2*row+1] = -g*real(means[c]), -g*imag(means[c])
	}
	if !solve(a, 2*size, b, 1) {
		return false
	}
	xa := v.at[0].xa
	for i := 0; i < v.n0; i++ {
		xa[i] = complex(b[2*i], b[2*i+1])
	}
	for c := 0; c < v.np; c++ {
		xa[v.n0+1+c] = complex(b[2*(v.n0+c)], b[2*(v.n0+c)+1])
	}
	v.run(h, s)
	col := 0
	for i := range v.at {
		p := &v.at[i]
		col += copy(v.states[col:], p.xa[:p.m.n])
		col += copy(v.states[col:], p.xb[:p.m.n])
	}
	copy(v.states[col:], xa[v.n0+1:])
	return true
}

// gain is the derivative of the controlled average by the mean of its state.
func (w control) gain() float64 {
	if w.Power {
		return w.p - 2*w.Slope*w.mean
	}
	return 1
}

// run carries the variation from xa of the first place through the part. It
// returns its end in the frame of the start, and the means of the controlled
// states.
func (v *variation) run(h, s int) (end, means []complex128) {
	means = make([]complex128, v.np)
	span := complex(2*math.Pi/float64(v.parts), 0)
	for i := range v.at {
		p := &v.at[i]
		m := p.m
		za, zb := p.za[h], p.zb[h]
		// transient part at the start
		copy(p.xi, p.xa)
		for r, x := range p.X {
			p.xi[r] -= x * za
		}
		copy(p.xb, p.xi)
		for r := 0; r < m.n; r++ {
			p.xb[r] += rowTimes(p.D[r*m.d:(r+1)*m.d], p.xi) + p.X[r]*zb
		}
		for c := 0; c < v.np; c++ {
			sum := rowTimes(p.W[c*m.d:(c+1)*m.d], p.xi)
			for j, g := range m.steps.seen[c*m.d : c*m.d+m.n] {
				if g != 0 {
					sum += complex(g, 0) * p.X[j] * p.turns[v.order+h]
				}
			}
			means[c] += sum / span
		}
		if p.S == nil {
			if v.home == nil {
				return p.xb, means
			}
			end = make([]complex128, v.d0)
			for r := range end {
				end[r] = rowTimes(v.home[r*m.d:(r+1)*m.d], p.xb)
			}
			return end, means
		}
		next := &v.at[i+1]
		for r := range next.xa {
			next.xa[r] = rowTimes(p.S[r*m.d:(r+1)*m.d], p.xb)
		}
		var shift complex128
		switch {
		case p.gate >= 0:
			if h == 1 {
				// the gate moves by minus the turn of its reference
				shift = v.o.gateTurn(v.c.Gates[p.gate], s)
			}
		case p.rate != 0:
			u := &m.watch[p.by].u
			for q := range u {
				shift += complex(u[q]/p.rate, 0) * sequence[s][q]
			}
			shift *= zb
		}
		if shift != 0 {
			for r, g := range p.jump {
				next.xa[r] += complex(g, 0) * shift
			}
		}
	}
	return nil, means
}

// gateTurn returns the turn of a gate's reference under the complex voltage
// e^jt of sequence s. A voltage change dV (rms) is (dV / sqrt 2) e^jt and its
// conjugate; the turn, the imaginary part of Ref dV over the reference, has
// likewise a half that goes with dV, which counts here, and its conjugate.
func (o *Orbit) gateTurn(g Gate, s int) complex128 {
	var ref, dv complex128
	for q := range g.Ref {
		ref += g.Ref[q] * o.first[q]
		dv += g.Ref[q] * sequence[s][q]
	}
	return complex(math.Sqrt2, 0) * dv / ref / complex(0, 2)
}

// read adds the Fourier coefficients of the line currents of the variation
// under e^jht of sequence s to the linearisation.
func (v *variation) read(l *Linearisation, h, s int) {
	scale := complex(float64(v.parts)/(2*math.Pi), 0)
	f := v.factor(h, s)
	for k := 1; k <= v.order; k++ {
		out := l.index(k, h)
		z := turn(2 * math.Pi * float64(k) / float64(v.parts))
		for q := 0; q < 3; q++ {
			if q == 0 && !v.zero {
				continue
			}
			// part r gives its integral times (factor own(q) / z)^r: a sum of
			// parts, or nothing
			own := v.own(q)
			if cabs1(f*own-z) < 1e-9 {
				l.up[out+q*3+s] = scale * v.coefficient(k, q, s, h-k, false)
			}
			if cabs1(f*own-conj(z)) < 1e-9 {
				l.down[out+q*3+s] = scale * v.coefficient(k, q, s, h+k, true)
			}
		}
	}
}

// coefficient returns the integral of sequence q of the line currents at +k or
// -k over the part; turn is the order of the driving in that frame.
func (v *variation) coefficient(k, q, s, turn int, down bool) (sum complex128) {
	r := &v.up
	if down {
		r = &v.down
	}
	row, wide, places := (k-1)*3+q, len(v.states), len(v.at)
	weights := r.weights[row*wide : (row+1)*wide]
	for i, x := range v.states {
		sum += weights[i] * x
	}
	at := v.order + turn
	turns := v.turns[at*places : (at+1)*places]
	for i, g := range r.force[(row*3+s)*places : (row*3+s+1)*places] {
		sum += g * turns[i]
	}
	return sum
}

func signed(z []complex128, k int) complex128 {
	if k < 0 {
		return conj(z[-k])
	}
	return z[k]
}

func conj(z complex128) complex128 { return complex(real(z), -imag(z)) }

func rowTimes(row []float64, x []complex128) complex128 {
	var re, im float64
	for i, a := range row {
		re += a * real(x[i])
		im += a * imag(x[i])
	}
	return complex(re, im)
}
