package converter

import (
	"math"
	"math/cmplx"

	"quietbus/study/converter/internal/piecewise"
	"quietbus/study/phasor"
)

// floors keep loops from having no inductance or no loss at all. They are far
// below any real part: a millionth of a controlled resistance, and X/R of ten
// million.
const (
	inductanceFloor = 1e-6
	lossFloor       = 1e-7
)

// A plant is a converter as a circuit, with what is needed to read its result.
type plant struct {
	c            *piecewise.Circuit
	source, load [][]float64 // parts of c.R, for the energy balance
	drop         []float64   // V, opposing voltage of the valves by branch
	links        []link
	rectifiers   []rectifier
	start        []float64 // full state to start from
}

// A link is one direct side.
type link struct {
	capacitor int   // index, or -1
	direct    []int // branches whose current flows into it
	param     int   // index of its free parameter, or -1
	armature  int   // branch of a motor behind the capacitor, or -1
	watts     float64
	ideal     float64 // ideal direct voltage of its rectifiers, V
	crest     float64 // crest of the no-load voltage, V
	ohm       float64 // smoothing choke's load resistance
	at        float64 // V at which a constant power was linearised
}

// A rectifier is a bridge or a single diode with its place.
type rectifier struct {
	legs           [][3]float64 // share of the phase voltages in each leg
	ref            complex128   // turn of its gates against the line
	leakX, leakR   float64
	chokeX, chokeR float64
	link           int
	unit           int
	dc             int // branch of its direct current
}

// rectifiersOf lists the rectifiers of a nameplate and the number of links.
func rectifiersOf(n Nameplate, w float64) (list []rectifier, links int) {
	choke := func(r rectifier) rectifier {
		r.chokeX, r.chokeR = w*n.ChokeH, n.ChokeOhm
		return r
	}
	switch {
	case n.Kind.sections() > 0:
		for i, s := range n.Sections {
			r := rectifier{
				legs: shifted(s.ShiftDeg, s.Ratio), ref: cmplx.Rect(1, s.ShiftDeg*math.Pi/180),
				leakX: w * s.LeakageH, leakR: s.LeakageOhm, chokeX: w * s.ChokeH, chokeR: s.ChokeOhm,
			}
			if n.SeparateLink {
				r.link = i
				r.chokeX, r.chokeR = r.chokeX+w*n.ChokeH, r.chokeR+n.ChokeOhm
			}
			list = append(list, r)
		}
		if n.SeparateLink {
			return list, len(list)
		}
		return list, 1
	case n.Kind.threePhase():
		return []rectifier{choke(rectifier{legs: shifted(0, 1), ref: 1})}, 1
	case n.Connection == ABCN:
		for q, c := range []Connection{PhaseA, PhaseB, PhaseC} {
			list = append(list, choke(rectifier{legs: c.legs(), ref: 1, link: q}))
		}
		return list, 3
	}
	return []rectifier{choke(rectifier{legs: n.Connection.legs(), ref: 1})}, 1
}

// shifted returns the legs of a winding that turns the phase voltages by deg
// and passes no zero sequence: (2/3) ratio cos(deg + angle of leg - angle of phase).
func shifted(deg, ratio float64) [][3]float64 {
	out := make([][3]float64, 3)
	for x := range out {
		for q := range out[x] {
			out[x][q] = 2.0 / 3 * ratio * math.Cos(deg*math.Pi/180-2*math.Pi/3*float64(x-q))
		}
	}
	return out
}

// legs returns the two conductors of a single-phase connection; the neutral
// is a leg without voltage.
func (c Connection) legs() [][3]float64 {
	unit := [][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}
	switch c {
	case PhaseA:
		return [][3]float64{unit[0], {}}
	case PhaseB:
		return [][3]float64{unit[1], {}}
	case PhaseC:
		return [][3]float64{unit[2], {}}
	case PhaseAB:
		return [][3]float64{unit[0], unit[1]}
	case PhaseBC:
		return [][3]float64{unit[1], unit[2]}
	case PhaseCA:
		return [][3]float64{unit[2], unit[0]}
	}
	return nil
}

// across returns the voltage across a single-phase connection.
func across(legs [][3]float64) (k [3]float64) {
	for q := range k {
		k[q] = legs[0][q]
		if len(legs) > 1 {
			k[q] -= legs[1][q]
		}
	}
	return k
}

// positive is the weight of each phase in the positive sequence.
var positive = [3]complex128{1.0 / 3, cmplx.Rect(1.0/3, 2*math.Pi/3), cmplx.Rect(1.0/3, -2*math.Pi/3)}

// crest returns the highest voltage that a rectifier's legs offer over the
// period: between two legs, or across the single diode.
func crest(legs [][3]float64, half bool, v [3]phasor.Spectrum) float64 {
	const points = 96
	var waves [3][]float64
	for q := range v {
		waves[q] = phasor.Synthesize(v[q], points, nil)
	}
	var best float64
	for k := 0; k < points; k++ {
		low, high := math.Inf(1), math.Inf(-1)
		for _, leg := range legs {
			var u float64
			for q := range leg {
				u += leg[q] * waves[q][k]
			}
			low, high = math.Min(low, u), math.Max(high, u)
		}
		if half {
			var u float64
			for q, g := range across(legs) {
				u += g * waves[q][k]
			}
			low, high = 0, u
		}
		best = math.Max(best, high-low)
	}
	return best
}
