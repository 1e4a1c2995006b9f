package grid

import (
	"context"
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"quietbus/study/phasor"
)

// assembled returns the per-unit matrix of one sequence as gonum's real form
// [[Re, -Im], [Im, Re]], in node order.
func assembled(s *System, h float64, q phasor.Sequence) *mat.Dense {
	n := s.nodes
	a := mat.NewDense(2*n, 2*n, nil)
	add := func(i, j int, y complex128) {
		a.Set(i, j, a.At(i, j)+real(y))
		a.Set(n+i, n+j, a.At(n+i, n+j)+real(y))
		a.Set(i, n+j, a.At(i, n+j)-imag(y))
		a.Set(n+i, j, a.At(n+i, j)+imag(y))
	}
	for id, e := range s.net.elements {
		p := &s.place[id]
		if !p.live {
			continue
		}
		y := e.admit(s.net.f1, h, q)
		add(int(p.n0), int(p.n0), y.y00*complex(p.s00, 0))
		if p.low >= 0 {
			add(int(p.n1), int(p.n1), y.y11*complex(p.s11, 0))
			add(int(p.n0), int(p.n1), y.y01*complex(p.s01, 0))
			add(int(p.n1), int(p.n0), y.y01*complex(p.s01, 0))
		}
	}
	for k := range n {
		if s.pinned(k, q) {
			add(k, k, 1)
		}
	}
	return a
}

// The survey of all buses gives what looking into each bus gives, and what
// gonum's dense inverse gives.
func TestSurvey(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, _ := random(t, false)
		s, err := n.Compile()
		if err != nil {
			t.Skip(err)
		}
		q := rapid.SampledFrom([]phasor.Sequence{phasor.Positive, phasor.Negative, phasor.Zero}).Draw(t, "sequence")
		h := rapid.Float64Range(0.5, 40).Draw(t, "order")
		z, err := s.NewSurvey(q).At(h, nil)
		if err != nil {
			t.Skip(err)
		}
		var inverse mat.Dense
		if err := inverse.Inverse(assembled(s, h, q)); err != nil {
			t.Skip(err)
		}
		for _, b := range buses {
			k := s.node[b]
			if s.pinned(k, q) {
				if z[b] != 0 {
					t.Fatalf("%d takes no part but shows %v", b, z[b])
				}
				continue
			}
			one, err := s.NewScanner(b, q).At(h)
			if err != nil {
				t.Fatal(err)
			}
			dense := complex(inverse.At(k, k), inverse.At(s.nodes+k, k)) * complex(s.scale[k]*s.scale[k], 0)
			if cmplx.Abs(z[b]-one) > 1e-9*cmplx.Abs(one) || cmplx.Abs(z[b]-dense) > 1e-8*cmplx.Abs(dense) {
				t.Fatalf("bus %d: survey %v, alone %v, dense %v", b, z[b], one, dense)
			}
		}
	})
}

// A mode's eigenvalue is the smallest one that gonum finds for the whole
// matrix, and it is a maximum of 1/|eigenvalue| along the order.
func TestModesAgainstDenseEigenvalues(t *testing.T) {
	found, least := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		n, _, _ := random(t, false)
		s, err := n.Compile()
		if err != nil {
			t.Skip(err)
		}
		modes, err := s.Modes(context.Background(), phasor.Positive, 2, 40)
		if err != nil {
			t.Skip(err)
		}
		// near returns the distance to gonum's nearest eigenvalue, and whether
		// that is the smallest
		near := func(h float64, value complex128) (float64, bool) {
			var e mat.Eigen
			if !e.Factorize(assembled(s, h, phasor.Positive), mat.EigenNone) {
				t.Skip("no eigenvalues")
			}
			distance, smallest := math.Inf(1), math.Inf(1)
			for _, v := range e.Values(nil) {
				distance, smallest = min(distance, cmplx.Abs(v-value)), min(smallest, cmplx.Abs(v))
			}
			return distance, cmplx.Abs(value) < 1.001*smallest
		}
		for i, m := range modes {
			if i > 0 && m.Order < modes[i-1].Order {
				t.Fatal("not rising")
			}
			found++
			it := s.newIteration(phasor.Positive)
			for k, x := range m.shape {
				it.x[s.pat.rank[k]] = x
			}
			value, ok := it.at(m.Order)
			if !ok {
				t.Fatal("does not settle")
			}
			// the eigenvector satisfies its equation, by the dense matrix
			a := assembled(s, m.Order, phasor.Positive)
			x := mat.NewVecDense(2*s.nodes, nil)
			for k, v := range m.shape {
				x.SetVec(k, real(v))
				x.SetVec(s.nodes+k, imag(v))
			}
			var ax mat.VecDense
			ax.MulVec(a, x)
			var off, size float64
			for k, v := range m.shape {
				got, want := complex(ax.AtVec(k), ax.AtVec(s.nodes+k)), v*value
				off, size = off+cmplx.Abs(got-want), size+cmplx.Abs(want)
			}
			if off > 1e-6*size && off > 1e-11*mat.Norm(a, 1) {
				t.Fatalf("mode at %.4f: Y x differs from lambda x by %.2g", m.Order, off/size)
			}
			// and it is one of gonum's eigenvalues, at most orders the smallest
			nearest, first := near(m.Order, value)
			if nearest > 1e-6*cmplx.Abs(value) {
				t.Fatalf("mode at %.4f: eigenvalue %v is none of gonum's", m.Order, value)
			}
			if first {
				least++
			}
		}
	})
	if found == 0 || least < found/2 {
		t.Errorf("%d modes, %d of them of the smallest eigenvalue", found, least)
	}
}

// Resonance order of a bank on a stiff short circuit, h = sqrt(Ssc / Qc)
// (common practice, no source; IEEE Std 519 and every handbook use it), and
// two banks far apart: two modes, each of its own bank and transformer.
func TestModesNameTheirMakers(t *testing.T) {
	n := New(50)
	g, _ := ParseVectorGroup("Dyn11")
	hv, a, b := n.AddBus("hv", 20000), n.AddBus("a", 400), n.AddBus("b", 400)
	n.Add(&Supply{Name: "s", Bus: hv, R: 0.001, X: 0.01, EMF: 11547})
	z := func(kva float64) float64 { return 0.06 * 0.4 * 0.4 / kva * 1000 }
	ta := n.Add(&Transformer{Name: "ta", HV: hv, LV: a, Ratio: 50, R: z(1000) / 40, X: z(1000), Group: g})
	tb := n.Add(&Transformer{Name: "tb", HV: hv, LV: b, Ratio: 50, R: z(400) / 40, X: z(400), Group: g})
	ca := n.Add(&Shunt{Name: "ca", Bus: a, Branch: capacitor{0.4 * 0.4 / 0.400}}) // 400 kvar
	cb := n.Add(&Shunt{Name: "cb", Bus: b, Branch: capacitor{0.4 * 0.4 / 0.050}}) // 50 kvar
	s, err := n.Compile()
	if err != nil {
		t.Fatal(err)
	}
	modes, err := s.Modes(context.Background(), phasor.Positive, 2, 40)
	if err != nil || len(modes) != 2 {
		t.Fatal(err, modes)
	}
	for i, want := range []struct {
		order float64
		bus   BusID
		l, c  ElementID
	}{{math.Sqrt(1 / 0.06 / 0.4), a, ta, ca}, {math.Sqrt(0.4 / 0.06 / 0.05), b, tb, cb}} {
		m := modes[i]
		if math.Abs(m.Order-want.order) > 0.01*want.order {
			t.Errorf("order %.3f, want %.3f", m.Order, want.order)
		}
		if m.Buses[0].Bus != want.bus || m.Buses[0].Share < 0.95 {
			t.Errorf("buses %v", m.Buses)
		}
		got := map[ElementID]float64{}
		for _, p := range m.Elements {
			got[p.Element] = p.Share
		}
		if got[want.l] < 0.9 || got[want.c] > -0.9 {
			t.Errorf("elements %v", m.Elements)
		}
		// X/R is 40 at order 1 and the resistance constant
		if q := 40 * want.order; math.Abs(m.Q-q) > 0.03*q {
			t.Errorf("Q %.1f, want %.1f", m.Q, q)
		}
	}
	if modes[0].Alike(&modes[0]) < 0.999 || modes[0].Alike(&modes[1]) > 0.2 {
		t.Error("shapes")
	}
}

// BenchmarkSurvey30 is the driving-point impedance of 30 buses at 2,500
// frequencies.
func BenchmarkSurvey30(b *testing.B) {
	s, _ := radial(30)
	v := s.NewSurvey(phasor.Positive)
	var z []complex128
	var err error
	b.ReportAllocs()
	for b.Loop() {
		for i := range 2500 {
			if z, err = v.At(1+float64(i)*0.04, z); err != nil {
				b.Fatal(err)
			}
		}
	}
}

func BenchmarkModes30(b *testing.B) {
	s, _ := radial(30)
	for b.Loop() {
		if _, err := s.Modes(context.Background(), phasor.Positive, 1, 50); err != nil {
			b.Fatal(err)
		}
	}
}
