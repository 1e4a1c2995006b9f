package grid

import (
	"fmt"

	"quietbus/study/phasor"
)

// ReplaceLoad lets another load draw its order 1 current in the place of one of
// the network's, on the same bus; nil puts the network's own back. Only what it
// draws counts, not its admittance at other orders.
func (v *Variant) ReplaceLoad(id ElementID, with Drawing) {
	if with == nil {
		delete(v.loads, id)
		return
	}
	if v.loads == nil {
		v.loads = map[ElementID]Drawing{}
	}
	v.loads[id] = with
}

// Impedance returns the driving-point impedance at a port in one sequence and
// order, ohm, as System.Scan does for the whole network: EMFs shorted, loads
// that draw a current of their own and single-phase shunts open. Set comes
// first. Buses are best asked for order by order.
//
// Errors: *RefactorError; a bus that is no port.
func (v *Variant) Impedance(b BusID, q phasor.Sequence, h int) (complex128, error) {
	k := v.r.sys.node[b]
	port, p := v.r.port[k], len(v.r.nodes)
	if port < 0 {
		return 0, fmt.Errorf("%s is no port of the reduced network", v.r.sys.busName(k))
	}
	z := v.r.z[q][h]
	own := z[port*p+port]
	if len(v.at) == 0 || q == phasor.Zero && !v.zero {
		return own, nil
	}
	if key := [2]int{int(q), h}; v.looked != key {
		v.admittances(h)
		if !v.small(int(q), int(q)+1, z) {
			return 0, &RefactorError{h}
		}
		v.looked = key
	}
	v.x = v.x[:0]
	for _, at := range v.at {
		v.x = append(v.x, z[at*p+port])
	}
	solveSmall(v.m, v.pivot, v.x)
	for j, at := range v.at {
		own -= z[port*p+at] * v.y[q][j] * v.x[j]
	}
	return own, nil
}
