package study

import (
	"context"
	"fmt"
	"testing"
)

// thirty is a radial site of 30 buses: two 11 kV boards, seven transformers,
// twenty-one low-voltage boards, a load of each kind on most of them.
func thirty() *Study {
	s := &Study{Format: 1, Title: Title{Study: "thirty buses"}, FrequencyHz: 50,
		Supplies: []Supply{{Named: Named{"Grid"}, Bus: "PCC", FaultMVA: 300, XOverR: 10, ZeroSequenceRatio: 2}},
		Buses:    []Bus{{Named: Named{"PCC"}, NominalKV: 11}, {Named: Named{"MV"}, NominalKV: 11}},
		Cables:   []Cable{{Named: Named{"W0"}, From: "PCC", To: "MV", LengthM: 300, ROhmPerKm: 0.16, XOhmPerKm: 0.1, CNFPerKm: 350}}}
	for i := range 7 {
		board := fmt.Sprintf("B%d", i)
		s.Buses = append(s.Buses, Bus{Named: Named{board}, NominalKV: 0.4})
		s.Transformers = append(s.Transformers, Transformer{Named: Named{"T" + board}, HVBus: "MV", LVBus: board, RatedKVA: 1000, HVKV: 11, LVKV: 0.4, ImpedancePercent: 6, XOverR: 6, VectorGroup: []string{"Dyn11", "Dyn5", "Dzn0"}[i%3]})
		s.NonlinearLoads = append(s.NonlinearLoads, NonlinearLoad{Named: Named{"D" + board}, Bus: board, KW: 150, Displacement: 0.95, Spectrum: "six-pulse-3pct"})
		s.Banks = append(s.Banks, Bank{Named: Named{"C" + board}, Bus: board, Kvar: 100})
		s.Measures = append(s.Measures, Measure{Named: Named{"F" + board}, Kind: SingleTuned, Bus: board, Kvar: 120, Order: 4.7, Replaces: []string{"C" + board}})
		s.Assessments = append(s.Assessments, Assessment{Named: Named{"A" + board}, Bus: board, Set: "iec61000-2-4-class2"})
		for j := range 3 {
			sub := fmt.Sprintf("%s%d", board, j)
			s.Buses = append(s.Buses, Bus{Named: Named{sub}, NominalKV: 0.4})
			s.Cables = append(s.Cables, Cable{Named: Named{"W" + sub}, From: board, To: sub, LengthM: 60, ROhmPerKm: 0.2, XOhmPerKm: 0.08})
			s.Loads = append(s.Loads, Load{Named: Named{"L" + sub}, Bus: sub, KW: 30, Kvar: 10})
			s.NonlinearLoads = append(s.NonlinearLoads, NonlinearLoad{Named: Named{"N" + sub}, Bus: sub, Connection: []Connection{PhaseA, PhaseB, PhaseC}[j], KW: 8, Spectrum: "led-lighting"})
		}
	}
	s.Assessments = append(s.Assessments, Assessment{Named: Named{"PCC limits"}, Bus: "PCC", Set: "ieee519-2022", Current: "Grid", DemandA: 120})
	return s
}

// BenchmarkFlip30 is the time from a flipped switch to numbers: 30 buses, 50
// orders, three sequences, all results and assessments.
func BenchmarkFlip30(b *testing.B) {
	p, err := Prepare(thirty())
	if err != nil {
		b.Fatal(err)
	}
	sets := [][]string{{"FB0"}, {"FB0", "FB3"}}
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := p.Evaluate(context.Background(), sets[i%2]); err != nil {
			b.Fatal(err)
		}
	}
}
