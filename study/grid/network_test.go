package grid

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"quietbus/study/phasor"
)

var groups = []string{"Dyn11", "Dyn5", "YNd1", "Yyn0", "YNyn6", "Dd0", "Dzn0", "Yzn11", "Yd11", "YNyn0"}

// random draws a radial network with some loops, of one supply, transformers
// of any vector group, cables, loads, shunts and single-phase branches.
func random(t *rapid.T, singlePhase bool) (*Network, []BusID, []Injection) {
	f := func(lo, hi float64, what string) float64 { return rapid.Float64Range(lo, hi).Draw(t, what) }
	n := New(50)
	buses := []BusID{n.AddBus("b0", 11000)}
	volts := []float64{11000}
	x := f(0.2, 2, "xs")
	n.Add(&Supply{Name: "s", Bus: buses[0], R: x / 8, X: x, R0: x / 4, X0: 2 * x, EMF: complex(11000/math.Sqrt(3), 0), Exponent: 0.5,
		Background: []Background{{Order: 5, Voltage: complex(f(0, 80, "bg"), 20), Sequence: phasor.Negative}}})
	count := rapid.IntRange(1, 8).Draw(t, "buses")
	for i := 1; i <= count; i++ {
		from := rapid.IntRange(0, i-1).Draw(t, "from")
		name := fmt.Sprintf("b%d", i)
		if volts[from] == 11000 && rapid.Bool().Draw(t, "transformer") {
			g, err := ParseVectorGroup(rapid.SampledFrom(groups).Draw(t, "group"))
			if err != nil {
				t.Fatal(err)
			}
			b := n.AddBus(name, 400)
			xt := f(0.005, 0.03, "xt")
			n.Add(&Transformer{Name: "t" + name, HV: buses[from], LV: b, Ratio: 27.5 * f(0.95, 1.05, "tap"), R: xt / 6, X: xt, Exponent: 0.6, ZeroRatio: 0.9, Group: g, LVN: complex(f(0, 0.1, "rn"), 0)})
			buses, volts = append(buses, b), append(volts, 400)
		} else {
			b := n.AddBus(name, volts[from])
			k := volts[from] / 400
			n.Add(&Cable{Name: "c" + name, From: buses[from], To: b, R: k * f(0.001, 0.01, "r"), X: k * f(0.001, 0.01, "x"), C: 1e-7, R0: k * 0.02, X0: k * 0.02, C0: 1e-7})
			buses, volts = append(buses, b), append(volts, volts[from])
			if rapid.Bool().Draw(t, "loop") {
				n.Add(&Cable{Name: "p" + name, From: buses[from], To: b, R: k * 0.004, X: k * 0.006, R0: k * 0.02, X0: k * 0.03})
			}
		}
		if rapid.Bool().Draw(t, "load") {
			n.Add(&Load{Name: "l" + name, Bus: buses[i], P: f(1e3, 3e4, "p"), Q: f(0, 1e4, "q"), NominalV: volts[i], AtOrder1: "impedance", Model: rapid.SampledFrom([]string{"series", "parallel", "cigre"}).Draw(t, "model")})
		}
		if rapid.Bool().Draw(t, "bank") {
			n.Add(&Shunt{Name: "k" + name, Bus: buses[i], Branch: capacitor{volts[i] * volts[i] / f(1e4, 1e5, "var")}, Zero: rapid.Bool().Draw(t, "earthed")})
		}
		if singlePhase && rapid.Bool().Draw(t, "single") {
			n.Add(&PhaseShunt{Name: "s" + name, Bus: buses[i], Weight: rapid.SampledFrom([][3]float64{{1, -1, 0}, {0, 1, -1}, {-1, 0, 1}}).Draw(t, "weight"), Branch: capacitor{f(1, 40, "xc")}})
		}
	}
	var in []Injection
	for i := 1; i <= count; i++ {
		if !rapid.Bool().Draw(t, "source") {
			continue
		}
		var c [3]phasor.Spectrum
		for p := range c {
			c[p] = phasor.New(13)
		}
		for _, h := range []int{3, 5, 7, 11} {
			// no zero sequence: whether it has a way back is another matter
			p, m := complex(f(-20, 20, "re"), f(-20, 20, "im")), complex(f(-20, 20, "re"), f(-20, 20, "im"))
			for ph, v := range phasor.ToPhase([3]complex128{0, p, m}) {
				c[ph][h] = v
			}
		}
		in = append(in, Injection{Name: fmt.Sprint("i", i), Bus: buses[i], Current: c})
	}
	return n, buses, in
}

// dense3 solves one order in phase coordinates with every angle in place: a
// 3n x 3n matrix, as a real system of twice the size, by gonum's LU.
func dense3(s *System, h int, in []Injection) []complex128 {
	n := 3 * s.nodes
	y := make([][]complex128, n)
	for i := range y {
		y[i] = make([]complex128, n)
	}
	rhs := make([]complex128, n)
	// phase admittance of a sequence triple between nodes a and b, whose angle
	// differs by turn
	add := func(a, b int, seq [3]complex128) {
		turn := cmplx.Rect(1, s.shift[b]-s.shift[a])
		seq[phasor.Positive] *= turn
		seq[phasor.Negative] *= cmplx.Conj(turn)
		for c := range 3 {
			var unit [3]complex128
			unit[c] = 1
			q := phasor.ToSequence(unit)
			for k := range q {
				q[k] *= seq[k]
			}
			for r, v := range phasor.ToPhase(q) {
				y[3*a+r][3*b+c] += v
			}
		}
	}
	for i, e := range s.net.elements {
		p := &s.place[i]
		if !p.live {
			continue
		}
		var prim [3]primitive
		for q := range prim {
			prim[q] = e.admit(s.net.f1, float64(h), phasor.Sequence(q))
		}
		a, b := int(p.n0), int(p.n1)
		add(a, a, [3]complex128{prim[0].y00, prim[1].y00, prim[2].y00})
		if p.low >= 0 {
			add(b, b, [3]complex128{prim[0].y11, prim[1].y11, prim[2].y11})
			add(a, b, [3]complex128{prim[0].y01, prim[1].y01, prim[2].y01})
			add(b, a, [3]complex128{prim[0].y01, prim[1].y01, prim[2].y01})
		}
		switch x := e.(type) {
		case *PhaseShunt:
			for r, w := range x.Weight {
				for c, u := range x.Weight {
					y[3*a+r][3*a+c] += complex(w*u, 0) * x.Branch.Admittance(float64(h))
				}
			}
		case *Supply:
			var seq [3]complex128
			for q := range seq {
				seq[q] = x.emf(h, phasor.Sequence(q)) * x.admittance(float64(h), phasor.Sequence(q))
			}
			for r, v := range phasor.ToPhase(seq) {
				rhs[3*a+r] += v
			}
		}
	}
	for _, i := range in {
		for p := range i.Current {
			rhs[3*s.node[i.Bus]+p] -= i.Current[p].At(h)
		}
	}
	// a part that nothing holds in the zero sequence: hold it weakly, it carries none
	for k := range s.nodes {
		if !s.live[k] || s.floating[phasor.Zero] != nil && s.floating[phasor.Zero][k] {
			for r := range 3 {
				for c := range 3 {
					y[3*k+r][3*k+c] += 1e-3
				}
			}
		}
		if !s.live[k] {
			for r := range 3 {
				y[3*k+r][3*k+r]++
			}
		}
	}
	a, b := mat.NewDense(2*n, 2*n, nil), mat.NewVecDense(2*n, nil)
	for i := range n {
		b.SetVec(i, real(rhs[i]))
		b.SetVec(n+i, imag(rhs[i]))
		for j := range n {
			a.Set(i, j, real(y[i][j]))
			a.Set(n+i, n+j, real(y[i][j]))
			a.Set(i, n+j, -imag(y[i][j]))
			a.Set(n+i, j, imag(y[i][j]))
		}
	}
	var v mat.VecDense
	if err := v.SolveVec(a, b); err != nil {
		if _, poor := err.(mat.Condition); !poor {
			panic(err)
		}
	}
	out := make([]complex128, n)
	for i := range out {
		out[i] = complex(v.AtVec(i), v.AtVec(n+i))
	}
	return out
}

func compiled(t *rapid.T, n *Network) *System {
	s, err := n.Compile()
	if err != nil {
		if _, ok := err.(*WiringError); ok {
			t.Skip("two ways disagree")
		}
		t.Fatal(err)
	}
	return s
}

// The sparse sequence networks against a dense solution in phase coordinates
// (general-purpose library: gonum mat, LU), balanced and unbalanced sources,
// single-phase branches included.
func TestAgainstThreePhaseDense(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, in := random(t, true)
		s := compiled(t, n)
		base, err := s.Fundamental(context.Background())
		if err != nil {
			t.Skip(err)
		}
		sol, err := s.Harmonics(context.Background(), base, 13, in)
		if err != nil {
			t.Skip(err) // a sharp resonance drawn by chance
		}
		for _, h := range []int{3, 5, 7, 11} {
			want := dense3(s, h, in)
			size := 0.0
			for _, v := range want {
				size = math.Max(size, cmplx.Abs(v))
			}
			for _, b := range buses {
				phase, _ := sol.BusVoltage(b)
				for p := range 3 {
					if d := cmplx.Abs(phase[p][h] - want[3*s.node[b]+p]); d > 1e-9*size+1e-12 {
						t.Fatalf("order %d, bus %d, phase %d: %v, dense %v", h, b, p, phase[p][h], want[3*s.node[b]+p])
					}
				}
			}
		}
	})
}

// Twice the current makes twice the voltage, and two sources add (without
// background).
func TestSuperposition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, in := random(t, true)
		n.elements[0].(*Supply).Background = nil
		if len(in) < 2 {
			t.Skip("one source")
		}
		s := compiled(t, n)
		base, err := s.Fundamental(context.Background())
		if err != nil {
			t.Skip(err)
		}
		solve := func(in []Injection) *Solution {
			sol, err := s.Harmonics(context.Background(), base, 13, in)
			if err != nil {
				t.Skip(err)
			}
			return sol
		}
		all, one, rest := solve(in), solve(in[:1]), solve(in[1:])
		for _, b := range buses {
			x, _ := all.BusVoltage(b)
			y, _ := one.BusVoltage(b)
			z, _ := rest.BusVoltage(b)
			for h := 2; h <= 13; h++ {
				if d := cmplx.Abs(x[0][h] - y[0][h] - z[0][h]); d > 1e-9*(cmplx.Abs(y[0][h])+cmplx.Abs(z[0][h]))+1e-12 {
					t.Fatalf("order %d: %v is not %v + %v", h, x[0][h], y[0][h], z[0][h])
				}
			}
		}
	})
}

// The driving-point impedance of a passive network has no negative real part,
// and a bus sees the same when the buses are numbered otherwise or the nominal
// voltages, by which the matrix is scaled, are stated differently.
func TestPassiveAndIndifferent(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n, buses, _ := random(t, false)
		s := compiled(t, n)
		orders := []float64{1.5, 5, 6.3, 11, 24.5}
		for i, b := range buses {
			z, err := s.Scan(context.Background(), b, phasor.Positive, orders, nil)
			if err != nil {
				t.Fatal(err)
			}
			for k := range z {
				if real(z[k]) < -1e-12*cmplx.Abs(z[k]) {
					t.Fatalf("bus %d, order %g: %v", i, orders[k], z[k])
				}
			}
			m := *n
			m.nominal = append([]float64(nil), n.nominal...)
			for j := range m.nominal {
				m.nominal[j] *= 1 + float64(j)
			}
			u := compiled(t, &m)
			w, err := u.Scan(context.Background(), b, phasor.Positive, orders, nil)
			if err != nil {
				t.Fatal(err)
			}
			for k := range z {
				if cmplx.Abs(z[k]-w[k]) > 1e-9*cmplx.Abs(z[k]) {
					t.Fatalf("bus %d, order %g: %v, scaled otherwise %v", i, orders[k], z[k], w[k])
				}
			}
		}
	})
}

// 1000 kVA, R 0.7 %, X 5.96 %, 400 V with 300 kvar: the peak and values of its
// driving-point impedance (derived).
func TestTransformerWithCapacitor(t *testing.T) {
	n := New(50)
	b := n.AddBus("b", 400)
	n.Add(&Supply{Name: "t", Bus: b, R: 0.00112, X: 0.009536, EMF: 230})
	n.Add(&Shunt{Name: "c", Bus: b, Branch: capacitor{0.5333333333333333}})
	s, err := n.Compile()
	if err != nil {
		t.Fatal(err)
	}
	z, err := s.Scan(context.Background(), b, phasor.Positive, []float64{5, 7, 11, 13}, nil)
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []float64{0.086228857, 0.53516524, 0.090144489, 0.061314998} {
		if math.Abs(cmplx.Abs(z[i])-want) > 1e-7*want {
			t.Errorf("|Z| = %.9g, want %.9g", cmplx.Abs(z[i]), want)
		}
	}
	c, err := s.ScanAdaptive(context.Background(), b, phasor.Positive, 1, 25)
	if err != nil {
		t.Fatal(err)
	}
	if len(c.Peaks) != 1 || math.Abs(c.Peaks[0].Order-7.4785299) > 1e-5 || math.Abs(c.Peaks[0].Ohm-4.5415123) > 1e-6 {
		t.Errorf("peaks %+v, want 4.5415123 ohm at 7.4785299", c.Peaks)
	}
}

// A peak of Q = 500 anywhere in the range is found at its place and height.
func TestSharpPeak(t *testing.T) {
	for _, order := range []float64{1.37, 4.9999, 7.031, 23.456, 48.77} {
		n := New(50)
		b := n.AddBus("b", 400)
		x := 0.01
		n.Add(&Supply{Name: "s", Bus: b, R: x * order / 500, X: x, EMF: 230})
		n.Add(&Shunt{Name: "c", Bus: b, Branch: capacitor{x * order * order}})
		s, err := n.Compile()
		if err != nil {
			t.Fatal(err)
		}
		c, err := s.ScanAdaptive(context.Background(), b, phasor.Positive, 0.5, 50)
		if err != nil {
			t.Fatal(err)
		}
		if len(c.Peaks) != 1 {
			t.Errorf("order %g: %d peaks", order, len(c.Peaks))
			continue
		}
		p := c.Peaks[0]
		// parallel R-L and C: |Z| = Q w0 L nearly, Q from the slope of the phase
		if math.Abs(p.Order-order) > 1e-4*order || math.Abs(p.Ohm-500*x*order) > 2e-3*500*x*order || math.Abs(p.Q-500) > 5 {
			t.Errorf("order %g: %+v", order, p)
		}
	}
}

func TestVectorGroups(t *testing.T) {
	for text, want := range map[string]VectorGroup{
		"Dyn11": {'D', 'Y', false, true, 11}, "YNd5": {'Y', 'D', true, false, 5}, "Yzn11": {'Y', 'Z', false, true, 11},
		"Dd0": {'D', 'D', false, false, 0}, "YNyn6": {'Y', 'Y', true, true, 6}, "Dzn0": {'D', 'Z', false, true, 0}, "ZNy1": {'Z', 'Y', true, false, 1},
	} {
		if got, err := ParseVectorGroup(text); err != nil || got != want {
			t.Errorf("%s: %+v, %v", text, got, err)
		}
	}
	for _, text := range []string{"", "Dyn", "Dyn12", "Dyn4", "Yy1", "Dz11", "yD11", "Dyn-1", "Dyn111"} {
		if g, err := ParseVectorGroup(text); err == nil {
			t.Errorf("%q reads as %+v", text, g)
		}
	}
}

// Two ways to a bus whose vector groups turn it differently are named.
func TestWiringError(t *testing.T) {
	n := New(50)
	a, b := n.AddBus("A", 11000), n.AddBus("B", 400)
	n.Add(&Supply{Name: "s", Bus: a, X: 1, EMF: 6350})
	for i, text := range []string{"Dyn11", "Dyn1"} {
		g, _ := ParseVectorGroup(text)
		n.Add(&Transformer{Name: fmt.Sprint("T", i), HV: a, LV: b, Ratio: 27.5, X: 0.01, Group: g})
	}
	_, err := n.Compile()
	if w, ok := err.(*WiringError); !ok || w.Bus != "B" || !strings.Contains(err.Error(), "T1") {
		t.Errorf("%v", err)
	}
}

// A current of the zero sequence that finds no way back is named with its load
// and bus, not solved to something huge.
func TestNoWayBack(t *testing.T) {
	n := New(50)
	a, b := n.AddBus("A", 11000), n.AddBus("B", 400)
	n.Add(&Supply{Name: "s", Bus: a, R: 0.1, X: 1, EMF: 6350})
	g, _ := ParseVectorGroup("Dy11")
	n.Add(&Transformer{Name: "T", HV: a, LV: b, Ratio: 27.5, R: 0.001, X: 0.01, Group: g})
	s, err := n.Compile()
	if err != nil {
		t.Fatal(err)
	}
	base, err := s.Fundamental(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	c := phasor.New(5)
	c[3] = 10
	_, err = s.Harmonics(context.Background(), base, 5, []Injection{{Name: "rack", Bus: b, Current: [3]phasor.Spectrum{c, c, c}}})
	if p, ok := err.(*PathError); !ok || p.Load != "rack" || p.Bus != "B" {
		t.Errorf("%v", err)
	}
}

// A poor pivot in the sparse factorisation is seen, and the dense solver with
// pivoting takes over and is counted: the end bus, which is eliminated first,
// carries a capacitor that cancels its cable at order 5, so that its place on
// the diagonal is zero while the matrix is regular.
func TestFallback(t *testing.T) {
	n := New(50)
	end, middle, source := n.AddBus("end", 400), n.AddBus("middle", 400), n.AddBus("source", 400)
	n.Add(&Supply{Name: "s", Bus: source, X: 0.1, EMF: 230})
	n.Add(&Cable{Name: "c1", From: source, To: middle, X: 0.1, X0: 0.1})
	n.Add(&Cable{Name: "c2", From: middle, To: end, X: 0.1, X0: 0.1})
	n.Add(&Shunt{Name: "k", Bus: end, Branch: capacitor{0.1 * 25}})
	s, err := n.Compile()
	if err != nil {
		t.Fatal(err)
	}
	base, err := s.Fundamental(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	c := phasor.New(5)
	c[5] = 1
	turn := [3]phasor.Spectrum{c, {0, 0, 0, 0, 0, cmplx.Rect(1, 2*math.Pi/3)}, {0, 0, 0, 0, 0, cmplx.Rect(1, -2*math.Pi/3)}}
	sol, err := s.Harmonics(context.Background(), base, 5, []Injection{{Name: "i", Bus: middle, Current: turn}})
	if err != nil {
		t.Fatal(err)
	}
	if sol.Check.Fallback == 0 || sol.Check.Residual > 1e-10 {
		t.Errorf("check %+v", sol.Check)
	}
	// the end branch is a short circuit at order 5: the middle carries no
	// voltage, the end that of 1 A through 5 x 0.1 ohm
	phase, _ := sol.BusVoltage(middle)
	if v := cmplx.Abs(phase[0][5]); v > 1e-9 {
		t.Errorf("middle: %g V", v)
	}
	phase, _ = sol.BusVoltage(end)
	if v := cmplx.Abs(phase[0][5]); math.Abs(v-0.5) > 1e-9 {
		t.Errorf("end: %g V, want 0.5", v)
	}
}

func radial(buses int) (*System, BusID) {
	n := New(50)
	first := n.AddBus("b0", 400)
	n.Add(&Supply{Name: "s", Bus: first, R: 0.001, X: 0.01, EMF: 230, R0: 0.001, X0: 0.01})
	for i := 1; i < buses; i++ {
		b := n.AddBus(fmt.Sprint("b", i), 400)
		n.Add(&Cable{Name: fmt.Sprint("c", i), From: BusID((i - 1) / 3), To: b, R: 0.001, X: 0.002, C: 1e-8, R0: 0.003, X0: 0.006})
		n.Add(&Shunt{Name: fmt.Sprint("k", i), Bus: b, Branch: capacitor{400}})
	}
	s, err := n.Compile()
	if err != nil {
		panic(err)
	}
	return s, BusID(buses - 1)
}

// Each step assembles, factors and solves one order in one sequence.
func benchmarkRadial(b *testing.B, buses int) {
	s, last := radial(buses)
	sc := s.NewScanner(last, phasor.Positive)
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := sc.At(float64(2 + i%49)); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkRadial30(b *testing.B)    { benchmarkRadial(b, 30) }
func BenchmarkRadial100(b *testing.B)   { benchmarkRadial(b, 100) }
func BenchmarkRadial1000(b *testing.B)  { benchmarkRadial(b, 1000) }
func BenchmarkRadial10000(b *testing.B) { benchmarkRadial(b, 10000) }

// A capacitor behind a transformer behind a stiff supply: the capacitor swings
// against the transformer, each with nearly its whole side.
func TestParticipants(t *testing.T) {
	n := New(50)
	hv, lv := n.AddBus("HV", 11000), n.AddBus("LV", 400)
	sup := n.Add(&Supply{Name: "s", Bus: hv, R: 0.01, X: 0.1, EMF: 6350})
	g, _ := ParseVectorGroup("Dyn11")
	tr := n.Add(&Transformer{Name: "t", HV: hv, LV: lv, Ratio: 27.5, R: 0.001, X: 0.0096, Group: g})
	bank := n.Add(&Shunt{Name: "c", Bus: lv, Branch: capacitor{0.5}})
	s, err := n.Compile()
	if err != nil {
		t.Fatal(err)
	}
	curve, err := s.ScanAdaptive(context.Background(), lv, phasor.Positive, 2, 20)
	if err != nil || len(curve.Peaks) != 1 {
		t.Fatal(err, curve.Peaks)
	}
	list, err := s.NewScanner(lv, phasor.Positive).Participants(curve.Peaks[0].Order)
	if err != nil {
		t.Fatal(err)
	}
	// shares of reactance: the supply has 0.1 ohm at 11 kV, 0.000132 at 400 V
	want := map[ElementID]float64{bank: -1, tr: 0.0096 / (0.0096 + 0.1/27.5/27.5)}
	for _, p := range list {
		if p.Element == sup {
			t.Errorf("the stiff supply takes part: %+v", p)
		}
		if math.Abs(p.Share-want[p.Element]) > 1e-6 {
			t.Errorf("element %d: share %.6f, want %.6f", p.Element, p.Share, want[p.Element])
		}
	}
	if len(list) != 2 {
		t.Errorf("%+v", list)
	}
}

// The open-end impedance of a 100 km line, 1 mH/km and 11.6 nF/km, at 250 Hz:
// -495.4231 ohm in the exact form, -506.5137 ohm as a nominal pi; the first
// series resonance lies at 734.0253 Hz (derived).
func TestLongLine(t *testing.T) {
	open := func(exact bool, hz float64) float64 {
		const f1 = 50.
		l := &Cable{X: 2 * math.Pi * f1 * 0.1, C: 1.16e-6, Exact: exact}
		p := l.admit(f1, hz/f1, phasor.Positive)
		return imag(1 / (p.y00 - p.y01*p.y01/p.y11))
	}
	for _, c := range []struct {
		exact bool
		want  float64
	}{{true, -495.4231}, {false, -506.5137}} {
		if got := open(c.exact, 250); math.Abs(got-c.want) > 1e-3 {
			t.Errorf("exact %v: %.4f ohm, want %.4f", c.exact, got, c.want)
		}
	}
	if a, b := open(true, 734.02), open(true, 734.03); a > 0 || b < 0 {
		t.Errorf("no series resonance at 734.0253 Hz: %g, %g", a, b)
	}
}
