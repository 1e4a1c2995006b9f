package piecewise

import (
	"math"
	"math/cmplx"
)

// Small dense kernels on row-major slices. The systems have 1 to some 15
// unknowns and are solved hundreds of times in a millisecond, which rules out
// a general library's allocation on each call.

// solve overwrites b (n x m) by a^-1 b and destroys a (n x n). It reports
// false when a is singular to working precision.
func solve(a []float64, n int, b []float64, m int) bool {
	var big float64
	for _, v := range a[:n*n] {
		big = math.Max(big, math.Abs(v))
	}
	for k := 0; k < n; k++ {
		p, best := k, math.Abs(a[k*n+k])
		for i := k + 1; i < n; i++ {
			if v := math.Abs(a[i*n+k]); v > best {
				p, best = i, v
			}
		}
		if !(best > 1e-14*big) {
			return false
		}
		if p != k {
			swap(a, n, k, p)
			swap(b, m, k, p)
		}
		inv := 1 / a[k*n+k]
		for i := k + 1; i < n; i++ {
			f := a[i*n+k] * inv
			if f == 0 {
				continue
			}
			for j := k; j < n; j++ {
				a[i*n+j] -= f * a[k*n+j]
			}
			for j := 0; j < m; j++ {
				b[i*m+j] -= f * b[k*m+j]
			}
		}
	}
	for k := n - 1; k >= 0; k-- {
		inv := 1 / a[k*n+k]
		for j := 0; j < m; j++ {
			v := b[k*m+j]
			for i := k + 1; i < n; i++ {
				v -= a[k*n+i] * b[i*m+j]
			}
			b[k*m+j] = v * inv
		}
	}
	return true
}

func swap(a []float64, m, i, j int) {
	for k := 0; k < m; k++ {
		a[i*m+k], a[j*m+k] = a[j*m+k], a[i*m+k]
	}
}

// invertComplex overwrites inv by the inverse of a (n x n), destroying a.
func invertComplex(a []complex128, n int, inv []complex128) bool {
	for i := range inv[:n*n] {
		inv[i] = 0
	}
	for i := 0; i < n; i++ {
		inv[i*n+i] = 1
	}
	for k := 0; k < n; k++ {
		p, best := k, cabs1(a[k*n+k])
		for i := k + 1; i < n; i++ {
			if v := cabs1(a[i*n+k]); v > best {
				p, best = i, v
			}
		}
		if !(best > 0) {
			return false
		}
		if p != k {
			for j := 0; j < n; j++ {
				a[k*n+j], a[p*n+j] = a[p*n+j], a[k*n+j]
				inv[k*n+j], inv[p*n+j] = inv[p*n+j], inv[k*n+j]
			}
		}
		d := 1 / a[k*n+k]
		for j := 0; j < n; j++ {
			a[k*n+j] *= d
			inv[k*n+j] *= d
		}
		for i := 0; i < n; i++ {
			f := a[i*n+k]
			if i == k || f == 0 {
				continue
			}
			for j := 0; j < n; j++ {
				a[i*n+j] -= f * a[k*n+j]
				inv[i*n+j] -= f * inv[k*n+j]
			}
		}
	}
	return true
}

// cabs1 is a cheap size of a complex number for pivoting.
func cabs1(z complex128) float64 { return math.Abs(real(z)) + math.Abs(imag(z)) }

// turn returns exp(j theta).
func turn(theta float64) complex128 { return cmplx.Rect(1, theta) }

func dot(a, b []float64) float64 {
	var s float64
	for i, v := range a {
		s += v * b[i]
	}
	return s
}
