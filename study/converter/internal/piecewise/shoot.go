package piecewise

import (
	"context"
	"math"
)

// A start is the state at the start of a pass.
type start struct {
	sample int
	key    uint64
	x      []float64
}

// limits of the shooting iteration.
const (
	maxPasses = 150
	shotTol   = 1e-8 // size of the Newton correction, relative to the scales
)

// shoot corrects the start until the pass closes. On success the last pass is
// the periodic one; the returned value is the correction left. quiet says that
// the start is a former periodic state, far from every change.
func (e *engine) shoot(ctx context.Context, at *start, quiet bool) (float64, error) {
	np := len(e.c.Controls)
	last, lambda := math.Inf(1), 1.0
	var lastX, lastStep []float64
	var lastKey uint64
	fresh := !quiet // the start has not been moved to a quiet place yet
	stuck := 0
	for n := 0; n < maxPasses; n++ {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		m := e.mode(at.key)
		if m == nil {
			return 0, ErrInconsistent
		}
		if err := e.pass(at.sample, m, at.x); err != nil {
			// a step too far may have led nowhere: take half of it
			if lastStep != nil && at.key == lastKey && lambda > 1.0/64 {
				lambda /= 2
				at.x = stepped(lastX, lastStep, lambda)
				continue
			}
			return 0, err
		}
		first := &e.segs[0]
		home, end, _ := e.home()
		if home == nil {
			return 0, ErrInconsistent
		}
		if first.m != home || fresh {
			fresh = false
			lastStep, last = nil, math.Inf(1)
			e.relocate(at)
			continue
		}
		m = first.m
		if starved := e.starved(); starved != nil {
			e.relocate(at)
			e.feed(at, starved)
			lastStep, last = nil, math.Inf(1)
			continue
		}
		e.buildLinks()
		means := e.controlled()
		flow, dMeans := e.derivative()
		size := m.n + np
		J, r := sized(e.newtonJ, size*size), sized(e.newtonR, size)
		e.newtonJ, e.newtonR = J, r
		for i := 0; i < m.n; i++ {
			for j := 0; j < m.n; j++ {
				J[i*size+j] = -flow[i*m.d+j]
			}
			J[i*size+i]++
			for j := 0; j < np; j++ {
				J[i*size+m.n+j] = -flow[i*m.d+m.n+1+j]
			}
			r[i] = end[i] - first.xa[i]
		}
		for c, ctl := range e.c.Controls {
			p, w := first.xa[m.n+1+c], means[c]
			row := J[(m.n+c)*size : (m.n+c+1)*size]
			gain := 1.0
			if ctl.Power {
				gain = p - 2*ctl.Slope*w
				row[m.n+c] += w
				r[m.n+c] = ctl.Target - p*w + ctl.Slope*(w*w+e.variance(c, w))
			} else {
				r[m.n+c] = ctl.Target - w
			}
			for j := 0; j < m.n; j++ {
				row[j] += gain * dMeans[c*m.d+j] / e.span()
			}
			for j := 0; j < np; j++ {
				row[m.n+j] += gain * dMeans[c*m.d+m.n+1+j] / e.span()
			}
		}
		if !solve(J, size, r, 1) {
			// no answer of the end to the start: let the circuit run
			stuck++
			if stuck > 40 {
				return 0, ErrNotPeriodic
			}
			e.relocate(at)
			lastStep, last = nil, math.Inf(1)
			continue
		}
		norm, reach := e.sizeOf(m, r, first.xa)
		if math.IsNaN(norm) {
			return 0, ErrDiverged
		}
		if norm < shotTol {
			return norm, nil
		}
		if lastStep != nil && first.m.key == lastKey && norm > 1.5*last && lambda > 1.0/16 {
			lambda /= 2
			at.x = stepped(lastX, lastStep, lambda)
			continue
		}
		if n > 60 && n%20 < 6 {
			// Newton circles: let the circuit run for a few periods
			e.relocate(at)
			lastStep, last = nil, math.Inf(1)
			continue
		}
		last, lambda = norm, math.Min(1, 1/reach)
		at.key = first.m.key
		lastX = append(lastX[:0], first.xa...)
		lastStep = append(lastStep[:0], r[:m.n]...)
		lastStep = append(lastStep, 0)
		lastStep = append(lastStep, r[m.n:]...)
		lastKey = at.key
		at.x = stepped(lastX, lastStep, lambda)
	}
	return 0, ErrNotPeriodic
}

func stepped(x, step []float64, lambda float64) []float64 {
	out := make([]float64, len(x))
	for i, v := range x {
		out[i] = v + lambda*step[i]
	}
	return out
}

// sizeOf returns the size of a correction relative to the scales, and how many
// times larger it is than what may be trusted at once.
func (e *engine) sizeOf(m *mode, r, x []float64) (norm, reach float64) {
	reach = 1
	for i, v := range r {
		switch v = math.Abs(v); {
		case i < m.ny:
			norm = math.Max(norm, v/e.c.Amp)
		case i < m.n:
			norm = math.Max(norm, v/e.c.Volt)
			reach = math.Max(reach, v/(0.3*math.Abs(x[i])+0.02*e.c.Volt))
		default:
			s := e.c.Controls[i-m.n].Scale
			norm = math.Max(norm, v/s)
			reach = math.Max(reach, v/s)
		}
		if math.IsNaN(v) {
			return v, 1
		}
	}
	return norm, reach
}

// relocate moves the start to the middle of the longest segment of the last
// pass, where no change is near, keeping the state reached there.
func (e *engine) relocate(at *start) {
	long := &e.segs[0]
	for i := range e.segs {
		if s := &e.segs[i]; s.b-s.a > long.b-long.a {
			long = s
		}
	}
	mid := int(math.Round((long.a + long.b) / 2 / cell))
	if float64(mid)*cell < long.a || float64(mid)*cell > long.b {
		// the longest is shorter than a cell: continue at the end
		m, x, _ := e.home()
		at.key, at.x = m.key, append([]float64(nil), x...)
		return
	}
	mid %= Samples
	m := e.atM[mid]
	at.sample, at.key = mid, m.key
	at.x = append([]float64(nil), e.atX[mid*e.wide:mid*e.wide+m.d]...)
}

// starved returns the capacitors that no branch charged during the last pass;
// nil when there is none.
func (e *engine) starved() []int {
	var out []int
	for v := range e.c.Y {
		fed := false
		for i := range e.segs {
			m := e.segs[i].m
			for b := range e.c.S {
				if e.c.S[b][v] <= 0 {
					continue
				}
				for _, t := range m.T[b*m.ny : (b+1)*m.ny] {
					fed = fed || t != 0
				}
			}
		}
		if !fed {
			out = append(out, v)
		}
	}
	return out
}

// feed lowers starved capacitors, so that their rectifiers begin to conduct.
func (e *engine) feed(at *start, starved []int) {
	m := e.mode(at.key)
	for _, v := range starved {
		x := &at.x[m.ny+v]
		*x = math.Min(0.97**x, e.c.Rest[v])
	}
}

// variance returns the mean square of a controlled state about its mean, over
// the samples.
func (e *engine) variance(control int, mean float64) float64 {
	var sum float64
	for _, k := range e.recorded() {
		m := e.atM[k]
		x := e.atX[k*e.wide : k*e.wide+m.d]
		d := dot(m.steps.seen[control*m.d:(control+1)*m.d], x) - mean
		sum += d * d
	}
	return sum / float64(Samples/e.parts)
}

// span is the angle that a pass covers.
func (e *engine) span() float64 { return 2 * math.Pi / float64(e.parts) }

// recorded returns the samples of the last pass, in their order.
func (e *engine) recorded() []int {
	e.marks = e.marks[:0]
	k0 := int(math.Round(e.segs[0].a / cell))
	for k := k0; k < k0+Samples/e.parts; k++ {
		e.marks = append(e.marks, k%Samples)
	}
	return e.marks
}
