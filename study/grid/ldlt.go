package grid

import (
	"math"
	"sort"
)

// pattern is the symbolic half of a sparse complex symmetric LDL^T: the order
// in which nodes are eliminated, the places of the fill, and the list of
// updates, all found once for a topology.
type pattern struct {
	n      int
	rank   []int   // rank[node] = position in the elimination
	start  []int   // column k holds rows row[start[k]:start[k+1]]
	row    []int   // positions, rising
	target []int32 // for column k and each pair of its rows: where the product goes
	tstart []int
	slot   map[[2]int]int // (row,col) positions, row>col -> index in low
}

// newPattern orders n nodes with the given neighbour sets by minimum degree
// and finds the fill.
func newPattern(n int, adj []map[int]struct{}) *pattern {
	p := &pattern{n: n, rank: make([]int, n), slot: map[[2]int]int{}}
	work := make([]map[int]struct{}, n)
	for i, a := range adj {
		work[i] = make(map[int]struct{}, len(a))
		for j := range a {
			work[i][j] = struct{}{}
		}
	}
	// buckets by degree
	buckets := make([]map[int]struct{}, 1)
	put := func(v int) {
		d := len(work[v])
		for len(buckets) <= d {
			buckets = append(buckets, nil)
		}
		if buckets[d] == nil {
			buckets[d] = map[int]struct{}{}
		}
		buckets[d][v] = struct{}{}
	}
	for v := 0; v < n; v++ {
		put(v)
	}
	lists := make([][]int, n) // neighbours at elimination, as nodes
	order := make([]int, 0, n)
	for len(order) < n {
		v := -1
		for d := range buckets {
			best := -1
			for c := range buckets[d] { // the smallest number: the ordering is reproducible
				if best < 0 || c < best {
					best = c
				}
			}
			if best >= 0 {
				v = best
				delete(buckets[d], v)
				break
			}
		}
		p.rank[v] = len(order)
		order = append(order, v)
		var near []int
		for u := range work[v] {
			near = append(near, u)
		}
		lists[v] = near
		for _, u := range near {
			delete(buckets[len(work[u])], u)
			delete(work[u], v)
		}
		for i, u := range near {
			for _, w := range near[i+1:] {
				work[u][w] = struct{}{}
				work[w][u] = struct{}{}
			}
		}
		for _, u := range near {
			put(u)
		}
	}
	return p.fill(order, lists)
}

// fill numbers the entries of L column by column and lists where each product
// of two entries of a column goes.
func (p *pattern) fill(order []int, lists [][]int) *pattern {
	p.start = make([]int, p.n+1)
	for k, v := range order {
		rows := make([]int, len(lists[v]))
		for i, u := range lists[v] {
			rows[i] = p.rank[u]
		}
		sort.Ints(rows)
		for _, r := range rows {
			p.slot[[2]int{r, k}] = len(p.row)
			p.row = append(p.row, r)
		}
		p.start[k+1] = len(p.row)
	}
	p.tstart = make([]int, p.n+1)
	for k := 0; k < p.n; k++ {
		rows := p.row[p.start[k]:p.start[k+1]]
		for i, r := range rows {
			for _, c := range rows[:i] {
				p.target = append(p.target, int32(p.slot[[2]int{r, c}]))
			}
		}
		p.tstart[k+1] = len(p.target)
	}
	return p
}

// factors is the numeric half: the matrix on entry, L and 1/D after factor.
type factors struct {
	diag []complex128
	low  []complex128
	size []float64 // sum of the magnitudes on each diagonal place
}

func (p *pattern) newFactors() *factors {
	return &factors{make([]complex128, p.n), make([]complex128, len(p.row)), make([]float64, p.n)}
}

// add adds to a place on the diagonal.
func (f *factors) add(k int32, v complex128) {
	f.diag[k] += v
	f.size[k] += cmplxAbs1(v)
}

// factor turns the assembled matrix into L D L^T in place. It reports false
// at a pivot that is nearly zero against what was there before elimination.
func (p *pattern) factor(f *factors) bool {
	for k := 0; k < p.n; k++ {
		d := f.diag[k]
		if !(cmplxAbs1(d) > 1e-11*f.size[k]) {
			return false
		}
		inv := 1 / d
		f.diag[k] = inv
		lo, hi := p.start[k], p.start[k+1]
		t := p.tstart[k]
		for i := lo; i < hi; i++ {
			l := f.low[i] * inv
			f.diag[p.row[i]] -= l * f.low[i]
			for j := lo; j < i; j++ {
				f.low[p.target[t]] -= l * f.low[j]
				t++
			}
		}
		for i := lo; i < hi; i++ {
			f.low[i] *= inv
		}
	}
	return true
}

// solve overwrites b, in elimination order, with the solution.
func (p *pattern) solve(f *factors, b []complex128) {
	for k := 0; k < p.n; k++ {
		if v := b[k]; v != 0 {
			for i := p.start[k]; i < p.start[k+1]; i++ {
				b[p.row[i]] -= f.low[i] * v
			}
		}
	}
	for k := p.n - 1; k >= 0; k-- {
		v := b[k] * f.diag[k]
		for i := p.start[k]; i < p.start[k+1]; i++ {
			v -= f.low[i] * b[p.row[i]]
		}
		b[k] = v
	}
}

// solveMany is solve for m right-hand sides at a time: b holds row after row,
// in elimination order, m values each.
func (p *pattern) solveMany(f *factors, b []complex128, m int) {
	for k := 0; k < p.n; k++ {
		from := b[k*m : k*m+m]
		for i := p.start[k]; i < p.start[k+1]; i++ {
			l, to := f.low[i], b[p.row[i]*m:][:m]
			for j, v := range from {
				to[j] -= l * v
			}
		}
	}
	for k := p.n - 1; k >= 0; k-- {
		to, d := b[k*m:k*m+m], f.diag[k]
		for j := range to {
			to[j] *= d
		}
		for i := p.start[k]; i < p.start[k+1]; i++ {
			l, from := f.low[i], b[p.row[i]*m:][:m]
			for j, v := range from {
				to[j] -= l * v
			}
		}
	}
}

func cmplxAbs1(v complex128) float64 { return math.Abs(real(v)) + math.Abs(imag(v)) }
