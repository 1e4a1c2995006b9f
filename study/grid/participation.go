package grid

import (
	"math"
	"math/cmplx"
)

// Participation says which element takes part in a resonance, and how much.
type Participation struct {
	Element ElementID
	// Share of the reactive power that swings at the resonance: positive for an
	// inductive element, negative for a capacitive one. The inductive shares
	// add to about one, the capacitive ones to about minus one.
	Share float64
}

// Participants returns the elements that exchange reactive power when the bus
// is excited at order h, largest first: at a resonance, whose response is the
// network's mode itself, these are the elements that make it. Elements of less
// than a tenth are left out.
func (sc *Scanner) Participants(h float64) ([]Participation, error) {
	if _, err := sc.At(h); err != nil {
		return nil, err
	}
	return sc.s.participants(sc.prim, sc.v), nil
}

// participants returns the elements of more than a tenth of the reactive power
// that swings at node voltages v, by the elements' admittances.
func (s *System) participants(prim []primitive, v []complex128) []Participation {
	reactive := make([]float64, len(s.net.elements))
	var inductive, capacitive float64
	for i, y := range prim {
		p := &s.place[i]
		if !p.live {
			continue
		}
		v0 := v[p.n0]
		power := v0 * cmplx.Conj(y.y00*v0)
		if p.low >= 0 {
			v1 := v[p.n1]
			power = v0*cmplx.Conj(y.y00*v0+y.y01*v1) + v1*cmplx.Conj(y.y01*v0+y.y11*v1)
		}
		reactive[i] = imag(power)
		inductive += math.Max(reactive[i], 0)
		capacitive -= math.Min(reactive[i], 0)
	}
	var out []Participation
	for i, q := range reactive {
		total := inductive
		if q < 0 {
			total = capacitive
		}
		if total > 0 && math.Abs(q) > 0.1*total {
			out = append(out, Participation{ElementID(i), q / total})
		}
	}
	// few elements: insertion keeps the order of equal ones
	for i := 1; i < len(out); i++ {
		for j := i; j > 0 && math.Abs(out[j].Share) > math.Abs(out[j-1].Share); j-- {
			out[j], out[j-1] = out[j-1], out[j]
		}
	}
	return out
}
