package piecewise

import "math"

// Samples is the number of points a period at which the watches are looked at.
const Samples = 240

// cell is the angle between two samples.
const cell = 2 * math.Pi / Samples

// doublings is the number of doublings of a cell that the ladder reaches.
const doublings = 8

// A ladder holds D = exp(A tau) - 1 for tau = cell * 2^doublings, halving down to a
// step short against every time constant, and with it the integral of each
// controlled state over such a step. Keeping exp - 1 instead of exp preserves
// the relative accuracy of slow modes through the doublings.
type ladder struct {
	n, d, np int
	norm     float64     // largest row sum of A
	taus     []float64   // descending
	D        [][]float64 // n x d each
	W        [][]float64 // np x d each
	A        []float64
	seen     []float64 // np x d: controlled states as rows
	tmp      []float64 // n
}

// seriesTerms of the exponential on the last rung, whose norm is below short.
const (
	seriesTerms = 7
	short       = 0.03
)

func newLadder(m *mode, c *Circuit) *ladder {
	l := &ladder{n: m.n, d: m.d, np: len(c.Controls), A: m.A, tmp: make([]float64, m.n)}
	l.seen = make([]float64, l.np*l.d)
	for k, ctl := range c.Controls {
		row := l.seen[k*l.d : (k+1)*l.d]
		for _, s := range ctl.States {
			if s >= c.nb() {
				row[m.ny+s-c.nb()]++
				continue
			}
			for j := 0; j < m.ny; j++ {
				row[j] += m.T[s*m.ny+j]
			}
		}
	}
	var norm float64
	for i := 0; i < l.n; i++ {
		var sum float64
		for j := 0; j < l.n; j++ {
			sum += math.Abs(m.A[i*m.d+j])
		}
		norm = math.Max(norm, sum)
	}
	l.norm = norm
	rungs := doublings + 1
	tau := cell
	for tau*norm > short && rungs < 60 {
		tau /= 2
		rungs++
	}
	l.taus, l.D, l.W = make([]float64, rungs), make([][]float64, rungs), make([][]float64, rungs)
	for k := rungs - 1; k >= 0; k-- {
		l.taus[k] = tau
		l.D[k], l.W[k] = make([]float64, l.n*l.d), make([]float64, l.np*l.d)
		if k == rungs-1 {
			l.series(tau, l.D[k], l.W[k])
		} else {
			copy(l.D[k], l.D[k+1])
			copy(l.W[k], l.W[k+1])
			l.join(l.D[k], l.W[k], l.D[k+1], l.W[k+1])
		}
		tau *= 2
	}
	return l
}

// series writes exp(A tau) - 1 and its integral for a short step.
func (l *ladder) series(tau float64, D, W []float64) {
	n, d := l.n, l.d
	for i := range D {
		D[i] = l.A[i] * tau
	}
	for i := range W {
		W[i] = l.seen[i] * tau
	}
	power, next := append([]float64(nil), D...), make([]float64, n*d)
	fact := 1.0
	for k := 2; k <= seriesTerms+1; k++ {
		// the integral of D's term k-1 adds tau/k of it
		for c := 0; c < l.np; c++ {
			for i := 0; i < n; i++ {
				if s := l.seen[c*d+i]; s != 0 {
					for j := 0; j < d; j++ {
						W[c*d+j] += s * power[i*d+j] * fact * tau / float64(k)
					}
				}
			}
		}
		if k > seriesTerms {
			break
		}
		fact /= float64(k)
		for i := 0; i < n; i++ {
			for j := 0; j < d; j++ {
				var v float64
				for q := 0; q < n; q++ {
					v += l.A[i*d+q] * power[q*d+j]
				}
				next[i*d+j] = v * tau
			}
		}
		power, next = next, power
		for i := range D {
			D[i] += fact * power[i]
		}
	}
}

// join appends a step (D2, W2) to (D, W), in place.
func (l *ladder) join(D, W, D2, W2 []float64) {
	n, d := l.n, l.d
	// W = W + W2 exp(A tau) with the exponential of the first step
	for c := 0; c < l.np; c++ {
		w, w2 := W[c*d:(c+1)*d], W2[c*d:(c+1)*d]
		for j := 0; j < d; j++ {
			v := w[j] + w2[j]
			for q := 0; q < n; q++ {
				v += w2[q] * D[q*d+j]
			}
			w[j] = v
		}
	}
	sum := make([]float64, n*d)
	for i := 0; i < n; i++ {
		for j := 0; j < d; j++ {
			v := D[i*d+j] + D2[i*d+j]
			for q := 0; q < n; q++ {
				v += D2[i*d+q] * D[q*d+j]
			}
			sum[i*d+j] = v
		}
	}
	copy(D, sum)
}

// cellStep advances the transient x by one cell.
func (l *ladder) cellStep(x []float64) { l.apply(l.D[doublings], x) }

func (l *ladder) apply(D, x []float64) {
	for i := 0; i < l.n; i++ {
		var v float64
		for j, a := range D[i*l.d : (i+1)*l.d] {
			v += a * x[j]
		}
		l.tmp[i] = v
	}
	for i, v := range l.tmp {
		x[i] += v
	}
}

// advance advances the transient x by tau >= 0.
func (l *ladder) advance(tau float64, x []float64) {
	for k, t := range l.taus {
		for tau >= t {
			l.apply(l.D[k], x)
			tau -= t
		}
	}
	if tau <= 0 {
		return
	}
	// Taylor series on what is left: term k is (A tau)^k / k! x
	t := make([]float64, 0, 32)
	t = append(t, x[:l.d]...)
	u := l.tmp
	for k := 1; k <= seriesTerms; k++ {
		for i := 0; i < l.n; i++ {
			var v float64
			row := l.A[i*l.d : (i+1)*l.d]
			if k > 1 {
				row = row[:l.n]
			}
			for j, a := range row {
				v += a * t[j]
			}
			u[i] = v * tau / float64(k)
		}
		for i, v := range u {
			t[i] = v
			x[i] += v
		}
	}
}

// matrices returns exp(A tau) - 1 (n x d) and the integrals of the controlled
// states (np x d) over a step tau >= 0.
func (l *ladder) matrices(tau float64, D, W []float64) {
	for i := range D {
		D[i] = 0
	}
	for i := range W {
		W[i] = 0
	}
	for k, t := range l.taus {
		for tau >= t {
			l.join(D, W, l.D[k], l.W[k])
			tau -= t
		}
	}
	if tau > 0 {
		d2, w2 := make([]float64, l.n*l.d), make([]float64, l.np*l.d)
		l.series(tau, d2, w2)
		l.join(D, W, d2, w2)
	}
}
