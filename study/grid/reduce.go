package grid

import (
	"context"
	"fmt"

	"quietbus/study/phasor"
)

// Reduced is a system seen from some of its buses, its ports: at each order
// and sequence the impedance matrix Z between the ports, ohm, shift-free, with
// EMFs shorted. Shunts that are added at ports change it by a low rank (the
// matrix inversion lemma), so that many variants of one network are solved
// without factoring it again; see Variant. It is immutable and safe for
// concurrent use.
//
// Single-phase shunts couple the sequences; they are folded into one matrix
// over all three sequences, order by order.
type Reduced struct {
	sys     *System
	order   int
	nodes   []int             // by port
	port    []int             // by node: its port, -1 for none
	z       [3][][]complex128 // by sequence and order: p x p by rows; nil where the sequence is coupled
	coupled [][]complex128    // by order, 2 and above: 3p x 3p by rows, nil without single-phase shunts
	across  [][]complex128    // by order: response of the single-phase shunts' currents, shunts x 3p
	shunts  []ElementID
	prim    [3][][]primitive
	drawing []ElementID // elements whose order 1 current follows from the voltage
}

// Reduce finds the impedances between ports for orders 1 to order: the named
// buses, and those on which supplies, loads with a current of their own and
// single-phase shunts stand. Buses without a supply are no ports.
//
// Errors: those of the solution; cancellation.
func (s *System) Reduce(ctx context.Context, order int, buses []BusID) (*Reduced, error) {
	r := &Reduced{sys: s, order: order, port: make([]int, s.nodes)}
	for k := range r.port {
		r.port[k] = -1
	}
	add := func(k int) {
		if s.live[k] && r.port[k] < 0 {
			r.port[k] = len(r.nodes)
			r.nodes = append(r.nodes, k)
		}
	}
	for _, b := range buses {
		add(s.node[b])
	}
	for id, e := range s.net.elements {
		k := s.node[e.ends()[0]]
		if !s.live[k] {
			continue
		}
		switch e := e.(type) {
		case *Supply:
			add(k)
		case *PhaseShunt:
			add(k)
			r.shunts = append(r.shunts, ElementID(id))
			r.drawing = append(r.drawing, ElementID(id))
		case Drawing:
			if l, ok := e.(*Load); ok && l.AtOrder1 == "impedance" {
				continue // it is in the admittances, and draws nothing on top
			}
			add(k)
			r.drawing = append(r.drawing, ElementID(id))
		}
	}
	f, columns := s.pat.newFactors(), make([]complex128, s.nodes*len(r.nodes))
	for q := range r.z {
		r.z[q], r.prim[q] = make([][]complex128, order+1), make([][]primitive, order+1)
		for h := 1; h <= order; h++ {
			if err := ctx.Err(); err != nil {
				return nil, err
			}
			if err := r.look(f, columns, phasor.Sequence(q), h); err != nil {
				return nil, err
			}
		}
	}
	if len(r.shunts) > 0 {
		r.coupled, r.across = make([][]complex128, order+1), make([][]complex128, order+1)
		for h := 2; h <= order; h++ {
			if err := r.couple(h); err != nil {
				return nil, err
			}
		}
	}
	return r, nil
}

// look fills in one sequence at one order.
func (r *Reduced) look(f *factors, columns []complex128, q phasor.Sequence, h int) error {
	s, p := r.sys, len(r.nodes)
	prim := make([]primitive, len(s.net.elements))
	s.admit(prim, float64(h), q)
	z := make([]complex128, p*p)
	r.prim[q][h], r.z[q][h] = prim, z
	if s.factor(f, prim, q) {
		clear(columns)
		for j, k := range r.nodes {
			if !s.pinned(k, q) {
				columns[s.pat.rank[k]*p+j] = complex(s.scale[k], 0)
			}
		}
		s.pat.solveMany(f, columns, p)
		for i, k := range r.nodes {
			if s.pinned(k, q) {
				continue
			}
			row := columns[s.pat.rank[k]*p:][:p]
			for j, v := range row {
				z[i*p+j] = v * complex(s.scale[k], 0)
			}
		}
		return nil
	}
	one, v := make([]complex128, s.nodes), make([]complex128, s.nodes)
	for j, k := range r.nodes {
		if s.pinned(k, q) {
			continue
		}
		clear(one)
		one[k] = 1
		if !s.dense(prim, q, one, v) {
			return &SingularError{Sequence: q, Order: h}
		}
		for i, k := range r.nodes {
			z[i*p+j] = v[k]
		}
	}
	return nil
}

// couple folds the single-phase shunts into one matrix over three sequences:
// with W the response to 1 A drawn by each, T the voltages across them and Y
// their admittances, Z' = Z + W (1 - Y T W)^-1 Y T Z.
func (r *Reduced) couple(h int) error {
	s, p, n := r.sys, len(r.nodes), len(r.shunts)
	p3 := 3 * p
	zc := make([]complex128, p3*p3)
	for q := range r.z {
		for i := range p {
			copy(zc[(q*p+i)*p3+q*p:][:p], r.z[q][h][i*p:][:p])
		}
	}
	w := make([]complex128, n*p3) // by shunt: voltages at (sequence, port) for 1 A drawn
	for i, id := range r.shunts {
		x := s.net.elements[id].(*PhaseShunt)
		k := s.node[x.Bus]
		for q, v := range phasor.ToSequence(x.through(1)) {
			drawn := -s.turned(k, mirror(phasor.Sequence(q)), v)
			for j := range p {
				w[i*p3+q*p+j] = r.z[q][h][j*p+r.port[k]] * drawn
			}
		}
	}
	tz := make([]complex128, n*p3) // by shunt: voltage across it for 1 A into each (sequence, port)
	a := make([][]complex128, n)
	y := make([]complex128, n)
	for i, id := range r.shunts {
		y[i] = s.net.elements[id].(*PhaseShunt).Branch.Admittance(float64(h))
	}
	var column [3]complex128
	for i, id := range r.shunts {
		x := s.net.elements[id].(*PhaseShunt)
		k := s.node[x.Bus]
		across := func(at func(q int) complex128) complex128 {
			for q := range column {
				column[q] = s.turned(k, phasor.Sequence(q), at(q))
			}
			return x.terminal(phasor.ToPhase(column))
		}
		for c := range p3 {
			tz[i*p3+c] = across(func(q int) complex128 { return zc[(q*p+r.port[k])*p3+c] })
		}
		a[i] = make([]complex128, n)
		for j := range n {
			a[i][j] = -across(func(q int) complex128 { return w[j*p3+q*p+r.port[k]] }) * y[j]
		}
		a[i][i]++
	}
	// the shunts' voltages e solve (1 - R Y) e = T Z i, column by column
	e := make([]complex128, n*p3)
	b := make([]complex128, n)
	for c := range p3 {
		m := make([][]complex128, n)
		for i := range m {
			m[i] = append([]complex128(nil), a[i]...)
			b[i] = tz[i*p3+c]
		}
		if !solveDense(m, b) {
			return fmt.Errorf("the single-phase loads resonate with the network at order %d without any damping", h)
		}
		for i := range b {
			e[i*p3+c] = b[i]
		}
	}
	for i := range n {
		for row := range p3 {
			if u := w[i*p3+row] * y[i]; u != 0 {
				for c := range p3 {
					zc[row*p3+c] += u * e[i*p3+c]
				}
			}
		}
	}
	r.coupled[h], r.across[h] = zc, e
	return nil
}

// Has reports whether a bus is a port.
func (r *Reduced) Has(b BusID) bool { return r.port[r.sys.node[b]] >= 0 }
