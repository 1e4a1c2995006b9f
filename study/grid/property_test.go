package grid

import (
	"context"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"quietbus/study/phasor"
)

// shuffled is the same network with its buses and elements in another order;
// to tells where each bus went.
func shuffled(n *Network, seed uint64) (m *Network, to []BusID) {
	r := rand.New(rand.NewPCG(seed, 1))
	m, to = New(n.f1), make([]BusID, len(n.names))
	for _, b := range r.Perm(len(n.names)) {
		to[b] = m.AddBus(n.names[b], n.nominal[b])
	}
	for _, i := range r.Perm(len(n.elements)) {
		switch e := n.elements[i].(type) {
		case *Supply:
			c := *e
			c.Bus = to[e.Bus]
			m.Add(&c)
		case *Transformer:
			c := *e
			c.HV, c.LV = to[e.HV], to[e.LV]
			m.Add(&c)
		case *Cable:
			c := *e
			c.From, c.To = to[e.From], to[e.To]
			m.Add(&c)
		case *Load:
			c := *e
			c.Bus = to[e.Bus]
			m.Add(&c)
		case *Shunt:
			c := *e
			c.Bus = to[e.Bus]
			m.Add(&c)
		case *PhaseShunt:
			c := *e
			c.Bus = to[e.Bus]
			m.Add(&c)
		default:
			panic("an element that this test does not know")
		}
	}
	return m, to
}

// The numbering of buses and elements means nothing.
func TestPermutation(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, in := random(t, true)
		m, to := shuffled(n, rapid.Uint64().Draw(t, "seed"))
		moved := make([]Injection, len(in))
		for i, x := range in {
			x.Bus = to[x.Bus]
			moved[len(in)-1-i] = x
		}
		solve := func(n *Network, in []Injection) *Solution {
			s := compiled(t, n)
			base, err := s.Fundamental(context.Background())
			if err != nil {
				t.Skip(err)
			}
			sol, err := s.Harmonics(context.Background(), base, 13, in)
			if err != nil {
				t.Skip(err)
			}
			return sol
		}
		a, b := solve(n, in), solve(m, moved)
		for _, bus := range buses {
			x, _ := a.BusVoltage(bus)
			y, _ := b.BusVoltage(to[bus])
			same(t, x, y, n.nominal[bus])
		}
	})
}

// The voltage at one bus for a current at another is the same the other way
// round, in size; the angle turns by the vector groups between them, forth and
// back.
func TestReciprocity(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, _ := random(t, false)
		s := compiled(t, n)
		a, b := rapid.SampledFrom(buses).Draw(t, "a"), rapid.SampledFrom(buses).Draw(t, "b")
		q := rapid.SampledFrom([]phasor.Sequence{phasor.Positive, phasor.Negative, phasor.Zero}).Draw(t, "sequence")
		h := rapid.Float64Range(0.1, 100).Draw(t, "order")
		there, err1 := s.NewScanner(a, q).Transfer(h, b)
		back, err2 := s.NewScanner(b, q).Transfer(h, a)
		if (err1 == nil) != (err2 == nil) {
			t.Fatal(err1, err2)
		}
		if err1 != nil {
			t.Skip(err1)
		}
		turn := 2 * (s.shift[s.node[b]] - s.shift[s.node[a]])
		if q == phasor.Positive {
			turn = -turn
		}
		if q == phasor.Zero {
			turn = 0
		}
		if want := back * cmplx.Rect(1, turn); cmplx.Abs(there-want) > 1e-9*cmplx.Abs(there) {
			t.Fatalf("%v there, %v back", there, want)
		}
	})
}

// Two cables in series are one of twice the length, and two in parallel one of
// half, at both orders at which capacitance counts and does not (an identity of
// impedances; the cables have no capacitance, the bank at the end has).
func TestSeriesParallel(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		r, x := rapid.Float64Range(1e-4, 0.1).Draw(t, "r"), rapid.Float64Range(1e-4, 0.1).Draw(t, "x")
		count := rapid.IntRange(1, 6).Draw(t, "count")
		h := rapid.Float64Range(0.1, 100).Draw(t, "order")
		series := rapid.Bool().Draw(t, "series")
		network := func(build func(n *Network, from, to BusID)) complex128 {
			n := New(50)
			from, to := n.AddBus("from", 400), n.AddBus("to", 400)
			n.Add(&Supply{Name: "s", Bus: from, R: 0.003, X: 0.02, R0: 0.003, X0: 0.02, EMF: 230})
			n.Add(&Shunt{Name: "k", Bus: to, Branch: capacitor{1.3}, Zero: true})
			build(n, from, to)
			z, err := compiled(t, n).NewScanner(to, phasor.Zero).At(h)
			if err != nil {
				t.Skip(err)
			}
			return z
		}
		many := network(func(n *Network, from, to BusID) {
			at := from
			for i := range count {
				next := to
				if series && i+1 < count {
					next = n.AddBus("between", 400)
				}
				n.Add(&Cable{Name: "c", From: at, To: next, R: r, X: x, R0: r, X0: x})
				if series {
					at = next
				}
			}
		})
		k := float64(count)
		if !series {
			k = 1 / k
		}
		one := network(func(n *Network, from, to BusID) {
			n.Add(&Cable{Name: "c", From: from, To: to, R: k * r, X: k * x, R0: k * r, X0: k * x})
		})
		if cmplx.Abs(many-one) > 1e-9*cmplx.Abs(one) {
			t.Fatalf("%d of them: %v, one: %v", count, many, one)
		}
	})
}

// FuzzAssembly builds networks out of raw bytes: whatever they say, compiling,
// solving and looking into them ends with finite numbers or an error.
func FuzzAssembly(f *testing.F) {
	f.Add([]byte{3, 0, 1, 10, 20, 1, 0, 1, 5, 5, 2, 1, 200, 100})
	f.Add([]byte{2, 0, 0, 1, 1, 1, 0, 1, 0, 0, 3, 1, 255, 255, 4, 1, 0, 0})
	f.Add([]byte{4, 1, 0, 3, 0, 0, 0, 0, 1, 1, 1, 1, 2, 2, 2})
	f.Fuzz(func(t *testing.T, data []byte) {
		next := func() int {
			if len(data) == 0 {
				return 0
			}
			v := data[0]
			data = data[1:]
			return int(v)
		}
		size := func() float64 { // 1e-8 to 1e5, zero, and rarely negative
			switch v := next(); {
			case v == 0:
				return 0
			case v == 1:
				return -1
			default:
				return math.Pow(10, float64(v-160)/20)
			}
		}
		n := New(50)
		count := 1 + next()%8
		for range count {
			n.AddBus("b", 400*size())
		}
		bus := func() BusID { return BusID(next() % count) }
		for len(data) > 0 && len(n.elements) < 40 {
			switch next() % 8 {
			case 0:
				n.Add(&Supply{Name: "s", Bus: bus(), R: size(), X: size(), R0: size(), X0: size(), EMF: complex(size(), 0)})
			case 1:
				n.Add(&Cable{Name: "c", From: bus(), To: bus(), R: size(), X: size(), C: size() * 1e-6, R0: size(), X0: size(), Exact: next()%2 == 0})
			case 2:
				g, err := ParseVectorGroup(groups[next()%len(groups)])
				if err != nil {
					t.Fatal(err)
				}
				n.Add(&Transformer{Name: "t", HV: bus(), LV: bus(), Ratio: size(), R: size(), X: size(), Group: g, LVN: complex(size(), size())})
			case 3:
				n.Add(&Shunt{Name: "k", Bus: bus(), Branch: capacitor{size()}, Zero: next()%2 == 0})
			case 4:
				n.Add(&PhaseShunt{Name: "p", Bus: bus(), Weight: [3]float64{1, -1, 0}, Branch: capacitor{size()}})
			case 5:
				n.Add(&PowerLoad{Name: "d", Bus: bus(), P: size(), Q: size()})
			case 6:
				n.Add(&Motor{Name: "m", Bus: bus(), P: size(), R: size(), X: size()})
			case 7:
				n.Join(bus(), bus())
			}
		}
		s, err := n.Compile()
		if err != nil {
			return
		}
		finite := func(what string, v complex128) {
			if cmplx.IsNaN(v) || cmplx.IsInf(v) {
				t.Fatalf("%s: %v", what, v)
			}
		}
		ctx := context.Background()
		for q := phasor.Zero; q <= phasor.Negative; q++ {
			if z, err := s.NewSurvey(q).At(7, nil); err == nil {
				for _, v := range z {
					finite("survey", v)
				}
			}
		}
		base, err := s.Fundamental(ctx)
		if err != nil {
			return
		}
		c := phasor.New(7)
		c[5], c[7] = 10, complex(0, 4)
		sol, err := s.Harmonics(ctx, base, 7, []Injection{{Name: "i", Bus: bus(), Current: [3]phasor.Spectrum{c, nil, nil}}})
		if err != nil {
			return
		}
		for b := range n.names {
			phase, _ := sol.BusVoltage(BusID(b))
			for p := range phase {
				for _, v := range phase[p] {
					finite("voltage", v)
				}
			}
		}
	})
}
