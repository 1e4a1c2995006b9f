package converter

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"quietbus/study/phasor"
)

// brute is a second road to the steady state that shares nothing with the
// first: nodal analysis with a small fixed step (backward Euler), valves as
// resistors of 0.1 mohm or 1 Mohm whose states are iterated at every step, run
// until the transient has died out.
type brute struct {
	nodes    int // without ground, node 0
	series   []seriesBranch
	caps     []capBranch
	valves   []valveBranch
	loadFrom int // current source out of this node ...
	loadTo   int
	loadA    float64

	dt      float64
	inverse map[uint64][]float64
	v, rhs  []float64
	state   uint64
}

type seriesBranch struct {
	from, to int
	r, l     float64
	emf      func(t float64) float64
	table    []float64 // emf at the steps of a period
	i        float64
}

type capBranch struct {
	from, to int
	c, v     float64
}

type valveBranch struct {
	from, to int
	gate     func(t float64) bool // nil for a diode
}

const bruteOn, bruteOff = 1e4, 1e-6 // S

// stamp returns the inverse of the nodal matrix for a state of the valves.
func (b *brute) stamp(state uint64) []float64 {
	if m, ok := b.inverse[state]; ok {
		return m
	}
	n := b.nodes
	a := make([]float64, n*2*n)
	add := func(from, to int, g float64) {
		if from > 0 {
			a[(from-1)*2*n+from-1] += g
		}
		if to > 0 {
			a[(to-1)*2*n+to-1] += g
		}
		if from > 0 && to > 0 {
			a[(from-1)*2*n+to-1] -= g
			a[(to-1)*2*n+from-1] -= g
		}
	}
	for _, s := range b.series {
		add(s.from, s.to, 1/(s.r+s.l/b.dt))
	}
	for _, c := range b.caps {
		add(c.from, c.to, c.c/b.dt)
	}
	for i, d := range b.valves {
		g := bruteOff
		if state>>i&1 != 0 {
			g = bruteOn
		}
		add(d.from, d.to, g)
	}
	for i := 0; i < n; i++ {
		a[i*2*n+n+i] = 1
	}
	for k := 0; k < n; k++ { // Gauss-Jordan; the matrix is positive definite
		p := a[k*2*n+k]
		for j := 0; j < 2*n; j++ {
			a[k*2*n+j] /= p
		}
		for i := 0; i < n; i++ {
			if f := a[i*2*n+k]; i != k && f != 0 {
				for j := 0; j < 2*n; j++ {
					a[i*2*n+j] -= f * a[k*2*n+j]
				}
			}
		}
	}
	out := make([]float64, n*n)
	for i := 0; i < n; i++ {
		copy(out[i*n:(i+1)*n], a[i*2*n+n:(i+1)*2*n])
	}
	b.inverse[state] = out
	return out
}

func (b *brute) step(k int) {
	n, t := b.nodes, float64(k)*b.dt
	rhs := b.rhs
	clear(rhs)
	inject := func(from, to int, i float64) { // current i flows from -> to through the element
		if from > 0 {
			rhs[from-1] -= i
		}
		if to > 0 {
			rhs[to-1] += i
		}
	}
	for i := range b.series {
		s := &b.series[i]
		e := 0.0
		if s.table != nil {
			e = s.table[k%len(s.table)]
		}
		inject(s.from, s.to, (e+s.l/b.dt*s.i)/(s.r+s.l/b.dt))
	}
	for _, c := range b.caps {
		inject(c.from, c.to, -c.c/b.dt*c.v)
	}
	inject(b.loadFrom, b.loadTo, b.loadA)
	at := func(k int) float64 {
		if k == 0 {
			return 0
		}
		return b.v[k-1]
	}
	for try := 0; try < 30; try++ {
		m := b.stamp(b.state)
		for i := 0; i < n; i++ {
			var sum float64
			for j, g := range m[i*n : (i+1)*n] {
				sum += g * rhs[j]
			}
			b.v[i] = sum
		}
		next := b.state
		for i, d := range b.valves {
			u := at(d.from) - at(d.to)
			switch on := b.state>>i&1 != 0; {
			case on && u < 0:
				next &^= 1 << i
			case !on && u > 0 && (d.gate == nil || d.gate(t)):
				next |= 1 << i
			}
		}
		if next == b.state {
			break
		}
		b.state = next
	}
	for i := range b.series {
		s := &b.series[i]
		e := 0.0
		if s.table != nil {
			e = s.table[k%len(s.table)]
		}
		s.i = (e + s.l/b.dt*s.i + at(s.from) - at(s.to)) / (s.r + s.l/b.dt)
	}
	for i := range b.caps {
		b.caps[i].v = at(b.caps[i].from) - at(b.caps[i].to)
	}
}

// settle runs periods of steps each and returns the spectra of the first three
// (or fewer) series branches over the last one. A power P > 0 draws P over the
// mean voltage of the first capacitor in the period before.
func (b *brute) settle(f, power float64, periods, steps, order int) [3]phasor.Spectrum {
	b.dt = 1 / f / float64(steps)
	b.inverse = map[uint64][]float64{}
	b.v, b.rhs = make([]float64, b.nodes), make([]float64, b.nodes)
	for i := range b.series {
		if s := &b.series[i]; s.emf != nil {
			s.table = make([]float64, steps)
			for k := range s.table {
				s.table[k] = s.emf(float64(k) * b.dt)
			}
		}
	}
	var out [3]phasor.Spectrum
	for q := range out {
		out[q] = phasor.New(order)
	}
	for p := 0; p < periods; p++ {
		var mean float64
		if power > 0 && p == 0 {
			b.loadA = power / b.caps[0].v
		}
		for k := 1; k <= steps; k++ {
			b.step(k)
			if len(b.caps) > 0 {
				mean += b.caps[0].v / float64(steps)
			}
			if p == periods-1 {
				for q := 0; q < min(3, len(b.series)); q++ {
					for h := 1; h <= order; h++ {
						out[q][h] += complex(b.series[q].i*math.Sqrt2/float64(steps), 0) * cmplx.Rect(1, -2*math.Pi*float64(h*k%steps)/float64(steps))
					}
				}
			}
		}
		if power > 0 {
			b.loadA = power / mean
		}
	}
	return out
}

// source returns EMFs of the terminal for the brute network.
func source(t Terminal, q int) func(float64) float64 {
	s := t.Voltage[q]
	return func(x float64) float64 {
		var v float64
		for h, z := range s {
			if z != 0 {
				v += math.Sqrt2 * (real(z)*math.Cos(float64(h)*t.omega()*x) - imag(z)*math.Sin(float64(h)*t.omega()*x))
			}
		}
		return v
	}
}

// bridgeOf builds the brute network of a three-phase bridge: nodes 1..3 its
// legs, 4 and 5 the rails, 6 behind the choke.
func bridgeOf(n Nameplate, t Terminal, startV float64, gates func(leg int, lower bool) func(float64) bool) *brute {
	b := &brute{nodes: 6}
	for q := 0; q < 3; q++ {
		b.series = append(b.series, seriesBranch{from: 0, to: q + 1, r: t.SourceR + n.ReactorOhm, l: t.SourceL + n.ReactorH, emf: source(t, q)})
	}
	for q := 0; q < 3; q++ {
		upper, lower := valveBranch{from: q + 1, to: 4}, valveBranch{from: 5, to: q + 1}
		if gates != nil {
			upper.gate, lower.gate = gates(q, false), gates(q, true)
		}
		b.valves = append(b.valves, upper, lower)
	}
	b.series = append(b.series, seriesBranch{from: 4, to: 6, r: n.ChokeOhm + 1e-5, l: n.ChokeH})
	if n.CapacitorF > 0 {
		b.caps = []capBranch{{from: 6, to: 5, c: n.CapacitorF, v: startV}}
		b.loadFrom, b.loadTo = 6, 5
	} else {
		b.series = append(b.series, seriesBranch{from: 6, to: 5, r: n.LoadOhm})
	}
	return b
}

func compare(t *testing.T, name string, got, want [3]phasor.Spectrum, order int, tolerance float64) {
	t.Helper()
	var worst float64
	first := cmplx.Abs(want[0][1])
	at := 0
	for q := range got {
		for h := 1; h <= order; h++ {
			if d := cmplx.Abs(got[q].At(h)-want[q].At(h)) / first; d > worst {
				worst, at = d, h
			}
		}
	}
	if worst > tolerance {
		t.Errorf("%s: order %d off by %.3f %% of the fundamental (%.3f A)", name, at, 100*worst, first)
	} else {
		t.Logf("%s: within %.3f %% of the fundamental to order %d", name, 100*worst, order)
	}
}

// Second road: fine-step integration, within 0.5 % of the fundamental to order
// 25, over supply strength, ac reactor and dc choke.
func TestBridgeAgainstFineSteps(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates many periods")
	}
	w := 2 * math.Pi * 50
	base := 400.0 * 400 / 100e3
	for _, c := range []struct{ ratio, reactor, choke float64 }{
		{20, 0, 0}, {20, 5, 3}, {50, 3, 0}, {50, 0, 3}, {120, 1, 0}, {250, 0, 0}, {250, 5, 0}, {250, 0, 1},
	} {
		n := Nameplate{Kind: KindDiodeBridge, VoltageV: 400, PowerW: 100e3, CapacitorF: 5e-3, ReactorH: c.reactor / 100 * base / w, ChokeH: c.choke / 100 * base / w}
		x := base / c.ratio
		term := distorted(Balanced(400, 50, 0.3*x, x/w), 0.05, 0.01)
		r := mustSolve(t, n, term, 25)
		b := bridgeOf(n, term, 535, nil)
		want := b.settle(50, n.PowerW, 12, 24000, 25)
		compare(t, fmt.Sprintf("Ssc/S %g, reactor %g %%, choke %g %%", c.ratio, c.reactor, c.choke), r.Current, want, 25, 5e-3)
	}
}

func TestOtherCircuitsAgainstFineSteps(t *testing.T) {
	if testing.Short() {
		t.Skip("integrates many periods")
	}
	w := 2 * math.Pi * 50
	// unbalanced, distorted supply
	term := distorted(Balanced(400, 50, 0.01, 60e-6), 0.05, 0.01)
	term.Voltage = clone(term.Voltage, 50)
	term.Voltage[1][1] *= complex(0.98, 0.01)
	term.Voltage[2][3] = 5

	n := Nameplate{Kind: KindDiodeBridge, VoltageV: 400, PowerW: 100e3, CapacitorF: 5e-3, ReactorH: 150e-6}
	compare(t, "bridge on an unbalanced supply", mustSolve(t, n, term, 25).Current, bridgeOf(n, term, 535, nil).settle(50, n.PowerW, 12, 12000, 25), 25, 5e-3)

	// thyristor bridge on a resistance with a small choke: discontinuous at 75 degrees
	for _, alpha := range []float64{20, 75} {
		n = Nameplate{Kind: KindThyristorBridge, VoltageV: 400, PowerW: 50e3, FiringDeg: alpha, Smoothing: ByChoke, ChokeH: 1e-3, Load: Resistive, LoadOhm: 5, ReactorH: 100e-6}
		v := term.Voltage
		turn := cmplx.Phase(v[0][1] + v[1][1]*cmplx.Rect(1, 2*math.Pi/3) + v[2][1]*cmplx.Rect(1, -2*math.Pi/3))
		gates := func(leg int, lower bool) func(float64) bool {
			on := (alpha-60)*math.Pi/180 + 2*math.Pi/3*float64(leg) - turn
			if lower {
				on += math.Pi
			}
			return func(x float64) bool { return math.Mod(w*x-on+8*math.Pi, 2*math.Pi) < 2*math.Pi/3 }
		}
		r := mustSolve(t, n, term, 25)
		compare(t, fmt.Sprintf("thyristor bridge at %g degrees, %s", alpha, r.Conduction), r.Current, bridgeOf(n, term, 0, gates).settle(50, 0, 8, 12000, 25), 25, 5e-3)
	}

	// single-phase bridge: nodes 1, 2 legs, 3, 4 rails, 5 behind the choke
	for _, choke := range []float64{0, 3e-3} {
		n = Nameplate{Kind: KindSinglePhaseBridge, Connection: PhaseB, VoltageV: 400, PowerW: 2e3, CapacitorF: 1e-3, ChokeH: choke, ReactorH: 500e-6}
		b := &brute{nodes: 5, loadFrom: 5, loadTo: 4, caps: []capBranch{{5, 4, n.CapacitorF, 300}}}
		b.series = []seriesBranch{
			{from: 0, to: 1, r: term.SourceR, l: term.SourceL + n.ReactorH, emf: source(term, 1)},
			{from: 0, to: 2, r: 1e-5}, {from: 3, to: 5, r: 1e-5, l: choke},
		}
		b.valves = []valveBranch{{from: 1, to: 3}, {from: 4, to: 1}, {from: 2, to: 3}, {from: 4, to: 2}}
		want := b.settle(50, n.PowerW, 60, 8000, 25)
		r := mustSolve(t, n, term, 25)
		compare(t, fmt.Sprintf("single-phase bridge, choke %g mH, %s", 1e3*choke, r.Conduction),
			[3]phasor.Spectrum{r.Current[1], r.Current[0], r.Current[2]}, [3]phasor.Spectrum{want[0]}, 25, 5e-3)
	}

	// half-wave with capacitor
	n = Nameplate{Kind: KindHalfWave, Connection: PhaseA, VoltageV: 400, PowerW: 500, CapacitorF: 1e-3, ReactorH: 1e-3}
	b := &brute{nodes: 2, loadFrom: 2, loadTo: 0, caps: []capBranch{{2, 0, n.CapacitorF, 280}}, valves: []valveBranch{{from: 1, to: 2}}}
	b.series = []seriesBranch{{from: 0, to: 1, r: term.SourceR, l: term.SourceL + n.ReactorH, emf: source(term, 0)}}
	compare(t, "half-wave with capacitor", mustSolve(t, n, term, 25).Current, b.settle(50, n.PowerW, 60, 8000, 25), 25, 5e-3)
}
