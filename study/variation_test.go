package study

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"

	"quietbus/study/filter"
	"quietbus/study/grid"
	"quietbus/study/phasor"
)

// uncertain is the demo with a range of every kind.
func uncertain(t testing.TB) *Study {
	s := demoStudy(t)
	s.OperatingStates = []OperatingState{{Named: Named{"Night"}, Out: []string{"C2"}, LoadPercent: 40}}
	s.Ranges = []Range{
		{Named: Named{"r1"}, Kind: RangeValue, Item: "Grid", Field: "faultMVA", Low: 140, High: 220},
		{Named: Named{"r2"}, Kind: RangePower, Item: "Fast chargers", Low: 60, High: 110, Distribution: "triangular"},
		{Named: Named{"r3"}, Kind: RangeAngle, Low: -180, High: 180},
		{Named: Named{"r4"}, Kind: RangeBackground, Low: 50, High: 160},
		{Named: Named{"r5"}, Kind: RangeCapacitance, Low: -10, High: 10, Distribution: "normal"},
		{Named: Named{"r6"}, Kind: RangeInductance, Item: "Filter 5", Low: -5, High: 5},
		{Named: Named{"r7"}, Kind: RangeFrequency, Low: 49.5, High: 50.5},
		{Named: Named{"r8"}, Kind: RangeValue, Item: "Active filter", Field: "ratedA", Low: 100, High: 400},
	}
	return s
}

// A variation evaluated by update equals the same in full, and the plain
// values of one that only changes values equal an edited study.
func TestVariationByUpdateEqualsFull(t *testing.T) {
	s := uncertain(t)
	structural := Range{Named: Named{"r9"}, Kind: RangeValue, Item: "T1", Field: "impedancePercent", Low: 5, High: 7}
	for _, all := range []bool{false, true} {
		if all {
			s.Ranges = append(s.Ranges, structural)
		}
		p := prepared(t, s)
		unknowns := s.Unknowns()
		rng := rand.New(rand.NewPCG(7, 3))
		for _, state := range p.States() {
			q, err := p.Quick(state, Varying(unknowns)...)
			if err != nil {
				t.Fatal(err)
			}
			for range 12 {
				values := make([]float64, len(unknowns))
				for i, u := range unknowns {
					values[i] = u.Low + rng.Float64()*(u.High-u.Low)
				}
				v := s.Vary(unknowns, values)
				for _, on := range [][]string{nil, {"Filter 5", "Active filter"}, {"Detune C1", "Reactor K1", "Recorder filter"}} {
					got, err := q.BriefOf(context.Background(), v, on)
					if err != nil {
						t.Fatal(err)
					}
					want, err := p.BriefOf(context.Background(), v, on, state)
					if err != nil {
						t.Fatal(err)
					}
					sameBrief(t, on, got, want)
				}
			}
			if (q.Full > 0) != all {
				t.Errorf("%d evaluations in full; transformers vary: %v", q.Full, all)
			}
		}
	}
	// values against an edited study
	v := s.Vary(s.Unknowns()[:2], []float64{150, 80})
	edited := demoStudy(t)
	edited.Supplies[0].FaultMVA = 150
	for i := range edited.NonlinearLoads {
		if l := &edited.NonlinearLoads[i]; l.Name == "Fast chargers" {
			l.KW *= 0.8
		}
	}
	edited.Assessments[0].IscKA = 180 / math.Sqrt(3) / 11 // limits rest on the stated level
	got, err := prepared(t, s).BriefOf(context.Background(), v, nil, "")
	if err != nil {
		t.Fatal(err)
	}
	want, err := prepared(t, edited).Brief(context.Background(), nil, "")
	if err != nil {
		t.Fatal(err)
	}
	sameBrief(t, "edited", got, want)
	if s.Supplies[0].FaultMVA != 180 || s.NonlinearLoads[3].KW != 360 {
		t.Error("varying changed the study")
	}
}

// Turning every order of every source by its order times one angle, and the
// EMF's background with it, shifts time and changes no magnitude; turning one
// load alone does change it.
func TestAnglesTurn(t *testing.T) {
	s := uncertain(t)
	p := prepared(t, s)
	var angles []Unknown
	for _, u := range s.Unknowns() {
		if u.Kind == RangeAngle {
			angles = append(angles, u)
		}
	}
	values := make([]float64, len(angles))
	base, err := p.Brief(context.Background(), nil, "")
	if err != nil {
		t.Fatal(err)
	}
	same, err := p.BriefOf(context.Background(), s.Vary(angles, values), nil, "")
	if err != nil {
		t.Fatal(err)
	}
	sameBrief(t, "turned by nothing", same, base)
	for i, u := range angles {
		if u.Item == "Compressor 1" && u.Order == 7 {
			values[i] = 180
		}
	}
	other, err := p.BriefOf(context.Background(), s.Vary(angles, values), nil, "")
	if err != nil {
		t.Fatal(err)
	}
	seventh := func(b *Brief) float64 {
		for _, r := range b.Points[1].Rows {
			if r.Order == 7 {
				return r.Value
			}
		}
		return 0
	}
	if !(seventh(other) < 0.7*seventh(base)) {
		t.Errorf("7th voltage %g with one of two compressors reversed, %g before", seventh(other), seventh(base))
	}
}

// One per cent more frequency moves a resonance to an order one per cent
// lower, for L and C alone: order r of 1/(2 pi f sqrt(L C)). Handbook formula.
func TestFrequencyMovesResonance(t *testing.T) {
	peak := func(ratio float64) float64 {
		n := grid.New(50)
		bus := n.AddBus("b", 400)
		n.Add(&grid.Supply{Name: "s", Bus: bus, R: 0.0002, X: 0.01, EMF: 230, Ratio: ratio})
		b, err := filter.Bank(100e3, 400, 50, 0)
		if err != nil {
			t.Fatal(err)
		}
		d := 0.0
		if ratio != 0 {
			d = ratio - 1
		}
		n.Add(&grid.Shunt{Name: "c", Bus: bus, Branch: b.Drifted(filter.Drift{Frequency: d})})
		n.Deviate(ratio)
		sys, err := n.Compile()
		if err != nil {
			t.Fatal(err)
		}
		c, err := sys.ScanAdaptive(context.Background(), bus, phasor.Positive, 2, 30)
		if err != nil || len(c.Peaks) != 1 {
			t.Fatal(err, c)
		}
		return c.Peaks[0].Order
	}
	want := math.Sqrt(400 * 400 / 100e3 / 0.01) // sqrt(XC/XL)
	if r := peak(0); math.Abs(r-want) > 0.002*want {
		t.Errorf("peak at %g, sqrt(XC/XL) is %g", r, want)
	}
	if r, q := peak(0), peak(1.01); math.Abs(q-r/1.01) > 1e-4*r {
		t.Errorf("peak at %g, at one per cent more frequency %g", r, q)
	}
	// a transformer's and a cable's reactance rise with the frequency
	n := grid.New(50)
	a, b := n.AddBus("a", 400), n.AddBus("b", 400)
	n.Add(&grid.Supply{Name: "s", Bus: a, X: 1e-9, EMF: 230, Ratio: 1.02})
	n.Add(&grid.Cable{Name: "w", From: a, To: b, R: 1e-9, X: 0.3})
	n.Deviate(1.02)
	sys, err := n.Compile()
	if err != nil {
		t.Fatal(err)
	}
	z, err := sys.Scan(context.Background(), b, phasor.Positive, []float64{1, 5}, nil)
	if err != nil || cmplx.Abs(z[0]-complex(0, 0.306)) > 1e-6 || cmplx.Abs(z[1]-complex(0, 1.53)) > 1e-6 {
		t.Errorf("%v, %v", z, err)
	}
}

func TestBadRanges(t *testing.T) {
	for name, x := range map[string]struct {
		r     Range
		field string
		word  string
	}{
		"reversed":       {Range{Kind: RangeValue, Item: "Grid", Field: "faultMVA", Low: 200, High: 100}, "low", "runs backwards"},
		"no width":       {Range{Kind: RangeValue, Item: "Grid", Field: "faultMVA", Low: 200, High: 200}, "low", "no width"},
		"empty":          {Range{Kind: RangeValue, Item: "Grid", Field: "faultMVA"}, "low", "no width"},
		"nonsense":       {Range{Kind: RangeAngle, Low: math.NaN(), High: 3}, "low", "not a number"},
		"no such item":   {Range{Kind: RangeValue, Item: "Gird", Field: "faultMVA", Low: 1, High: 2}, "item", "no item"},
		"no item":        {Range{Kind: RangeValue, Field: "faultMVA", Low: 1, High: 2}, "item", "missing"},
		"no such field":  {Range{Kind: RangeValue, Item: "Grid", Field: "faultGVA", Low: 1, High: 2}, "field", "no value of Grid"},
		"a word":         {Range{Kind: RangeValue, Item: "T1", Field: "vectorGroup", Low: 1, High: 2}, "field", "no value of T1"},
		"not stated":     {Range{Kind: RangeValue, Item: "Grid", Field: "faultKA", Low: 1, High: 2}, "field", "states no faultKA"},
		"out of bounds":  {Range{Kind: RangeValue, Item: "T1", Field: "impedancePercent", Low: 1, High: 90}, "low", "may be"},
		"wrong item":     {Range{Kind: RangeCapacitance, Item: "T1", Low: -5, High: 5}, "item", "has no capacitance"},
		"nothing there":  {Range{Kind: RangeCapacitance, Item: "Remove C1", Low: -5, High: 5}, "item", "nothing in the study"},
		"another system": {Range{Kind: RangeFrequency, Low: 10, High: 50}, "low", "stay between"},
		"negative power": {Range{Kind: RangePower, Low: -10, High: 50}, "low", "stay between"},
		"a distribution": {Range{Kind: RangeAngle, Low: -10, High: 50, Distribution: "bell"}, "distribution", "none of its words"},
		"field too much": {Range{Kind: RangeAngle, Field: "kW", Low: -10, High: 50}, "field", "does not belong"},
		"twice":          {Range{Kind: RangeAngle, Item: "Fast chargers", Low: -10, High: 50}, "item", "in the range first already"},
	} {
		s := demoStudy(t)
		s.Ranges = []Range{{Named: Named{"first"}, Kind: RangeAngle, Low: -180, High: 180}, x.r}
		if name != "twice" {
			s.Ranges = s.Ranges[1:]
		}
		s.Ranges[len(s.Ranges)-1].Name = "R"
		_, err := Prepare(s)
		var f *FieldError
		if !errors.As(err, &f) || f.Item != "R" || f.Field != x.field || !strings.Contains(f.Problem+f.Remedy, x.word) || f.Remedy == "" {
			t.Errorf("%s: %v", name, err)
		}
	}
}
