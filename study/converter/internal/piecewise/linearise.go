package piecewise

import (
	"context"
	"math"
)

// A Linearisation says how the line currents of an orbit follow small changes
// of the phase voltages, all as rms phasors:
//
//	dI_k = sum over h of Direct(k, h) dV_h + Mirror(k, h) conj(dV_h)
//
// Each entry is a 3 x 3 matrix over the phases (line by voltage). Orders 1 to
// Order of both; the free parameters follow as their controls demand and the
// gates as the fundamentals turn.
type Linearisation struct {
	Order    int
	up, down []complex128 // (k, h, sequence of current, sequence of voltage)
}

// sequence holds the phases of the zero, positive and negative sequence.
var sequence = func() (a [3][3]complex128) {
	for s := range a {
		for q := range a[s] {
			a[s][q] = turn(-2 * math.Pi / 3 * float64(s*q))
		}
	}
	return a
}()

func (l *Linearisation) index(k, h int) int { return ((k-1)*l.Order + h - 1) * 9 }

// At returns Direct and Mirror of current order k and voltage order h.
func (l *Linearisation) At(k, h int) (direct, mirror [3][3]complex128) {
	i := l.index(k, h)
	up, down := fromSequence(l.up[i:i+9]), fromSequence(l.down[i:i+9])
	for p := range down {
		for q := range down[p] {
			down[p][q] = conj(down[p][q])
		}
	}
	return up, down
}

// Sequences returns Direct and Mirror of current order k and voltage order h in
// symmetrical components (zero, positive, negative), row by current.
func (l *Linearisation) Sequences(k, h int) (direct, mirror [3][3]complex128) {
	i := l.index(k, h)
	for s := 0; s < 3; s++ {
		for t := 0; t < 3; t++ {
			direct[s][t] = l.up[i+s*3+t]
			// the conjugate of a set turns the other way round
			mirror[(3-s)%3][t] = conj(l.down[i+s*3+t])
		}
	}
	return direct, mirror
}

// fromSequence turns a 3 x 3 matrix of sequences into one of phases.
func fromSequence(m []complex128) (out [3][3]complex128) {
	for s := 0; s < 3; s++ {
		for t := 0; t < 3; t++ {
			v := m[s*3+t] / 3
			if v == 0 {
				continue
			}
			for p := range out {
				for q := range out[p] {
					out[p][q] += sequence[s][p] * v * conj(sequence[t][q])
				}
			}
		}
	}
	return out
}

// Linearise returns the linearisation of the orbit for orders 1..order.
//
// A complex voltage e^jht of one sequence drives the periodically time-varying
// system of the variations: in a segment dx = X_h e^jht plus a transient, over
// a change it passes the saltation matrix. Its periodic solution has current
// orders of both signs; those below zero are the conjugate couplings. Under a
// symmetry only one part is gone through: the variation repeats there up to a
// factor, which leaves only the orders that agree with it.
func (o *Orbit) Linearise(ctx context.Context, order int) (*Linearisation, error) {
	o.solver.mu.Lock()
	defer o.solver.mu.Unlock()
	v := newVariation(o, order)
	l := &Linearisation{Order: order, up: make([]complex128, order*order*9), down: make([]complex128, order*order*9)}
	for h := 1; h <= order; h++ {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		for s := 0; s < 3; s++ {
			if s == 0 && !v.zero {
				continue
			}
			if !v.drive(h, s) {
				return nil, ErrNotPeriodic
			}
			v.read(l, h, s)
		}
	}
	return l, nil
}
