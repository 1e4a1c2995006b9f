package grid

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"

	"quietbus/study/phasor"
)

// WiringError says that two ways to a bus turn its angle differently.
type WiringError struct {
	Bus           string
	Element       string
	First, Second float64 // deg
}

func (e *WiringError) Error() string {
	return fmt.Sprintf("%s: by way of %s this bus stands at %.0f deg, by another way at %.0f deg; the vector groups of the two ways disagree", e.Bus, e.Element, e.Second, e.First)
}

// System is a compiled network.
type System struct {
	net      *Network
	node     []int // by bus
	nodes    int
	live     []bool    // by node
	shift    []float64 // by node, rad: the angle by which the node lags the reference
	pat      *pattern
	scale    []float64 // by node: nominal line-to-neutral voltage
	supplies []*Supply
	place    []place
	turn     []complex128 // by node: e^(-j shift)
	floating [3][]bool    // by sequence and node: nothing holds it; nil for none
}

// Compile finds nodes, islands, angles and the order of elimination.
func (n *Network) Compile() (*System, error) {
	s := &System{net: n, node: make([]int, len(n.names))}
	parent := make([]int, len(n.names))
	for i := range parent {
		parent[i] = i
	}
	var find func(int) int
	find = func(i int) int {
		for parent[i] != i {
			parent[i] = parent[parent[i]]
			i = parent[i]
		}
		return i
	}
	for _, j := range n.joins {
		parent[find(int(j[0]))] = find(int(j[1]))
	}
	number := map[int]int{}
	for i := range parent {
		r := find(i)
		k, ok := number[r]
		if !ok {
			k = len(number)
			number[r] = k
			s.scale = append(s.scale, n.nominal[r]/math.Sqrt(3))
		}
		s.node[i] = k
	}
	s.nodes = len(number)
	for _, e := range n.elements {
		if err := e.check(); err != nil {
			return nil, err
		}
		if e.series() {
			b := e.ends()
			if s.node[b[0]] == s.node[b[1]] {
				return nil, &ElementError{e.label(), "ends", "are the same bus"}
			}
		}
		if sup, ok := e.(*Supply); ok {
			s.supplies = append(s.supplies, sup)
		}
	}
	if err := s.reach(); err != nil {
		return nil, err
	}
	near := make([][]int, s.nodes)
	for _, e := range n.elements {
		if b := e.ends(); len(b) == 2 {
			i, j := s.node[b[0]], s.node[b[1]]
			if !slices.Contains(near[i], j) { // few elements meet at a bus
				near[i], near[j] = append(near[i], j), append(near[j], i)
			}
		}
	}
	s.pat = newPattern(s.nodes, near)
	s.places()
	s.turn = make([]complex128, s.nodes)
	for k := range s.turn {
		s.turn[k] = cmplx.Rect(1, -s.shift[k])
	}
	return s, s.float()
}

// float finds the nodes that nothing ties to earth in the zero sequence, and
// refuses loads to neutral that stand there.
func (s *System) float() error {
	group := make([]int, s.nodes)
	for k := range group {
		group[k] = k
	}
	var find func(int) int
	find = func(k int) int {
		for group[k] != k {
			group[k] = group[group[k]]
			k = group[k]
		}
		return k
	}
	held := make([]bool, s.nodes)
	prim := make([]primitive, len(s.net.elements))
	s.admit(prim, 3, phasor.Zero)
	for i := range prim {
		if prim[i].y01 != 0 {
			group[find(int(s.place[i].n0))] = find(int(s.place[i].n1))
		}
	}
	for i := range prim {
		p := &s.place[i]
		if prim[i].y01 != 0 {
			if prim[i].grounded() {
				held[find(int(p.n0))] = true
			}
			continue
		}
		held[find(int(p.n0))] = held[find(int(p.n0))] || prim[i].y00 != 0
		if p.low >= 0 {
			held[find(int(p.n1))] = held[find(int(p.n1))] || prim[i].y11 != 0
		}
	}
	loose := make([]bool, s.nodes)
	any := false
	for k := range loose {
		loose[k] = s.live[k] && !held[find(k)]
		any = any || loose[k]
	}
	if !any {
		return nil
	}
	s.floating[phasor.Zero] = loose
	for i, e := range s.net.elements {
		w, ok := e.(interface{ weights() [3]float64 })
		if ok && loose[s.place[i].n0] {
			if v := w.weights(); v[0]+v[1]+v[2] != 0 {
				return &ElementError{e.label(), "connection", "is to the neutral, but no neutral is earthed on this side, so its current has no way back; earth a neutral, or connect it between phases"}
			}
		}
	}
	return nil
}

// reach walks from the supplies and finds which nodes are live and at what
// angle.
func (s *System) reach() error {
	s.live = make([]bool, s.nodes)
	s.shift = make([]float64, s.nodes)
	near := make([][]Element, s.nodes)
	for _, e := range s.net.elements {
		if e.series() {
			for _, b := range e.ends() {
				near[s.node[b]] = append(near[s.node[b]], e)
			}
		}
	}
	var queue []int
	for _, sup := range s.supplies {
		if k := s.node[sup.Bus]; !s.live[k] {
			s.live[k] = true
			queue = append(queue, k)
		}
	}
	for len(queue) > 0 {
		k := queue[0]
		queue = queue[1:]
		for _, e := range near[k] {
			b := e.ends()
			from, to, turn := s.node[b[0]], s.node[b[1]], 0.0
			if t, ok := e.(*Transformer); ok {
				turn = float64(t.Group.Clock)*math.Pi/6 + t.Shift
			}
			if to == k {
				from, to, turn = to, from, -turn
			}
			angle := s.shift[from] + turn
			if !s.live[to] {
				s.live[to], s.shift[to] = true, angle
				queue = append(queue, to)
			} else if cmplx.Abs(cmplx.Rect(1, angle)-cmplx.Rect(1, s.shift[to])) > 1e-6 {
				return &WiringError{Bus: s.busName(to), Element: e.label(), First: deg(s.shift[to]), Second: deg(angle)}
			}
		}
	}
	return nil
}

func deg(rad float64) float64 { return math.Mod(rad*180/math.Pi+720, 360) }

func (s *System) busName(node int) string {
	for b, k := range s.node {
		if k == node {
			return s.net.names[b]
		}
	}
	return ""
}

// Live reports whether a supply reaches the bus.
func (s *System) Live(b BusID) bool { return s.live[s.node[b]] }

// turned rotates a shift-free value at a node to its true angle.
func (s *System) turned(node int, q phasor.Sequence, v complex128) complex128 {
	switch q {
	case phasor.Positive:
		return v * s.turn[node]
	case phasor.Negative:
		return v * complex(real(s.turn[node]), -imag(s.turn[node]))
	}
	return v
}
