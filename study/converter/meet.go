package converter

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"quietbus/study/phasor"
)

// Sequences returns Direct and Mirror of current order k by voltage order h in
// symmetrical components, row by current; index by phasor.Sequence.
func (n *Norton) Sequences(k, h int) (direct, mirror [3][3]complex128) {
	if n.linear == nil {
		if k == h {
			return n.front.sequences(h)
		}
		return direct, mirror
	}
	return n.linear.Sequences(k, h)
}

// Meet returns the terminal voltage at which the linearised converter and the
// network behind its bus agree, V = E - Z I(V), orders 1..n.Order: one Newton
// step of the coupled problem. open is E, the voltage of the bus without this
// converter; z gives the driving-point impedance by order and sequence, ohm.
// Components that are zero on both sides stay zero. Where several converters
// share a network, take them in turn, each seeing the present currents of the
// others in open.
func (n *Norton) Meet(open [3]phasor.Spectrum, z func(order int, s phasor.Sequence) complex128) ([3]phasor.Spectrum, error) {
	m := newMeeting(n, open, z)
	for i := range m.at {
		if m.group[i] < 0 {
			m.spread(i, i)
			if err := m.solve(i); err != nil {
				return [3]phasor.Spectrum{}, err
			}
		}
	}
	var seq [3]phasor.Spectrum
	for s := range seq {
		seq[s] = phasor.New(n.Order)
		for h := 1; h <= n.Order; h++ {
			i := m.index(h, s)
			seq[s][h] = m.at[i] + m.step[i]
		}
	}
	return phasor.PhasesOf(seq), nil
}

// A meeting is the linear problem by order and sequence.
type meeting struct {
	n     *Norton
	z     []complex128
	at    []complex128 // present voltage
	miss  []complex128 // V - E + Z I
	step  []complex128
	group []int
	// couplings of the current at an unknown: by unknown
	direct, mirror [][]complex128
}

func (m *meeting) index(h, s int) int { return 3*(h-1) + s }

func newMeeting(n *Norton, open [3]phasor.Spectrum, z func(int, phasor.Sequence) complex128) *meeting {
	size := 3 * n.Order
	m := &meeting{
		n: n, z: make([]complex128, size), at: make([]complex128, size), miss: make([]complex128, size), step: make([]complex128, size),
		group: make([]int, size), direct: make([][]complex128, size), mirror: make([][]complex128, size),
	}
	for h := 1; h <= n.Order; h++ {
		pick := func(v [3]phasor.Spectrum) [3]complex128 {
			return phasor.ToSequence([3]complex128{v[0].At(h), v[1].At(h), v[2].At(h)})
		}
		v, e, i := pick(n.Voltage), pick(open), pick(n.Current)
		for s := 0; s < 3; s++ {
			k := m.index(h, s)
			m.z[k] = z(h, phasor.Sequence(s))
			m.at[k], m.miss[k], m.group[k] = v[s], v[s]-e[s]+m.z[k]*i[s], -1
			m.direct[k], m.mirror[k] = make([]complex128, size), make([]complex128, size)
		}
	}
	for k := 1; k <= n.Order; k++ {
		for h := 1; h <= n.Order; h++ {
			direct, mirror := n.Sequences(k, h)
			for s := 0; s < 3; s++ {
				for t := 0; t < 3; t++ {
					m.direct[m.index(k, s)][m.index(h, t)] = direct[s][t]
					m.mirror[m.index(k, s)][m.index(h, t)] = mirror[s][t]
				}
			}
		}
	}
	return m
}

// spread puts every unknown that is coupled with i into group g.
func (m *meeting) spread(i, g int) {
	todo := []int{i}
	m.group[i] = g
	for len(todo) > 0 {
		k := todo[len(todo)-1]
		todo = todo[:len(todo)-1]
		for j := range m.at {
			if m.group[j] < 0 && (m.direct[k][j] != 0 || m.mirror[k][j] != 0 || m.direct[j][k] != 0 || m.mirror[j][k] != 0) {
				m.group[j] = g
				todo = append(todo, j)
			}
		}
	}
}

// solve solves one group.
func (m *meeting) solve(g int) error {
	var list []int
	var size float64
	for i, at := range m.group {
		if at == g {
			list = append(list, i)
			size = math.Max(size, absolute(m.miss[i]))
		}
	}
	if size == 0 {
		return nil
	}
	c := len(list)
	a, b := mat.NewDense(2*c, 2*c, nil), mat.NewVecDense(2*c, nil)
	for r, i := range list {
		b.SetVec(2*r, -real(m.miss[i]))
		b.SetVec(2*r+1, -imag(m.miss[i]))
		for q, j := range list {
			d, w := m.z[i]*m.direct[i][j], m.z[i]*m.mirror[i][j]
			if i == j {
				d++
			}
			a.Set(2*r, 2*q, real(d)+real(w))
			a.Set(2*r, 2*q+1, imag(w)-imag(d))
			a.Set(2*r+1, 2*q, imag(d)+imag(w))
			a.Set(2*r+1, 2*q+1, real(d)-real(w))
		}
	}
	var x mat.VecDense
	if err := x.SolveVec(a, b); err != nil {
		if c, near := err.(mat.Condition); !near || math.IsInf(float64(c), 0) {
			return condition(NotSettled, "", "check for a resonance at a harmonic order", "converter and network have no common voltage to first order")
		}
	}
	for r, i := range list {
		m.step[i] = complex(x.AtVec(2*r), x.AtVec(2*r+1))
	}
	return nil
}
