package grid

import (
	"container/heap"
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
}

// newPattern orders n nodes with the given neighbours, each named once, by
// minimum degree, the lower number first among equals, and finds the fill.
// near is used up.
func newPattern(n int, near [][]int) *pattern {
	p := &pattern{n: n, rank: make([]int, n)}
	for v := range p.rank {
		p.rank[v] = -1
	}
	q := make(queue, 0, 2*n)
	for v, list := range near {
		q = append(q, turn{len(list), v})
	}
	heap.Init(&q)
	order := make([]int, 0, n)
	mark := make([]int, n) // the node for whose sake it was marked last
	for v := range mark {
		mark[v] = -1
	}
	stamp := 0
	for len(order) < n {
		t := heap.Pop(&q).(turn)
		v := t.node
		if p.rank[v] >= 0 || t.degree != len(near[v]) {
			continue // an entry that has been overtaken
		}
		p.rank[v] = len(order)
		order = append(order, v)
		for _, u := range near[v] { // its neighbours become neighbours of each other
			stamp++
			kept := near[u][:0]
			for _, w := range near[u] {
				if w != v {
					kept = append(kept, w)
					mark[w] = stamp
				}
			}
			for _, w := range near[v] {
				if w != u && mark[w] != stamp {
					kept = append(kept, w)
				}
			}
			near[u] = kept
			heap.Push(&q, turn{len(kept), u})
		}
	}
	return p.fill(order, near)
}

// turn is a node that waits for its elimination.
type turn struct{ degree, node int }

// queue is a heap of turns, the lowest degree first.
type queue []turn

func (q queue) Len() int { return len(q) }
func (q queue) Less(i, j int) bool {
	return q[i].degree < q[j].degree || q[i].degree == q[j].degree && q[i].node < q[j].node
}
func (q queue) Swap(i, j int) { q[i], q[j] = q[j], q[i] }
func (q *queue) Push(x any)   { *q = append(*q, x.(turn)) }
func (q *queue) Pop() any {
	last := len(*q) - 1
	x := (*q)[last]
	*q = (*q)[:last]
	return x
}

// fill numbers the entries of L column by column, from each node's neighbours
// when it was eliminated, and lists where each product of two entries of a
// column goes.
func (p *pattern) fill(order []int, lists [][]int) *pattern {
	p.start = make([]int, p.n+1)
	for k, v := range order {
		rows := lists[v]
		for i, u := range rows {
			rows[i] = p.rank[u]
		}
		sort.Ints(rows)
		p.row = append(p.row, rows...)
		p.start[k+1] = len(p.row)
	}
	p.tstart = make([]int, p.n+1)
	for k := 0; k < p.n; k++ {
		rows := p.row[p.start[k]:p.start[k+1]]
		for i, r := range rows {
			for _, c := range rows[:i] {
				p.target = append(p.target, int32(p.slot(r, c)))
			}
		}
		p.tstart[k+1] = len(p.target)
	}
	return p
}

// slot returns the place of the entry at positions row > col in the pattern.
func (p *pattern) slot(row, col int) int {
	return p.start[col] + sort.SearchInts(p.row[p.start[col]:p.start[col+1]], row)
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
		inv := reciprocal(d)
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

// reciprocal returns 1/z without the care for infinities that the language
// takes, at a fraction of the cost. Magnitudes lie far from overflow here.
func reciprocal(z complex128) complex128 {
	d := real(z)*real(z) + imag(z)*imag(z)
	return complex(real(z)/d, -imag(z)/d)
}

func cmplxAbs1(v complex128) float64 { return math.Abs(real(v)) + math.Abs(imag(v)) }
