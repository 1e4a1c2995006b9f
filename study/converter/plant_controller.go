package converter

import (
	"math"

	"quietbus/study/converter/internal/piecewise"
)

// buildController makes the circuit of a thyristor-controlled reactor or of a
// phase-controlled resistor.
func buildController(n Nameplate, t Terminal) *plant {
	w := t.omega()
	var branches [][3]float64
	size := n.volts() * n.volts() / n.PowerW // ohm of one branch
	switch n.Connection {
	case ABC:
		branches = [][3]float64{{1, -1, 0}, {0, 1, -1}, {-1, 0, 1}}
		size *= 3
	case ABCN, ABCStar:
		branches = [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
		size = n.VoltageV * n.VoltageV / n.PowerW
	default:
		branches = [][3]float64{across(n.Connection.legs())}
	}
	nb := len(branches)
	c := piecewise.NewCircuit(nb, 0, 0)
	p := &plant{c: c, source: matrix(nb), load: matrix(nb), drop: make([]float64, nb), start: make([]float64, nb+1)}
	p.start[nb] = 1
	copy(c.K, branches)
	c.Feed(t.SourceR, w*t.SourceL, t.NeutralR, w*t.NeutralL)
	copyMatrix(p.source, c.R)
	c.Feed(n.ReactorOhm, w*n.ReactorH, 0, 0)
	alpha := n.FiringDeg * math.Pi / 180
	for b, k := range branches {
		if n.Kind == KindControlledReactor {
			c.X[b][b] += size
			c.R[b][b] += math.Max(n.LoadOhm, lossFloor*size)
		} else {
			c.R[b][b] += size
			c.X[b][b] += inductanceFloor * size
			p.load[b][b] = size
		}
		for half := 0; half < 2; half++ {
			g := piecewise.Gate{At: alpha - math.Pi/2 + math.Pi*float64(half)}
			for q := range k {
				g.Ref[q] = complex(k[q], 0)
				if n.Connection == ABCStar {
					g.Ref[q] -= 1.0 / 3 // against the star point
				}
			}
			// up to the next zero of the voltage; a star without neutral fires
			// in pairs 60 degrees apart
			g.Width = math.Max(math.Pi-alpha, math.Pi/36)
			if n.Connection == ABCStar {
				g.Width = math.Max(g.Width, 75*math.Pi/180)
			}
			c.Gates = append(c.Gates, g)
		}
		c.Volt = math.Max(c.Volt, crest([][3]float64{k}, true, t.Voltage))
	}
	c.Amp = c.Volt / size
	if n.Connection == ABCStar {
		s := piecewise.Star{Branch: [3]int{0, 1, 2}}
		for x := range s.Branch {
			s.Plus[x], s.Minus[x] = 2*x, 2*x+1
		}
		c.Units = []piecewise.Unit{s}
	} else {
		for b := range branches {
			c.Units = append(c.Units, piecewise.Valve{Branch: b, Plus: 2 * b, Minus: 2*b + 1})
		}
	}
	p.symmetries(nb == 3)
	return p
}
