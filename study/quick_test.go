package study

import (
	"context"
	"errors"
	"math"
	"testing"
)

// allSets calls f with every set of a study's measures that may be on together.
func allSets(s *Study, f func(on []string)) {
	for mask := range 1 << len(s.Measures) {
		var on []string
		for i := range s.Measures {
			if mask>>i&1 == 1 {
				on = append(on, s.Measures[i].Name)
			}
		}
		if len(s.Conflicts(on)) == 0 {
			f(on)
		}
	}
}

// sameBrief compares two briefs of one choice of measures.
func sameBrief(t *testing.T, what any, a, b *Brief) {
	t.Helper()
	near := func(name string, x, y float64) {
		if !(math.Abs(x-y) <= 1e-9*(1+math.Abs(y))) {
			t.Fatalf("%v: %s is %v by update, %v in full", what, name, x, y)
		}
	}
	for i := range b.Points {
		p, q := &a.Points[i], &b.Points[i]
		if p.State() != q.State() || len(p.Rows) != len(q.Rows) || a.Dead[i] != b.Dead[i] {
			t.Fatalf("%v: %s %v with %d rows by update, %v with %d in full", what, q.Name, p.State(), len(p.Rows), q.State(), len(q.Rows))
		}
		near("IscA", p.IscA, q.IscA)
		for k := range q.Rows {
			near(RowName(q.Rows[k]), p.Rows[k].Share, q.Rows[k].Share)
		}
	}
	near("stress", a.Stress.Share, b.Stress.Share)
	near("amplification", a.Resonance.Times, b.Resonance.Times)
	if a.Stress.Item != b.Stress.Item || a.Resonance.Order != b.Resonance.Order {
		t.Fatalf("%v: %+v %+v by update, %+v %+v in full", what, a.Stress, a.Resonance, b.Stress, b.Resonance)
	}
}

// Every set of the demo's measures, in every state, evaluated by update equals
// its full evaluation to 1e-9.
func TestQuickEqualsFull(t *testing.T) {
	s := demoStudy(t)
	s.Supplies[0].FaultMinMVA = 110
	s.OperatingStates = []OperatingState{{Named: Named{"Night"}, Out: []string{"C1", "Compressor 2"}, LoadPercent: 40}, {Named: Named{"Weak"}, FaultLevel: "min"}}
	s.Assessments = append(s.Assessments, Assessment{Named: Named{"Charger feeder"}, Bus: "Yard", Set: "ieee519-2022", Current: "W3", DemandA: 600})
	p := prepared(t, s)
	for _, state := range p.States() {
		q, err := p.Quick(state)
		if err != nil {
			t.Fatal(err)
		}
		sets := 0
		allSets(s, func(on []string) {
			sets++
			got, err := q.Brief(context.Background(), on)
			if err != nil {
				t.Fatal(err)
			}
			want, err := p.Brief(context.Background(), on, state)
			if err != nil {
				t.Fatal(err)
			}
			sameBrief(t, on, got, want)
		})
		if sets < 60 || q.Full > sets/10 {
			t.Errorf("%s: %d of %d sets were solved in full", state, q.Full, sets)
		}
	}
}

// The outcome says of limits what the brief says.
func TestBriefEqualsOutcome(t *testing.T) {
	p := prepared(t, demoStudy(t))
	for _, on := range [][]string{nil, {"Filter 7"}, {"Filter 5", "Active filter", "Recorder filter"}} {
		b, err := p.Brief(context.Background(), on, "")
		if err != nil {
			t.Fatal(err)
		}
		o, err := p.Evaluate(context.Background(), on)
		if err != nil {
			t.Fatal(err)
		}
		for i := range o.Points {
			for k, r := range o.Points[i].Rows {
				if b.Points[i].Rows[k] != r {
					t.Errorf("%v, %s: %+v in brief, %+v", on, RowName(r), b.Points[i].Rows[k], r)
				}
			}
		}
		for i := range o.Measures {
			d := o.Measures[i].Duty
			m := p.study.Measures
			for k := range m {
				if m[k].Name == o.Measures[i].Name && m[k].RatedKV > 0 && d.VoltageV/d.RatedV > b.Stress.Share+1e-12 {
					t.Errorf("%s bears %g, the brief's hardest is %+v", m[k].Name, d.VoltageV/d.RatedV, b.Stress)
				}
			}
		}
	}
}

func TestQuickStops(t *testing.T) {
	p := prepared(t, demoStudy(t))
	q, err := p.Quick("")
	if err != nil {
		t.Fatal(err)
	}
	gone, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := q.Brief(gone, nil); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
	if _, err := p.Quick("Moonlight"); err == nil {
		t.Error("a state that is not there")
	}
	var conflict *ConflictError
	if _, err := q.Brief(context.Background(), []string{"Remove C1", "Detune C1"}); !errors.As(err, &conflict) {
		t.Errorf("%v", err)
	}
}

// BenchmarkQuick30 is one choice of measures by update: 30 buses, 50 orders.
func BenchmarkQuick30(b *testing.B) {
	p, err := Prepare(thirty())
	if err != nil {
		b.Fatal(err)
	}
	q, err := p.Quick("")
	if err != nil {
		b.Fatal(err)
	}
	sets := [][]string{{"FB0"}, {"FB0", "FB3", "FB4"}}
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := q.Brief(context.Background(), sets[i%2]); err != nil {
			b.Fatal(err)
		}
	}
}

// BenchmarkQuickDemo is the same for the demo.
func BenchmarkQuickDemo(b *testing.B) {
	p, err := Prepare(demoStudy(b))
	if err != nil {
		b.Fatal(err)
	}
	q, err := p.Quick("")
	if err != nil {
		b.Fatal(err)
	}
	sets := [][]string{{"Filter 5"}, {"Active filter", "Filter 7"}}
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := q.Brief(context.Background(), sets[i%2]); err != nil {
			b.Fatal(err)
		}
	}
}
