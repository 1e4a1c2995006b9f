package piecewise

import (
	"context"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"quietbus/study/phasor"
)

// Second road: the ladder against the matrix exponential of a general library,
// with the integral as a further state, for stiff and slow systems.
func TestLadderAgainstExponential(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for try := 0; try < 40; try++ {
		const n, d = 3, 5
		m := &mode{ny: 2, n: n, d: d, A: make([]float64, n*d), T: []float64{1, 0, 0, 1}}
		for i := range m.A {
			m.A[i] = r.NormFloat64() * math.Pow(10, 3*r.Float64()-1)
		}
		for i := 0; i < n; i++ {
			m.A[i*d+i] -= math.Pow(10, 4*r.Float64()-1)
		}
		c := NewCircuit(2, 1, 1)
		c.Controls[0] = Control{States: []int{1, 2}}
		l := newLadder(m, c)
		tau := 6 * r.Float64() * math.Pow(10, -3*r.Float64())

		// x' = A x, w' = x1 + x2
		big := mat.NewDense(d+1, d+1, nil)
		for i := 0; i < n; i++ {
			for j := 0; j < d; j++ {
				big.Set(i, j, m.A[i*d+j]*tau)
			}
		}
		big.Set(d, 1, tau)
		big.Set(d, 2, tau)
		var e mat.Dense
		e.Exp(big)
		D, W := make([]float64, n*d), make([]float64, d)
		l.matrices(tau, D, W)
		size := mat.Norm(&e, 2)
		for i := 0; i < n; i++ {
			for j := 0; j < d; j++ {
				want := e.At(i, j)
				if i == j {
					want--
				}
				if math.Abs(D[i*d+j]-want) > 1e-9*size {
					t.Fatalf("exp(A %g) at %d,%d: %g, want %g", tau, i, j, D[i*d+j], want)
				}
			}
		}
		for j := 0; j < d; j++ {
			if math.Abs(W[j]-e.At(d, j)) > 1e-9*size {
				t.Fatalf("integral over %g at %d: %g, want %g", tau, j, W[j], e.At(d, j))
			}
		}
		x := []float64{1, -2, 0.5, 1, 3}
		want := mat.NewVecDense(d+1, nil)
		want.MulVec(&e, mat.NewVecDense(d+1, append(append([]float64(nil), x...), 0)))
		l.advance(tau, x)
		for i, v := range x {
			if math.Abs(v-want.AtVec(i)) > 1e-8*size {
				t.Fatalf("advance by %g: state %d is %g, want %g", tau, i, v, want.AtVec(i))
			}
		}
	}
}

// Second road: the closed integral of u e^-jkt against Simpson's rule.
func TestKernelAgainstQuadrature(t *testing.T) {
	e := newEngine(NewCircuit(1, 0, 0))
	v := phasor.Spectrum{0, 100, 0, complex(3, -4), 0, complex(0, 7), 0, 2}
	e.s.set([3]phasor.Spectrum{v, v, v})
	const a, b, order, steps = 0.3, 2.1, 9, 4000
	ka, kb := e.kernel(a, order, nil), e.kernel(b, order, nil)
	for k := 0; k <= order; k++ {
		var want complex128
		for i := 0; i <= steps; i++ {
			x := a + (b-a)*float64(i)/steps
			w := 2.0
			if i%2 == 1 {
				w = 4
			}
			if i == 0 || i == steps {
				w = 1
			}
			want += complex(w*phasor.Value(v, x), 0) * cmplx.Rect(1, -float64(k)*x)
		}
		want *= complex((b-a)/steps/3, 0)
		if got := kb[k*3+1] - ka[k*3+1]; cmplx.Abs(got-want) > 1e-8*cmplx.Abs(want)+1e-8 {
			t.Errorf("order %d: %v, want %v", k, got, want)
		}
	}
}

// diodeRL is one diode with resistance and reactance on phase a.
func diodeRL(r, x float64) *Circuit {
	c := NewCircuit(1, 0, 0)
	c.R[0][0], c.X[0][0], c.K[0] = r, x, [3]float64{1, 0, 0}
	c.Units = []Unit{Valve{Branch: 0, Diode: true}}
	c.Volt, c.Amp = 325, 325/math.Hypot(r, x)
	return c
}

// A diode on R and L conducts from the zero of the voltage to the angle b with
// sin(b - phi) + sin(phi) e^(-b / tan phi) = 0, phi = atan(x / r) (textbook
// relation, e.g. Mohan, Undeland, Robbins, Power Electronics, 3rd ed.; mark:
// derived). Its mean current is Vm (1 - cos b) / (2 pi R).
func TestExtinctionAngle(t *testing.T) {
	for _, x := range []float64{0.5, 5, 50} {
		const r, vm = 5.0, 325.0
		phi := math.Atan2(x, r)
		low, high := math.Pi, 2*math.Pi
		for i := 0; i < 200; i++ {
			b := (low + high) / 2
			if math.Sin(b-phi)+math.Sin(phi)*math.Exp(-b/math.Tan(phi)) > 0 {
				low = b
			} else {
				high = b
			}
		}
		s := NewSolver(diodeRL(r, x))
		s.Start([]float64{0, 1})
		// the voltage sin t
		o, err := s.Solve(context.Background(), [3]phasor.Spectrum{{0, complex(0, -vm/math.Sqrt2)}}, 20)
		if err != nil {
			t.Fatal(err)
		}
		if got := 2 * math.Pi * o.Share(0, func(s uint64) bool { return s == 1 }); math.Abs(got-low) > 1e-9 {
			t.Errorf("x %g: conducts %.12f rad, want %.12f", x, got, low)
		}
		if got, want := real(o.Lines[0][0]), vm*(1-math.Cos(low))/(2*math.Pi*r); math.Abs(got/want-1) > 1e-6 {
			t.Errorf("x %g: mean %.9f A, want %.9f", x, got, want)
		}
		// Parseval: the moments against the samples, loosely
		var sum float64
		for _, v := range o.Walk()[0] {
			sum += v * v / Samples
		}
		if math.Abs(sum/o.Moments[0][0]-1) > 2e-3 {
			t.Errorf("x %g: mean square %g, of the samples %g", x, o.Moments[0][0], sum)
		}
	}
}

// The bridge's rule: the direct current is never less than the sum of the
// positive leg currents, and each state is left by what its triggers name.
func TestBridgeStates(t *testing.T) {
	b := Bridge{AC: []int{0, 1, 2}, DC: 3, Choke: true}
	for up := uint64(0); up < 8; up++ {
		for low := uint64(0); low < 8; low++ {
			state := b.join(up, low)
			if state == 0 {
				continue
			}
			if legs := up | low; up&low == 0 && len(b.columns(state)) != ones(legs)-1 || up&low != 0 && len(b.columns(state)) != ones(legs) {
				t.Errorf("state %06b has %d free currents", state, len(b.columns(state)))
			}
			for _, col := range b.columns(state) {
				var sum float64
				for _, c := range col.terms {
					if c.branch != b.DC {
						sum += c.coef
					}
				}
				if sum != 0 {
					t.Errorf("state %06b: leg currents add up to %g", state, sum)
				}
			}
			for _, tr := range b.triggers(state) {
				if tr.next == state {
					t.Errorf("state %06b leads to itself", state)
				}
				if u, l, _ := b.split(tr.next); tr.next != 0 && (u == 0 || l == 0) {
					t.Errorf("state %06b leads to %06b, which cannot conduct", state, tr.next)
				}
			}
			// turning six times leads back
			turned := state
			for i := 0; i < 6; i++ {
				turned = b.turned(turned, []int{1, 2, 0})
			}
			if turned != state {
				t.Errorf("state %06b turns into %06b", state, turned)
			}
		}
	}
}

func ones(v uint64) (n int) {
	for ; v != 0; v &= v - 1 {
		n++
	}
	return n
}
