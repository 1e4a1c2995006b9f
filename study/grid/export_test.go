package grid

import (
	"bufio"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"testing"
	"time"

	"quietbus/study/phasor"
)

// With QUIETBUS_MATRICES=DIR this writes matrices of growing networks in Matrix
// Market coordinate form (an open format of NIST) with the solution found here
// and the time it took, for .ci/compare-kernel to solve with other libraries.
func TestExportMatrices(t *testing.T) {
	dir := os.Getenv("QUIETBUS_MATRICES")
	if dir == "" {
		t.Skip("QUIETBUS_MATRICES names no folder")
	}
	type entry struct {
		Name        string  `json:"name"`
		Nodes       int     `json:"nodes"`
		Node        int     `json:"node"` // where the current enters, from 0
		Re          float64 `json:"re"`   // voltage there
		Im          float64 `json:"im"`
		Nanoseconds float64 `json:"nanoseconds"` // to factor and solve, assembled
	}
	var list []entry
	for _, c := range []struct {
		name string
		make func() (*System, BusID)
	}{
		{"radial 30", func() (*System, BusID) { return radial(30) }},
		{"radial 100", func() (*System, BusID) { return radial(100) }},
		{"radial 1000", func() (*System, BusID) { return radial(1000) }},
		{"radial 10000", func() (*System, BusID) { return radial(10000) }},
		{"meshed 100", func() (*System, BusID) { return meshed(10) }},
		{"meshed 1024", func() (*System, BusID) { return meshed(32) }},
	} {
		s, last := c.make()
		sc := s.NewScanner(last, phasor.Positive)
		if _, err := sc.At(7); err != nil {
			t.Fatal(err)
		}
		// time factor and back alone: the others get an assembled matrix, too
		const rounds = 200
		total := time.Duration(0)
		for range rounds {
			start := time.Now()
			s.factor(sc.f, sc.prim, phasor.Positive)
			s.back(sc.f, sc.one, sc.b, sc.v)
			total += time.Since(start)
		}
		v := sc.v[sc.node]
		list = append(list, entry{c.name, s.nodes, sc.node, real(v), imag(v), float64(total.Nanoseconds()) / rounds})

		f, err := os.Create(filepath.Join(dir, c.name+".mtx"))
		if err != nil {
			t.Fatal(err)
		}
		w := bufio.NewWriter(f)
		sum := map[[2]int]complex128{}
		for i, y := range sc.prim {
			p := &s.place[i]
			sum[[2]int{int(p.n0), int(p.n0)}] += y.y00
			if p.low >= 0 {
				sum[[2]int{int(p.n1), int(p.n1)}] += y.y11
				sum[[2]int{max(int(p.n0), int(p.n1)), min(int(p.n0), int(p.n1))}] += y.y01
			}
		}
		fmt.Fprintf(w, "%%%%MatrixMarket matrix coordinate complex symmetric\n%d %d %d\n", s.nodes, s.nodes, len(sum))
		for at, y := range sum {
			fmt.Fprintf(w, "%d %d %.17g %.17g\n", at[0]+1, at[1]+1, real(y), imag(y))
		}
		if err := w.Flush(); err != nil {
			t.Fatal(err)
		}
		if err := f.Close(); err != nil {
			t.Fatal(err)
		}
	}
	out, err := json.MarshalIndent(list, "", " ")
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, "list.json"), out, 0o644); err != nil {
		t.Fatal(err)
	}
}
