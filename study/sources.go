package study

import (
	"math"
	"math/cmplx"

	"quietbus/study/converter"
	"quietbus/study/phasor"
)

// angleA is the angle by which phases a, b and c of a positive-sequence set
// stand: 0, -120 and +120 degrees.
var angleA = [3]float64{0, -2 * math.Pi / 3, 2 * math.Pi / 3}

// line is one order of a load's spectrum relative to its fundamental: share
// of the order 1 current and angle at the cosine reference.
type line struct {
	order int
	share complex128
}

// spectrumOf returns the relative spectrum of a non-linear load: as typed, as
// its typical kind has it, or as given by the measure that changed it.
func (p *plan) spectrumOf(l *NonlinearLoad) ([]line, error) {
	_, changed := p.spectra[l.Name]
	if lines, ok := p.lines[l]; ok && !changed {
		return lines, nil
	}
	lines, err := p.linesOf(l)
	p.vary.turn(l.Name, lines)
	if err == nil && p.lines != nil && !changed {
		p.lines[l] = lines
	}
	return lines, err
}

// linesOf works the spectrum out.
func (p *plan) linesOf(l *NonlinearLoad) ([]line, error) {
	var lines []line
	add := func(order int, percent, deg float64) {
		if order != 1 && percent != 0 {
			lines = append(lines, line{order, cmplx.Rect(percent/100, deg*math.Pi/180)})
		}
	}
	if l.Spectrum == Typed {
		for _, t := range l.Lines {
			add(t.Order, t.Percent, t.AngleDeg)
		}
		return lines, nil
	}
	model, ok := p.spectra[l.Name]
	if !ok {
		if model, ok = converter.Lookup(l.Spectrum); !ok {
			return nil, &FieldError{Item: l.Name, Field: "spectrum", Problem: "is no typical spectrum of this program: " + l.Spectrum, Remedy: "choose one from the list, or 'typed' and type its lines"}
		}
	}
	for _, t := range model.Lines {
		add(t.Order, t.Percent, t.AngleDeg)
	}
	return lines, nil
}

// conductors returns the weight of each phase voltage in the terminal voltage
// of a single-phase connection: {1,0,0} for a, {1,-1,0} for ab.
func (c Connection) conductors() [3]float64 {
	switch c {
	case PhaseA:
		return [3]float64{1, 0, 0}
	case PhaseB:
		return [3]float64{0, 1, 0}
	case PhaseC:
		return [3]float64{0, 0, 1}
	case PhaseAB:
		return [3]float64{1, -1, 0}
	case PhaseBC:
		return [3]float64{0, 1, -1}
	case PhaseCA:
		return [3]float64{-1, 0, 1}
	}
	return [3]float64{}
}

// threePhase reports whether the item stands on all three phases.
func (c Connection) threePhase() bool { return c == "" || c == ThreePhase }

// drawn returns the current that a non-linear load draws from each phase at
// all orders, given its fundamental line currents and the fundamental
// phase-to-neutral voltages of its bus (complex rms, phases a, b, c).
//
// The angle at order h is that of the spectrum plus h times the angle of the
// fundamental voltage at the load's terminals. In a three-phase load phases b
// and c follow phase a by a third of a period, so that order h is of the
// sequence h mod 3; without a neutral the zero sequence is left out.
func drawn(l *NonlinearLoad, lines []line, order int, current1, voltage1 [3]complex128) [3]phasor.Spectrum {
	var out [3]phasor.Spectrum
	for i := range out {
		out[i] = phasor.New(order)
		out[i][1] = current1[i]
	}
	if l.Connection.threePhase() {
		seqV, seqI := phasor.ToSequence(voltage1), phasor.ToSequence(current1)
		phi, size := cmplx.Phase(seqV[phasor.Positive]), cmplx.Abs(seqI[phasor.Positive])
		for _, t := range lines {
			if t.order > order || (!l.FourWire && phasor.OfOrder(t.order) == phasor.Zero) {
				continue
			}
			for i := range out {
				out[i][t.order] = rotated(t, size, phi+angleA[i])
			}
		}
		return out
	}
	weight := l.Connection.conductors()
	var v, current complex128
	for i, w := range weight {
		v += complex(w, 0) * voltage1[i]
		if w != 0 {
			current = complex(w, 0) * current1[i]
		}
	}
	phi, size := cmplx.Phase(v), cmplx.Abs(current)
	for _, t := range lines {
		if t.order > order {
			continue
		}
		drawn := rotated(t, size, phi)
		for i, w := range weight {
			out[i][t.order] = complex(w, 0) * drawn
		}
	}
	return out
}

// rotated returns the current of one spectrum line of a load whose order 1
// current has the given size and whose terminal voltage the given angle. A
// direct current has no angle: its sign is the cosine of the typed one.
func rotated(t line, size, phi float64) complex128 {
	if t.order == 0 {
		return complex(size*real(t.share), 0)
	}
	return complex(size, 0) * t.share * cmplx.Rect(1, float64(t.order)*phi)
}
