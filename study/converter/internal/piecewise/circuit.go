package piecewise

import "math"

// A Circuit is the constant part of the problem: nb branch currents, nv
// capacitors, np free parameters. See the package comment for the equations;
// nc = 1 + np is the number of constants.
type Circuit struct {
	X     [][]float64  // nb x nb reactance, ohm, symmetric
	R     [][]float64  // nb x nb resistance, ohm, symmetric
	K     [][3]float64 // nb: share of each phase voltage in the branch, and of the branch current in each line
	S     [][]float64  // nb x nv: capacitor voltages that oppose the branch
	EMF   [][]float64  // nb x nc: constant driving voltages, V
	Y     []float64    // nv: susceptance, S
	G     []float64    // nv: conductance across the capacitor, S
	Draw  [][]float64  // nv x nc: constant currents into the capacitor, A
	Rest  []float64    // nv: V, to which a capacitor that nothing charges is brought down during the search
	Units []Unit
	Gates []Gate // gate signals; a trigger's need mask refers to their bits

	Symmetries []Symmetry // that the circuit has by itself

	Controls []Control // one for each free parameter, in their order

	Rates bool // orbits keep the derivatives of the branch currents too

	Volt, Amp float64 // scale of voltages and currents, for tolerances
}

// A Control settles one free parameter p by an average over the period of s,
// the sum of the full state's entries in States (branch currents first, then
// capacitor voltages):
//
//	Power:  p mean(s) - Slope mean(s^2) = Target
//	else:   mean(s) = Target
type Control struct {
	States []int
	Power  bool
	Slope  float64
	Target float64
	Scale  float64 // size of p, for tolerances
}

// A Gate lets the valves that need its bit turn on during a window of each
// period: from At after the crest of the fundamental of Ref.u, for Width.
type Gate struct {
	Ref   [3]complex128
	At    float64 // rad
	Width float64 // rad, less than 2 pi
}

// nb, nv, nc are the sizes of the circuit.
func (c *Circuit) nb() int { return len(c.X) }
func (c *Circuit) nv() int { return len(c.Y) }
func (c *Circuit) nc() int { return 1 + len(c.Controls) }

// states is the length of the full state s: branch currents, capacitor
// voltages, constants.
func (c *Circuit) states() int { return c.nb() + c.nv() + c.nc() }

// NewCircuit returns a circuit of nb branches, nv capacitors and np free
// parameters with every coefficient zero.
func NewCircuit(nb, nv, np int) *Circuit {
	c := &Circuit{
		X: square(nb), R: square(nb), K: make([][3]float64, nb), S: rows(nb, nv), EMF: rows(nb, 1+np),
		Y: make([]float64, nv), G: make([]float64, nv), Draw: rows(nv, 1+np), Rest: make([]float64, nv), Controls: make([]Control, np),
		Volt: 1, Amp: 1,
	}
	return c
}

// Feed adds the series impedance of the lines and of the neutral, seen by
// every branch through K.
func (c *Circuit) Feed(r, x, neutralR, neutralX float64) {
	for i, ki := range c.K {
		for j, kj := range c.K {
			lines := ki[0]*kj[0] + ki[1]*kj[1] + ki[2]*kj[2]
			neutral := (ki[0] + ki[1] + ki[2]) * (kj[0] + kj[1] + kj[2])
			if math.Abs(neutral) < 1e-12 {
				neutral = 0
			}
			c.R[i][j] += r*lines + neutralR*neutral
			c.X[i][j] += x*lines + neutralX*neutral
		}
	}
}

func square(n int) [][]float64 { return rows(n, n) }

func rows(n, m int) [][]float64 {
	all := make([]float64, n*m)
	out := make([][]float64, n)
	for i := range out {
		out[i] = all[i*m : (i+1)*m : (i+1)*m]
	}
	return out
}
