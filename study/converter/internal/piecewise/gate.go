package piecewise

import (
	"math"
	"math/cmplx"
	"sort"
)

// An edge is the opening or the end of a gate's window.
type edge struct {
	theta float64
	gate  int
	open  bool
	index int // in the sorted list
	turns int // whole periods already added to theta
}

// schedule places the gate windows by the fundamentals of the supply.
func (e *engine) schedule() {
	e.edges = e.edges[:0]
	for i, g := range e.c.Gates {
		on := wrap(g.At - cmplx.Phase(e.reference(g)))
		e.edges = append(e.edges, edge{theta: on, gate: i, open: true}, edge{theta: wrap(on + g.Width), gate: i})
	}
	sort.SliceStable(e.edges, func(i, j int) bool { return e.edges[i].theta < e.edges[j].theta })
	for i := range e.edges {
		e.edges[i].index = i
	}
}

// reference returns the fundamental that a gate follows.
func (e *engine) reference(g Gate) complex128 {
	return g.Ref[0]*e.s.first[0] + g.Ref[1]*e.s.first[1] + g.Ref[2]*e.s.first[2]
}

// gatesAt returns the gates open at theta in [0, 2 pi) and the next edge.
func (e *engine) gatesAt(theta float64) (open uint64, next edge) {
	if len(e.edges) == 0 {
		return 0, edge{theta: math.Inf(1)}
	}
	for _, d := range e.edges {
		if g := e.c.Gates[d.gate]; d.open && wrap(theta-d.theta) < g.Width {
			open |= 1 << d.gate
		}
	}
	for _, d := range e.edges {
		if d.theta > theta {
			return open, d
		}
	}
	next = e.edges[0]
	next.theta, next.turns = next.theta+2*math.Pi, 1
	return open, next
}

// after returns the edge that follows d.
func (e *engine) after(d edge) edge {
	i, turns := d.index+1, d.turns
	if i == len(e.edges) {
		i, turns = 0, turns+1
	}
	n := e.edges[i]
	n.theta += 2 * math.Pi * float64(turns)
	n.turns = turns
	return n
}

// wrap brings an angle into [0, 2 pi).
func wrap(a float64) float64 {
	if a = math.Mod(a, 2*math.Pi); a < 0 {
		a += 2 * math.Pi
	}
	if a >= 2*math.Pi {
		a = 0
	}
	return a
}
