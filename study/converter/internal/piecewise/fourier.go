package piecewise

import (
	"math"

	"quietbus/study/phasor"
)

// lines returns the three line currents, orders 1..order, rms phasors.
//
// In one mode jk F_k + [x e^-jkt] = A F_k + B G_k + a g_k with F_k, G_k, g_k
// the integrals of x, u and 1 times e^-jkt over the segment, so
//
//	F_k = (jk - A)^-1 (B G_k + a g_k - [x e^-jkt])
//
// where G_k is closed too, as u is a sum of phasors. Nothing is sampled.
func (e *engine) lines(order int) [3]phasor.Spectrum {
	var out [3]phasor.Spectrum
	for q := range out {
		out[q] = phasor.New(order)
	}
	ka, kb := e.kernel(e.segs[0].a, order, e.ka), e.kb
	za, zb := grown(e.za, order+1), grown(e.zb2, order+1)
	conjPowers(e.segs[0].a, za)
	f := grown(e.force, e.wide)
	for i := range e.segs {
		s := &e.segs[i]
		m := s.m
		kb = e.kernel(s.b, order, kb)
		conjPowers(s.b, zb)
		rows, stride := m.outputs(order), 3*m.n
		held := e.rootXi[:m.n] // part of the slope by the constants
		for j := range held {
			held[j] = dot(m.A[j*m.d+m.n:(j+1)*m.d], s.xa[m.n:])
		}
		for k := 1; k <= order; k++ {
			one := (zb[k] - za[k]) * complex(0, 1/float64(k))
			ga, gb, gc := kb[k*3]-ka[k*3], kb[k*3+1]-ka[k*3+1], kb[k*3+2]-ka[k*3+2]
			for j := 0; j < m.n; j++ {
				held, b := held[j], m.B[j*3:j*3+3]
				xb, xa := s.xb[j], s.xa[j]
				f[j] = complex(
					held*real(one)+b[0]*real(ga)+b[1]*real(gb)+b[2]*real(gc)-xb*real(zb[k])+xa*real(za[k]),
					held*imag(one)+b[0]*imag(ga)+b[1]*imag(gb)+b[2]*imag(gc)-xb*imag(zb[k])+xa*imag(za[k]))
			}
			row := rows[k*stride : (k+1)*stride]
			for q := 0; q < 3; q++ {
				sum := out[q][k]
				for j, g := range row[q*m.n : (q+1)*m.n] {
					sum += g * f[j]
				}
				out[q][k] = sum
			}
		}
		ka, kb = kb, ka
		za, zb = zb, za
	}
	e.ka, e.kb, e.za, e.zb2, e.force = ka, kb, za, zb, f
	e.allParts(out)
	for q := range out {
		for k := range out[q] {
			out[q][k] *= complex(math.Sqrt2/(2*math.Pi), 0)
		}
	}
	return out
}

// allParts adds to the integrals over one part of the period those over the
// others: part r contributes (-1)^r e^-jkrT/m times those of the exchanged lines.
func (e *engine) allParts(f [3]phasor.Spectrum) {
	if e.sym == nil {
		return
	}
	for k := range f[0] {
		z := -turn(-float64(k) * e.span())
		now, sum := [3]complex128{f[0][k], f[1][k], f[2][k]}, [3]complex128{}
		for r := 0; r < e.parts; r++ {
			var next [3]complex128
			for q := range sum {
				sum[q] += now[q]
				next[q] = z * now[e.sym.Phase[q]]
			}
			now = next
		}
		for q := range f {
			f[q][k] = sum[q]
		}
	}
}

// grown returns a slice of n entries, reusing v.
func grown(v []complex128, n int) []complex128 {
	if cap(v) < n {
		return make([]complex128, n)
	}
	return v[:n]
}

// conjPowers writes e^-jk theta.
func conjPowers(theta float64, z []complex128) {
	z[0] = 1
	step := turn(-theta)
	for k := 1; k < len(z); k++ {
		if k%16 == 0 {
			z[k] = turn(-float64(k) * theta)
		} else {
			z[k] = z[k-1] * step
		}
	}
}

// kernel writes an antiderivative of u e^-jkt at theta, orders 0..order by
// phase: with w_h = U_h e^jht (peak), a + jb = w_h,
//
//	e^-jkt sum_{h != k} (b h - j a k) / (h^2 - k^2)
//	 + (U_k t + j conj(w_k) e^-jkt / 2k) / 2
func (e *engine) kernel(theta float64, order int, dst []complex128) []complex128 {
	n := 3 * (order + 1)
	if cap(dst) < n {
		dst = make([]complex128, n)
	}
	dst = dst[:n]
	table := e.differences(order)
	e.zh = e.s.powers(theta, e.zh)
	hs := e.s.orders
	e.re, e.im = e.re[:0], e.im[:0]
	for q := 0; q < 3; q++ {
		for i, h := range hs {
			w := e.s.peak[q][i] * e.zh[i]
			e.re, e.im = append(e.re, real(w)), append(e.im, imag(w)*float64(h))
		}
	}
	c := len(hs)
	step, zk := turn(-theta), complex(1, 0)
	for k := 0; k <= order; k++ {
		if k%16 == 0 {
			zk = turn(-float64(k) * theta)
		} else {
			zk *= step
		}
		row := table[k*c : (k+1)*c]
		for q := 0; q < 3; q++ {
			re, im := e.re[q*c:(q+1)*c], e.im[q*c:(q+1)*c]
			var sa, sb float64
			for i, t := range row {
				sa += re[i] * t
				sb += im[i] * t
			}
			dst[k*3+q] = zk * complex(sb, -float64(k)*sa)
		}
	}
	for i, h := range hs {
		if h > order {
			break
		}
		z := turn(-float64(h) * theta)
		for q := 0; q < 3; q++ {
			p := e.s.peak[q][i]
			w := p * e.zh[i]
			dst[h*3+q] += (p*complex(theta, 0) + complex(imag(w), real(w))*z/complex(2*float64(h), 0)) / 2
		}
	}
	return dst
}

// differences returns 1/(h^2 - k^2) by k and position of h, zero at h = k.
func (e *engine) differences(order int) []float64 {
	hs := e.s.orders
	if e.diffStamp == e.s.stamp && len(e.diff) == (order+1)*len(hs) {
		return e.diff
	}
	e.diffStamp = e.s.stamp
	e.diff = sized(e.diff, (order+1)*len(hs))
	for k := 0; k <= order; k++ {
		for i, h := range hs {
			if h != k {
				e.diff[k*len(hs)+i] = 1 / float64(h*h-k*k)
			}
		}
	}
	return e.diff
}
