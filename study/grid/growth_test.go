package grid

import (
	"fmt"
	"testing"

	"gonum.org/v1/gonum/mat"

	"quietbus/study/phasor"
)

// meshed is a square of streets, each crossing a bus with a load and a
// capacitor, fed at one corner.
func meshed(side int) (*System, BusID) {
	n := New(50)
	for i := range side * side {
		b := n.AddBus(fmt.Sprint("b", i), 400)
		n.Add(&Shunt{Name: fmt.Sprint("k", i), Bus: b, Branch: capacitor{400}})
	}
	n.Add(&Supply{Name: "s", Bus: 0, R: 0.001, X: 0.01, EMF: 230, R0: 0.001, X0: 0.01})
	for i := range side {
		for j := range side {
			at := BusID(i*side + j)
			if j+1 < side {
				n.Add(&Cable{Name: fmt.Sprint("e", at), From: at, To: at + 1, R: 0.001, X: 0.002, R0: 0.003, X0: 0.006})
			}
			if i+1 < side {
				n.Add(&Cable{Name: fmt.Sprint("s", at), From: at, To: at + BusID(side), R: 0.001, X: 0.002, R0: 0.003, X0: 0.006})
			}
		}
	}
	s, err := n.Compile()
	if err != nil {
		panic(err)
	}
	return s, BusID(side*side - 1)
}

func benchmarkMeshed(b *testing.B, side int) {
	s, last := meshed(side)
	sc := s.NewScanner(last, phasor.Positive)
	b.ReportMetric(float64(len(s.pat.row))/float64(s.nodes), "fill/bus")
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := sc.At(float64(2 + i%49)); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkMeshed36(b *testing.B)   { benchmarkMeshed(b, 6) }
func BenchmarkMeshed100(b *testing.B)  { benchmarkMeshed(b, 10) }
func BenchmarkMeshed1024(b *testing.B) { benchmarkMeshed(b, 32) }

// benchmarkCompile is nodes, angles, ordering and pattern of a topology.
func benchmarkCompile(b *testing.B, make func() *System) {
	n := make().net
	b.ReportAllocs()
	for b.Loop() {
		if _, err := n.Compile(); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkCompile30(b *testing.B) {
	benchmarkCompile(b, func() *System { s, _ := radial(30); return s })
}

func BenchmarkCompile1000(b *testing.B) {
	benchmarkCompile(b, func() *System { s, _ := radial(1000); return s })
}

func BenchmarkCompile10000(b *testing.B) {
	benchmarkCompile(b, func() *System { s, _ := radial(10000); return s })
}

func BenchmarkCompileMeshed1024(b *testing.B) {
	benchmarkCompile(b, func() *System { s, _ := meshed(32); return s })
}

// benchmarkGonum is the same factorisation and solution by gonum's pivoted
// dense LU, as the real system of twice the size, matrix already assembled.
func benchmarkGonum(b *testing.B, s *System, last BusID) {
	a := assembled(s, 7, phasor.Positive)
	rhs := mat.NewVecDense(2*s.nodes, nil)
	rhs.SetVec(s.node[last], s.scale[s.node[last]])
	var lu mat.LU
	var x mat.VecDense
	b.ReportAllocs()
	for b.Loop() {
		lu.Factorize(a)
		if err := lu.SolveVecTo(&x, false, rhs); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkGonumRadial30(b *testing.B) {
	s, last := radial(30)
	benchmarkGonum(b, s, last)
}

func BenchmarkGonumRadial100(b *testing.B) {
	s, last := radial(100)
	benchmarkGonum(b, s, last)
}

func BenchmarkGonumRadial1000(b *testing.B) {
	s, last := radial(1000)
	benchmarkGonum(b, s, last)
}
