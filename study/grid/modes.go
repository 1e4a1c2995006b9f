package grid

import (
	"context"
	"math"
	"math/cmplx"
	"sort"

	"quietbus/study/phasor"
)

// Mode is a resonance of the network in one sequence: an order at which an
// eigenvalue of the nodal admittance matrix, in per unit of the nominal
// voltages, has its smallest magnitude. Its eigenvector, found by inverse
// iteration on that matrix, says which buses swing and so which elements exchange the energy
// (modal analysis of harmonic resonance; Xu, Huang, Cui and Wang, Harmonic
// resonance mode analysis, IEEE Trans. Power Delivery 20-2, 2005).
type Mode struct {
	Order    float64
	Q        float64 // order over its 3 dB width, from the turn of the eigenvalue's angle
	Buses    []BusShare
	Elements []Participation
	Ohm      float64 // driving-point impedance at the first of Buses
	shape    []complex128
}

// BusShare is the participation of a bus in a mode: the square of its entry in
// the eigenvector, whose squares add to one; the share of the mode in what the
// bus shows when looked into. Buses below a twentieth are left out.
type BusShare struct {
	Bus   BusID
	Share float64
}

// Alike says how much two modes of networks with the same buses have the same
// shape, from 0 to 1.
func (m *Mode) Alike(o *Mode) float64 {
	if len(m.shape) != len(o.shape) {
		return 0
	}
	var dot complex128
	var a, b float64
	for k, x := range m.shape {
		y := o.shape[k]
		dot += cmplx.Conj(x) * y
		a += real(x)*real(x) + imag(x)*imag(x)
		b += real(y)*real(y) + imag(y)*imag(y)
	}
	if a == 0 || b == 0 {
		return 0
	}
	return cmplx.Abs(dot) / math.Sqrt(a*b)
}

// Modes returns the resonances of one sequence between two orders, rising. A
// survey of all buses finds their neighbourhood; inverse iteration at each
// finds the mode itself.
//
// Errors: those of the survey; cancellation.
func (s *System) Modes(ctx context.Context, q phasor.Sequence, from, to float64) ([]Mode, error) {
	survey := s.NewSurvey(q)
	curve, err := survey.Adaptive(ctx, from, to)
	if err != nil {
		return nil, err
	}
	type peak struct {
		order, size float64 // size in per unit of the bus
		node        int
	}
	var peaks []peak
	seen := make([]bool, s.nodes)
	for b, k := range s.node {
		if seen[k] || s.pinned(k, q) {
			continue
		}
		seen[k] = true
		for _, i := range curve.peaks(b) {
			peaks = append(peaks, peak{curve.Orders[i], cmplx.Abs(curve.Z[i][b]) / s.scale[k] / s.scale[k], k})
		}
	}
	sort.SliceStable(peaks, func(i, j int) bool { return peaks[i].size > peaks[j].size })
	it := s.newIteration(q)
	var out []Mode
	for _, p := range peaks {
		known := false
		for i := range out {
			m := &out[i]
			// a peak that a mode found already explains: near its order, and the
			// bus takes part in it
			near := math.Abs(m.Order-p.order) < 0.03*p.order
			known = known || near && cmplx.Abs(m.shape[p.node]*m.shape[p.node]) > 1e-3
		}
		if known {
			continue
		}
		m, err := it.mode(ctx, p.order, p.node)
		if err != nil {
			return nil, err
		}
		if m == nil || m.Order < from || m.Order > to {
			continue
		}
		double := false
		for i := range out {
			double = double || math.Abs(out[i].Order-m.Order) < 1e-4*m.Order && out[i].Alike(m) > 0.9
		}
		if !double {
			out = append(out, *m)
		}
	}
	sort.SliceStable(out, func(i, j int) bool { return out[i].Order < out[j].Order })
	return out, nil
}

// ModeAt returns the mode that shows at a bus at order h, which need not be
// its own peak; nil when there is none that stands out.
func (s *System) ModeAt(bus BusID, q phasor.Sequence, h float64) *Mode {
	it := s.newIteration(q)
	if s.pinned(s.node[bus], q) || !it.start(h, s.node[bus]) {
		return nil
	}
	if _, ok := it.at(h); !ok {
		return nil
	}
	return it.describe(h)
}

// iteration follows one eigenvalue of one sequence's matrix from order to
// order, keeping its memory.
type iteration struct {
	s       *System
	q       phasor.Sequence
	f       *factors
	prim    []primitive
	x, y    []complex128 // in elimination order, per unit
	v, work []complex128 // by node
}

func (s *System) newIteration(q phasor.Sequence) *iteration {
	n := s.nodes
	block := make([]complex128, 4*n)
	return &iteration{s: s, q: q, f: s.pat.newFactors(), prim: make([]primitive, len(s.net.elements)),
		x: block[:n], y: block[n : 2*n], v: block[2*n : 3*n], work: block[3*n:]}
}

// start sets the vector to what the network answers at order h to a current
// into one node: at a resonance that shows there, the resonance itself.
func (it *iteration) start(h float64, node int) bool {
	s := it.s
	s.admit(it.prim, h, it.q)
	if !s.factor(it.f, it.prim, it.q) {
		return false
	}
	clear(it.x)
	it.x[s.pat.rank[node]] = 1
	s.pat.solve(it.f, it.x)
	return it.normalise()
}

// normalise keeps nodes that take no part out of the vector and scales it so
// that its squares add to one.
func (it *iteration) normalise() bool {
	var square complex128
	var size float64
	for k := range it.s.nodes {
		i := it.s.pat.rank[k]
		if it.s.pinned(k, it.q) {
			it.x[i] = 0
		}
		square += it.x[i] * it.x[i]
		size += real(it.x[i])*real(it.x[i]) + imag(it.x[i])*imag(it.x[i])
	}
	if !(cmplxAbs1(square) > 1e-9*size) { // no mode has a vector at right angles to itself
		return false
	}
	scale := 1 / cmplx.Sqrt(square)
	for i := range it.x {
		it.x[i] *= scale
	}
	return true
}

// times fills it.y with the matrix times it.x, and returns x^T Y x.
func (it *iteration) times() (quotient complex128) {
	s := it.s
	clear(it.y)
	for i := range it.prim {
		p, y := &s.place[i], &it.prim[i]
		if !p.live {
			continue
		}
		v0 := it.x[p.d0]
		it.y[p.d0] += y.y00 * complex(p.s00, 0) * v0
		if p.low >= 0 {
			v1, across := it.x[p.d1], y.y01*complex(p.s01, 0)
			it.y[p.d0] += across * v1
			it.y[p.d1] += across*v0 + y.y11*complex(p.s11, 0)*v1
		}
	}
	for i, x := range it.x {
		quotient += x * it.y[i]
	}
	return quotient
}

// at returns the eigenvalue of the mode whose vector is in x, at order h, and
// leaves its eigenvector there: inverse iteration with the Rayleigh quotient as
// shift, which stays with the mode that it starts from. It reports false when
// it does not settle.
func (it *iteration) at(h float64) (complex128, bool) {
	s := it.s
	s.admit(it.prim, h, it.q)
	value := it.times()
	near := false
	for range 30 {
		off, size := 0.0, 0.0
		for i, x := range it.x {
			off, size = off+cmplxAbs1(it.y[i]-value*x), size+cmplxAbs1(it.y[i])+cmplxAbs1(value*x)
		}
		if off < 1e-11*size {
			return value, true
		}
		near = off < 1e-6*size // rounding, where a stiff part dwarfs the eigenvalue
		if !it.shift(value) {
			return value, near
		}
		s.pat.solve(it.f, it.x)
		if !it.normalise() {
			return 0, false
		}
		value = it.times()
	}
	return value, near
}

// shift factors the matrix less a value on its diagonal, or near that value
// when just there it is singular: the better the value, the likelier.
func (it *iteration) shift(value complex128) bool {
	for _, off := range []complex128{0, 1e-8, 1e-6, 1e-4, 1e-2} {
		if it.s.shifted(it.f, it.prim, it.q, value*(1+off)) {
			return true
		}
	}
	return false
}

// mode refines a resonance near order h that shows at a node; nil when there is
// none.
func (it *iteration) mode(ctx context.Context, h float64, node int) (*Mode, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	if !it.start(h, node) {
		return nil, nil
	}
	if _, ok := it.at(h); !ok {
		return nil, nil
	}
	size := func(h float64) float64 {
		v, ok := it.at(h)
		if !ok || v == 0 {
			return math.NaN()
		}
		return 1 / cmplx.Abs(v)
	}
	lo, hi, ok := bracket(size, h)
	if !ok {
		return nil, nil
	}
	const golden = 0.6180339887498949
	a, b := hi-golden*(hi-lo), lo+golden*(hi-lo)
	fa, fb := size(a), size(b)
	for hi-lo > 1e-7*h {
		if fa > fb {
			hi, b, fb = b, a, fa
			a = hi - golden*(hi-lo)
			fa = size(a)
		} else {
			lo, a, fa = a, b, fb
			b = lo + golden*(hi-lo)
			fb = size(b)
		}
	}
	return it.describe((lo + hi) / 2), nil
}

// bracket finds orders around h between which f has a maximum, within a tenth
// of h.
func bracket(f func(float64) float64, h float64) (lo, hi float64, ok bool) {
	step := h * 1e-3
	mid, at := h, f(h)
	for range 100 {
		below, above := f(mid-step), f(mid+step)
		switch {
		case at >= below && at >= above:
			return mid - step, mid + step, true
		case above > below:
			mid, at = mid+step, above
		case below > at:
			mid, at = mid-step, below
		default: // NaN: the mode is lost
			return 0, 0, false
		}
		if math.Abs(mid-h) > 0.1*h || mid-step <= 0 {
			return 0, 0, false
		}
	}
	return 0, 0, false
}

// describe says what the mode at order h is made of.
func (it *iteration) describe(h float64) *Mode {
	s := it.s
	d := h * 1e-6
	above, ok1 := it.at(h + d)
	below, ok2 := it.at(h - d)
	if _, ok := it.at(h); !ok || !ok1 || !ok2 {
		return nil
	}
	m := &Mode{Order: h, Q: h / 2 * math.Abs(cmplx.Phase(above/below)/(2*d)), shape: make([]complex128, s.nodes)}
	var total float64
	for k := range m.shape {
		m.shape[k] = it.x[s.pat.rank[k]]
		total += cmplx.Abs(m.shape[k] * m.shape[k])
	}
	main := 0
	named := make([]bool, s.nodes)
	for b, k := range s.node {
		share := cmplx.Abs(m.shape[k]*m.shape[k]) / total
		if !named[k] && share >= 0.05 {
			named[k] = true
			m.Buses = append(m.Buses, BusShare{BusID(b), share})
		}
		if cmplx.Abs(m.shape[k]) > cmplx.Abs(m.shape[main]) {
			main = k
		}
	}
	sort.SliceStable(m.Buses, func(i, j int) bool { return m.Buses[i].Share > m.Buses[j].Share })
	for k := range it.v { // in volts: per unit times the nominal voltage
		it.v[k] = m.shape[k] * complex(s.scale[k], 0)
	}
	m.Elements = s.participants(it.prim, it.v)
	if s.factor(it.f, it.prim, it.q) {
		clear(it.work)
		it.work[main] = 1
		s.back(it.f, it.work, it.y, it.v)
		m.Ohm = cmplx.Abs(it.v[main])
	}
	return m
}
