package grid

import "quietbus/study/phasor"

// Deviate sets the system frequency off its nominal value: 1.01 is one per
// cent above. Transformers, cables, machines and loads then have the
// admittance of that many times the order; a Supply has a Ratio of its own, and
// shunt branches come drifted already. What loads draw at order 1 stays.
func (n *Network) Deviate(ratio float64) { n.ratio = ratio }

// at returns the admittance of an element at order h of the deviating system
// frequency.
func (n *Network) at(e Element, h float64, q phasor.Sequence) primitive {
	if n.ratio != 0 {
		switch e.(type) {
		case *Supply, *Shunt, *PhaseShunt:
		case Drawing:
			if h != 1 {
				h *= n.ratio
			}
		default:
			h *= n.ratio
		}
	}
	return e.admit(n.f1, h, q)
}
