package grid

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// Added is a balanced shunt that a variant has beyond its network, in star
// equivalent; a negative admittance takes one out.
type Added struct {
	Bus  BusID
	Y    []complex128 // siemens a phase, by order from 0 to the highest
	Zero bool         // passes the zero sequence
}

// Variant is a reduced network with shunts added at its ports and other
// supplies in place of its own. It keeps its memory from solution to solution:
// one for each goroutine. It answers as Fundamental and Solution do, for ports
// only.
type Variant struct {
	r        *Reduced
	shunts   []Added
	supplies []*Supply // in place of the system's, by their order there
	some     []int     // places of currents that are not zero
	at       []int     // ports with an added admittance
	y        [3][]complex128
	zero     bool
	current  []complex128 // by sequence and port
	v        [][]complex128
	carries  [][3]bool             // by order: the sequence has any voltage
	loads    map[ElementID]Drawing // in place of the network's own
	drawn    map[ElementID][3]complex128
	across   []phasor.Spectrum // by single-phase shunt: voltage across it
	m, x     []complex128      // small system
	pivot    []int
	rounds   int
	looked   [2]int // sequence and order that the small system is factored for by Impedance
}

// Variant returns a variant without changes.
func (r *Reduced) Variant() *Variant {
	n := 3 * len(r.nodes)
	v := &Variant{r: r, current: make([]complex128, n), v: make([][]complex128, r.order+1), carries: make([][3]bool, r.order+1)}
	for h := range v.v {
		v.v[h] = make([]complex128, n)
	}
	for range r.shunts {
		v.across = append(v.across, phasor.New(r.order))
	}
	v.supplies = append(v.supplies, r.sys.supplies...)
	return v
}

// RefactorError says that a change comes too near to a resonance of the network
// without it to be put in by a low-rank update: build the network with it.
type RefactorError struct{ Order int }

func (e *RefactorError) Error() string {
	return fmt.Sprintf("the change is ill-conditioned at order %d; the network has to be solved afresh", e.Order)
}

// Set takes the variant's shunts, which it keeps but does not change. Shunts on
// buses without a supply do nothing.
//
// Errors: a live bus that is no port.
func (v *Variant) Set(shunts []Added) error {
	v.shunts, v.at, v.zero, v.looked = shunts, v.at[:0], false, [2]int{}
	for i := range shunts {
		k := v.r.sys.node[shunts[i].Bus]
		if !v.r.sys.live[k] {
			continue
		}
		p := v.r.port[k]
		if p < 0 {
			return fmt.Errorf("%s is no port of the reduced network", v.r.sys.busName(k))
		}
		v.touch(p)
		v.zero = v.zero || shunts[i].Zero
	}
	for i, s := range v.supplies {
		if s != v.r.sys.supplies[i] {
			v.touch(v.r.port[v.r.sys.node[s.Bus]])
			v.zero = true
		}
	}
	return nil
}

// Replace puts another supply in the place of one of the network's, on the
// same bus, until it is replaced again; nil puts the network's own back. Call
// Set afterwards.
func (v *Variant) Replace(id ElementID, with *Supply) {
	own := v.r.sys.net.elements[id].(*Supply)
	for i, s := range v.r.sys.supplies {
		if s == own {
			if v.supplies[i] = with; with == nil {
				v.supplies[i] = own
			}
		}
	}
}

func (v *Variant) touch(p int) {
	for _, q := range v.at {
		if q == p {
			return
		}
	}
	v.at = append(v.at, p)
}

// admittances fills in what is added at each touched port, by sequence.
func (v *Variant) admittances(h int) {
	n := len(v.at)
	for q := range v.y {
		v.y[q] = append(v.y[q][:0], make([]complex128, n)...)
	}
	add := func(k, q int, y complex128) {
		p := v.r.port[k]
		for i, at := range v.at {
			if at == p {
				v.y[q][i] += y
			}
		}
	}
	for i := range v.shunts {
		x := &v.shunts[i]
		k := v.r.sys.node[x.Bus]
		if !v.r.sys.live[k] {
			continue
		}
		for q := range v.y {
			if q != int(phasor.Zero) || x.Zero {
				add(k, q, x.Y[h])
			}
		}
	}
	for i, s := range v.supplies {
		if own := v.r.sys.supplies[i]; s != own {
			k := v.r.sys.node[s.Bus]
			for q := range v.y {
				add(k, q, s.admittance(float64(h), phasor.Sequence(q))-own.admittance(float64(h), phasor.Sequence(q)))
			}
		}
	}
}

// emfs adds the supplies' currents of one order.
func (v *Variant) emfs(h int) {
	p := len(v.r.nodes)
	for _, s := range v.supplies {
		k := v.r.port[v.r.sys.node[s.Bus]]
		for q := range 3 {
			if e := s.emf(h, phasor.Sequence(q)); e != 0 {
				v.current[q*p+k] += e * s.admittance(float64(h), phasor.Sequence(q))
			}
		}
	}
}

// multiply fills v.v[h] of sequences lo to hi (exclusive) with Z times the
// currents there; z has rows and columns for just these sequences.
func (v *Variant) multiply(h, lo, hi int, z []complex128) {
	p := len(v.r.nodes)
	out, in := v.v[h][lo*p:hi*p], v.current[lo*p:hi*p]
	n := len(in)
	v.some = v.some[:0]
	for j, c := range in {
		if c != 0 {
			v.some = append(v.some, j)
		}
	}
	for i := range out {
		var sum complex128
		row := z[i*n : i*n+n]
		for _, j := range v.some {
			sum += row[j] * in[j]
		}
		out[i] = sum
	}
}

// small sets up and factors 1 + Z Y over the touched ports of sequences lo to
// hi; it reports false when that is nearly singular.
func (v *Variant) small(lo, hi int, z []complex128) bool {
	p, n := len(v.r.nodes), len(v.at)
	stride, k := (hi-lo)*p, (hi-lo)*n
	v.looked = [2]int{}
	v.m = append(v.m[:0], make([]complex128, k*k)...)
	v.pivot = append(v.pivot[:0], make([]int, k)...)
	for i := range k {
		row := (i/n)*p + v.at[i%n]
		for j := range k {
			v.m[i*k+j] = z[row*stride+(j/n)*p+v.at[j%n]] * v.y[lo+j/n][j%n]
		}
		v.m[i*k+i]++
	}
	return factorSmall(v.m, v.pivot, k)
}

// correct puts the added admittances into v.v[h]: their voltages x solve
// (1 + Z Y) x = v, and v falls by Z Y x. small has factored the matrix.
func (v *Variant) correct(h, lo, hi int, z []complex128) {
	p, n := len(v.r.nodes), len(v.at)
	stride, k := (hi-lo)*p, (hi-lo)*n
	out := v.v[h][lo*p : hi*p]
	v.x = v.x[:0]
	for i := range k {
		v.x = append(v.x, out[(i/n)*p+v.at[i%n]])
	}
	solveSmall(v.m, v.pivot, v.x)
	for j := range k {
		c := v.y[lo+j/n][j%n] * v.x[j]
		if c == 0 {
			continue
		}
		column := (j/n)*p + v.at[j%n]
		for i := range out {
			out[i] -= z[i*stride+column] * c
		}
	}
}

// any reports which sequences of the currents are not empty.
func (v *Variant) any() (some [3]bool) {
	p := len(v.r.nodes)
	for i, c := range v.current {
		if c != 0 {
			some[i/p] = true
		}
	}
	return some
}

// Fundamental solves order 1 as System.Fundamental does, on the ports.
//
// Errors: *WeakError, *RefactorError, cancellation.
func (v *Variant) Fundamental(ctx context.Context) error {
	r, s, p := v.r, v.r.sys, len(v.r.nodes)
	v.drawn = make(map[ElementID][3]complex128, len(r.drawing))
	v.admittances(1)
	var smalls [3][]complex128
	var pivots [3][]int
	for q := range smalls {
		if len(v.at) > 0 && (q != 0 || v.zero) {
			v.m, v.pivot = nil, nil
			if !v.small(q, q+1, r.z[q][1]) {
				return &RefactorError{1}
			}
			smalls[q], pivots[q] = v.m, v.pivot
		}
	}
	last := make([]complex128, 3*p)
	clear(v.v[1])
	weakest := 0
	for v.rounds = 0; v.rounds <= 300; v.rounds++ {
		if err := ctx.Err(); err != nil {
			return err
		}
		clear(v.current)
		v.emfs(1)
		for _, id := range r.drawing {
			if v.rounds == 0 {
				break // the first round is the network without loads
			}
			k := int(s.place[id].n0)
			load, other := v.loads[id]
			if !other {
				load = s.net.elements[id].(Drawing)
			}
			i := load.draw(v.phaseAt(1, r.port[k]))
			v.drawn[id] = i
			for q, c := range phasor.ToSequence(i) {
				if (s.floating[q] != nil && s.floating[q][k]) || cmplxAbs1(c) < 1e-14*cmplxAbs1(i[0]) {
					continue
				}
				v.current[q*p+r.port[k]] -= s.turned(k, mirror(phasor.Sequence(q)), c)
			}
		}
		copy(last, v.v[1])
		v.carries[1] = v.any()
		for q, some := range v.carries[1] {
			if !some {
				clear(v.v[1][q*p : q*p+p])
				continue
			}
			v.multiply(1, q, q+1, r.z[q][1])
			if smalls[q] != nil {
				v.m, v.pivot = smalls[q], pivots[q]
				v.correct(1, q, q+1, r.z[q][1])
			}
		}
		worst := 0.0
		for i, x := range v.v[1] {
			k := r.nodes[i%p]
			if d := cmplxAbs1(x-last[i]) / s.scale[k]; d > worst || math.IsNaN(d) {
				worst, weakest = d, k
			}
		}
		if math.IsNaN(worst) || worst > 1e6 {
			break
		}
		if worst < 1e-13 && v.rounds > 0 {
			return v.sound()
		}
	}
	return &WeakError{Bus: s.busName(weakest)}
}

// sound is System.sound for the ports.
func (v *Variant) sound() error {
	p := len(v.r.nodes)
	for i, k := range v.r.nodes {
		if cmplx.Abs(v.v[1][int(phasor.Positive)*p+i]) < 0.4*v.r.sys.scale[k] {
			return &WeakError{Bus: v.r.sys.busName(k)}
		}
	}
	return nil
}

// Harmonics solves orders 2 and above for the given currents, on buses that
// are ports or have no supply, after Fundamental.
//
// Errors: *PathError, *RefactorError, cancellation.
func (v *Variant) Harmonics(ctx context.Context, injections []Injection) error {
	r, s, p := v.r, v.r.sys, len(v.r.nodes)
	for h := 2; h <= r.order; h++ {
		if err := ctx.Err(); err != nil {
			return err
		}
		clear(v.current)
		for i := range injections {
			in := &injections[i]
			k := s.node[in.Bus]
			if !s.live[k] {
				continue
			}
			if r.port[k] < 0 {
				return fmt.Errorf("%s: its bus is no port of the reduced network", in.Name)
			}
			phase := [3]complex128{in.Current[0].At(h), in.Current[1].At(h), in.Current[2].At(h)}
			if phase == ([3]complex128{}) {
				continue
			}
			for q, c := range phasor.ToSequence(phase) {
				if cmplxAbs1(c) > 1e-12 {
					if s.floating[q] != nil && s.floating[q][k] {
						return &PathError{Load: in.Name, Bus: s.busName(k), Sequence: phasor.Sequence(q), Order: h}
					}
					v.current[q*p+r.port[k]] -= s.turned(k, mirror(phasor.Sequence(q)), c)
				}
			}
		}
		v.emfs(h)
		if err := v.solve(h); err != nil {
			return err
		}
	}
	return nil
}

// solve solves one order for the currents that are set.
func (v *Variant) solve(h int) error {
	r, p := v.r, len(v.r.nodes)
	some := v.any()
	clear(v.v[h])
	v.carries[h] = some
	if some == ([3]bool{}) {
		return nil
	}
	if len(v.at) > 0 {
		v.admittances(h)
	}
	if r.coupled != nil {
		v.carries[h] = [3]bool{true, true, true}
		v.multiply(h, 0, 3, r.coupled[h])
		drawn := append([]complex128(nil), v.current...)
		if len(v.at) > 0 {
			if !v.small(0, 3, r.coupled[h]) {
				return &RefactorError{h}
			}
			v.correct(h, 0, 3, r.coupled[h])
			for j, x := range v.x { // what the added shunts take
				n := len(v.at)
				drawn[(j/n)*p+v.at[j%n]] -= v.y[j/n][j%n] * x
			}
		}
		for i := range r.shunts {
			var e complex128
			for c, d := range drawn {
				if d != 0 {
					e += r.across[h][i*3*p+c] * d
				}
			}
			v.across[i][h] = e
		}
		return v.fits(h)
	}
	for q := range some {
		if !some[q] {
			continue
		}
		v.multiply(h, q, q+1, r.z[q][h])
		if len(v.at) > 0 && (q != 0 || v.zero) {
			if !v.small(q, q+1, r.z[q][h]) {
				return &RefactorError{h}
			}
			v.correct(h, q, q+1, r.z[q][h])
		}
	}
	return v.fits(h)
}

// fits refuses voltages that only an undamped resonance makes.
func (v *Variant) fits(h int) error {
	p := len(v.r.nodes)
	for i, x := range v.v[h] {
		k := v.r.nodes[i%p]
		if a := cmplxAbs1(x); !(a <= 100*v.r.sys.scale[k]) {
			return &PathError{Bus: v.r.sys.busName(k), Sequence: phasor.Sequence(i / p), Order: h}
		}
	}
	return nil
}

func (v *Variant) phaseAt(h, port int) [3]complex128 {
	p := len(v.r.nodes)
	var s [3]complex128
	for q := range s {
		s[q] = v.r.sys.turned(v.r.nodes[port], phasor.Sequence(q), v.v[h][q*p+port])
	}
	return phasor.ToPhase(s)
}

// Voltage returns the phase voltages of a port at order 1.
func (v *Variant) Voltage(b BusID) [3]complex128 {
	if p := v.r.port[v.r.sys.node[b]]; p >= 0 {
		return v.phaseAt(1, p)
	}
	return [3]complex128{}
}

// Current returns what a load draws from each phase at order 1.
func (v *Variant) Current(e ElementID) [3]complex128 { return v.drawn[e] }

// BusVoltage returns the phase-to-neutral and sequence voltages of a port by
// order; they are zero for a bus without a supply.
func (v *Variant) BusVoltage(b BusID) (phase, seq [3]phasor.Spectrum) {
	phase, seq = three(v.r.order), three(v.r.order)
	k := v.r.sys.node[b]
	port, p := v.r.port[k], len(v.r.nodes)
	if port < 0 {
		return phase, seq
	}
	for h := 1; h <= v.r.order; h++ {
		var s [3]complex128
		for q, some := range v.carries[h] {
			if some {
				s[q] = v.r.sys.turned(k, phasor.Sequence(q), v.v[h][q*p+port])
				seq[q][h] = s[q]
			}
		}
		if s != [3]complex128{} {
			for i, x := range phasor.ToPhase(s) {
				phase[i][h] = x
			}
		}
	}
	return phase, seq
}

// Ends returns the current into an element of the network at each of its ends,
// all of which must be ports or without a supply.
func (v *Variant) Ends(id ElementID) []End {
	s, p := v.r.sys, len(v.r.nodes)
	e := s.net.elements[id]
	bus := e.ends()
	out := make([]End, len(bus))
	ports := make([]int, len(bus))
	live := true
	for n := range out {
		out[n] = End{bus[n], three(v.r.order)}
		ports[n] = v.r.port[s.node[bus[n]]]
		live = live && ports[n] >= 0
	}
	if !live {
		return out
	}
	sup, _ := e.(*Supply)
	for i, own := range s.supplies {
		if own == sup {
			sup = v.supplies[i]
		}
	}
	for h := 1; h <= v.r.order; h++ {
		var seq [2][3]complex128
		for q, some := range v.carries[h] {
			if !some {
				continue
			}
			y := v.r.prim[q][h][id]
			v0 := v.v[h][q*p+ports[0]]
			i := y.y00 * v0
			if sup != nil {
				i = (v0 - sup.emf(h, phasor.Sequence(q))) * sup.admittance(float64(h), phasor.Sequence(q))
			}
			if len(ports) == 2 {
				v1 := v.v[h][q*p+ports[1]]
				i += y.y01 * v1
				seq[1][q] = s.turned(v.r.nodes[ports[1]], phasor.Sequence(q), y.y01*v0+y.y11*v1)
			}
			seq[0][q] = s.turned(v.r.nodes[ports[0]], phasor.Sequence(q), i)
		}
		for n := range out {
			if seq[n] != [3]complex128{} {
				for i, x := range phasor.ToPhase(seq[n]) {
					out[n].Phase[i][h] = x
				}
			}
		}
	}
	if d, ok := v.drawn[id]; ok {
		for i := range d {
			out[0].Phase[i][1] += d[i]
		}
	}
	for i, shunt := range v.r.shunts {
		if shunt == id {
			x := e.(*PhaseShunt)
			for h := 2; h <= v.r.order; h++ {
				for n, c := range x.through(v.across[i][h] * x.Branch.Admittance(float64(h))) {
					out[0].Phase[n][h] += c
				}
			}
		}
	}
	return out
}
