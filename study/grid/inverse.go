package grid

// inverse finds the inverse of a factored matrix on the places of its own
// pattern: diag by position, low by slot. For column k, from the last to the
// first, with its entries l of L,
//
//	Z[i,k] = -sum_j Z[i,j] l[j],   Z[k,k] = 1/D[k] - sum_j l[j] Z[j,k],
//
// which touches no place outside the pattern, at about the cost of a
// factorisation (Takahashi, Fagan and Chin, Formation of a sparse bus impedance
// matrix and its application to short circuit study, PICA 1973).
func (p *pattern) inverse(f *factors, diag, low []complex128) {
	for k := p.n - 1; k >= 0; k-- {
		lo, hi := p.start[k], p.start[k+1]
		t := p.tstart[k]
		for i := lo; i < hi; i++ {
			low[i] = -diag[p.row[i]] * f.low[i]
		}
		for i := lo; i < hi; i++ {
			for j := lo; j < i; j++ {
				z := low[p.target[t]]
				low[i] -= z * f.low[j]
				low[j] -= z * f.low[i]
				t++
			}
		}
		d := f.diag[k]
		for i := lo; i < hi; i++ {
			d -= f.low[i] * low[i]
		}
		diag[k] = d
	}
}
