package grid

import "math/cmplx"

// solveDense solves a x = b in place by Gauss elimination with partial
// pivoting; a is n x n by rows. It reports false when a is singular.
func solveDense(a [][]complex128, b []complex128) bool {
	n := len(b)
	for k := range n {
		p := k
		for i := k + 1; i < n; i++ {
			if cmplx.Abs(a[i][k]) > cmplx.Abs(a[p][k]) {
				p = i
			}
		}
		if cmplx.Abs(a[p][k]) < 1e-300 || cmplx.IsNaN(a[p][k]) {
			return false
		}
		a[k], a[p], b[k], b[p] = a[p], a[k], b[p], b[k]
		for i := k + 1; i < n; i++ {
			f := a[i][k] / a[k][k]
			if f == 0 {
				continue
			}
			for j := k; j < n; j++ {
				a[i][j] -= f * a[k][j]
			}
			b[i] -= f * b[k]
		}
	}
	for k := n - 1; k >= 0; k-- {
		for j := k + 1; j < n; j++ {
			b[k] -= a[k][j] * b[j]
		}
		b[k] /= a[k][k]
	}
	return true
}
