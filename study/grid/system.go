package grid

import (
	"fmt"
	"math"
	"math/cmplx"

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
	adj := make([]map[int]struct{}, s.nodes)
	for i := range adj {
		adj[i] = map[int]struct{}{}
	}
	for _, e := range n.elements {
		if b := e.ends(); len(b) == 2 {
			i, j := s.node[b[0]], s.node[b[1]]
			adj[i][j], adj[j][i] = struct{}{}, struct{}{}
		}
	}
	s.pat = newPattern(s.nodes, adj)
	return s, nil
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
				turn = float64(t.Group.Clock) * math.Pi / 6
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
		return v * cmplx.Rect(1, -s.shift[node])
	case phasor.Negative:
		return v * cmplx.Rect(1, s.shift[node])
	}
	return v
}
