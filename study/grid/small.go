package grid

// factorSmall factors the n x n matrix a, by rows, in place into L and U with
// partial pivoting. It reports false when a pivot is below 1e-6 of one: the
// matrix is 1 + Z Y, and an update that near to singular loses its accuracy.
func factorSmall(a []complex128, pivot []int, n int) bool {
	for k := range n {
		p := k
		for i := k + 1; i < n; i++ {
			if cmplxAbs1(a[i*n+k]) > cmplxAbs1(a[p*n+k]) {
				p = i
			}
		}
		pivot[k] = p
		if p != k {
			for j := range n {
				a[k*n+j], a[p*n+j] = a[p*n+j], a[k*n+j]
			}
		}
		if !(cmplxAbs1(a[k*n+k]) > 1e-6) {
			return false
		}
		inv := 1 / a[k*n+k]
		for i := k + 1; i < n; i++ {
			f := a[i*n+k] * inv
			a[i*n+k] = f
			if f == 0 {
				continue
			}
			for j := k + 1; j < n; j++ {
				a[i*n+j] -= f * a[k*n+j]
			}
		}
	}
	return true
}

// solveSmall overwrites b with the solution for a factored matrix.
func solveSmall(a []complex128, pivot []int, b []complex128) {
	n := len(b)
	for k, p := range pivot[:n] {
		b[k], b[p] = b[p], b[k]
	}
	for k := range n {
		for i := k + 1; i < n; i++ {
			b[i] -= a[i*n+k] * b[k]
		}
	}
	for k := n - 1; k >= 0; k-- {
		for j := k + 1; j < n; j++ {
			b[k] -= a[k*n+j] * b[j]
		}
		b[k] /= a[k*n+k]
	}
}
