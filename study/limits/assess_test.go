package limits

import (
	"errors"
	"math"
	"strings"
	"testing"

	"quietbus/study/phasor"
)

func TestNotAssessed(t *testing.T) {
	ieee, iec := mustLookup(t, "ieee519-2022"), mustLookup(t, "iec61000-2-4-class2")
	x := flat(50, 1)
	good := Point{NominalV: 480, Voltage: x, Current: x, IscA: 100, DemandA: 10}
	with := func(change func(*Point)) Point { p := good; change(&p); return p }
	for _, c := range []struct {
		name, reason string
		f            func(Point) ([]Row, error)
		p            Point
	}{
		{"no demand", "demand load current IL", ieee.Current, with(func(p *Point) { p.DemandA = 0 })},
		{"negative demand", "demand load current IL", ieee.Current, with(func(p *Point) { p.DemandA = -5 })},
		{"NaN demand", "demand load current IL", ieee.Current, with(func(p *Point) { p.DemandA = math.NaN() })},
		{"no Isc", "short-circuit current Isc", ieee.Current, with(func(p *Point) { p.IscA = 0 })},
		{"no current", "no current is known", ieee.Current, with(func(p *Point) { p.Current = [3]phasor.Spectrum{} })},
		{"no nominal", "nominal voltage", ieee.Current, with(func(p *Point) { p.NominalV = 0 })},
		{"below 120 V", "for 0.1 kV", ieee.Current, with(func(p *Point) { p.NominalV = 100 })},
		{"no limits", "IEC 61000-2-4:2002 class 2 has no current limits", iec.Current, good},
		{"no nominal for the voltage", "nominal voltage", ieee.Voltage, with(func(p *Point) { p.NominalV = math.NaN() })},
		{"dead bus", "no voltage", ieee.Voltage, with(func(p *Point) { p.Voltage = flat(50, 0); p.Voltage[0][1], p.Voltage[1][1], p.Voltage[2][1] = 0, 0, 0 })},
		{"no spectra", "no voltage", iec.Voltage, with(func(p *Point) { p.Voltage = [3]phasor.Spectrum{} })},
		{"outside the document", "up to 35 kV", iec.Voltage, with(func(p *Point) { p.NominalV = 110e3 })},
	} {
		rows, err := c.f(c.p)
		var why *NotAssessedError
		if len(rows) != 0 || !errors.As(err, &why) || !strings.Contains(why.Reason, c.reason) {
			t.Errorf("%s: %d rows, error %v; want a reason with %q", c.name, len(rows), err, c.reason)
		}
	}
}

func TestWorstPhaseAndMissingOrders(t *testing.T) {
	x := flat(25, 0)
	x[1][5], x[2][5] = 3i, -2
	rows, err := mustLookup(t, "iec61000-2-4-class2").Voltage(Point{NominalV: 400, Voltage: x})
	if err != nil {
		t.Fatal(err)
	}
	last := rows[len(rows)-1]
	for _, r := range rows {
		if r.Order > 25 {
			t.Errorf("a row of order %d, which was not computed", r.Order)
		}
		if r.Order == 5 && (r.Phase != "b" || math.Abs(r.Value-3) > 1e-12 || math.Abs(r.Share-0.5) > 1e-12 || !r.Meets()) {
			t.Errorf("order 5: %+v, want 3 %% in phase b", r)
		}
	}
	if last.Index != "THD" || !strings.Contains(last.Rule, "computed to order 25") {
		t.Errorf("the total %+v does not say that it ends at order 25", last)
	}
	if got := mustLookup(t, "iec61000-2-4-class2").MaxOrder(); got != 50 {
		t.Errorf("the set speaks of order %d, want 50", got)
	}
}

func TestExactlyAtTheLimitMeets(t *testing.T) {
	x := flat(50, 0)
	x[0][5] = 6
	rows, _ := mustLookup(t, "iec61000-2-4-class2").Voltage(Point{NominalV: 400, Voltage: x})
	for _, r := range rows {
		if r.Order == 5 && (!r.Meets() || r.Share != 1) {
			t.Errorf("6 %% of 6 %%: %+v", r)
		}
	}
}

// Half-wave rectifiers: IEEE 519 allows no direct component (1992 found, later
// wording memory). Its rule is shown only where there is one.
func TestDirectCurrent(t *testing.T) {
	s := mustLookup(t, "ieee519-2022")
	p := Point{NominalV: 480, Current: flat(50, 0), IscA: 100, DemandA: 100}
	count := func() (n int, row Row) {
		rows, err := s.Current(p)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range rows {
			if r.Order == 0 && r.Index == "" {
				n, row = n+1, r
			}
		}
		return n, row
	}
	p.Current[0][0] = 1e-13
	if n, _ := count(); n != 0 {
		t.Error("rounding counts as direct current")
	}
	p.Current[2][0] = -31
	n, row := count()
	if n != 1 || row.Meets() || row.Phase != "c" || math.Abs(row.Value-31) > 1e-9 || math.Abs(row.Share-32) > 1e-9 {
		t.Errorf("%d rows, %+v; want one that is over, 31 %% in phase c", n, row)
	}
}

// The allowance for held low orders: Isc/IL 15, 13.8 kV, 5th and 7th at 0.9 %
// against a quarter of 4 %: order 11 gets 2.0 x 1.4 (derived; the 1.4 found,
// higher factors memory, high).
func TestLowOrderAllowance(t *testing.T) {
	s := mustLookup(t, "ieee519-2014")
	p := Point{NominalV: 13800, Current: flat(50, 0.1), IscA: 1500, DemandA: 100, LowOrderAllowance: true}
	set := func(v float64, orders ...int) {
		for _, h := range orders {
			p.Current[0][h] = complex(v, 0)
		}
	}
	at := func() (map[int]float64, []Row) {
		rows, err := s.Current(p)
		return limitsOf(t, rows, err), rows
	}
	set(0.9, 5, 7)
	set(0.6, 11) // above a quarter of 2 %, so the longer lists do not apply
	l, rows := at()
	for h, want := range map[int]float64{5: 4, 7: 4, 11: 2.8, 13: 2.8, 3: 5.6, 6: 1.4, 0: 5} {
		if math.Abs(l[h]-want) > 1e-9 {
			t.Errorf("order %d: %g, want %g", h, l[h], want)
		}
	}
	for _, r := range rows {
		if r.Order == 11 && (r.Mark != Found || !strings.Contains(r.Rule, "x 1.4 by clause 5.5 Table 5: orders 5, 7 within 25 %")) {
			t.Errorf("row %+v", r)
		}
	}
	set(0.45, 11, 13)
	set(0.4, 17) // above a quarter of 1.5 %
	if l, rows = at(); math.Abs(l[17]-1.5*1.7) > 1e-9 || l[11] != 2 {
		t.Errorf("orders 17 and 11: %g and %g, want 2.55 and 2", l[17], l[11])
	}
	for _, r := range rows {
		if r.Order == 17 && r.Mark != Memory {
			t.Errorf("factor 1.7 is from memory, row %+v", r)
		}
	}
	set(1.01, 7) // above a quarter of 4 %
	if l, _ = at(); l[11] != 2 {
		t.Errorf("order 11: %g, want the plain 2", l[11])
	}
	set(0.9, 7)
	p.LowOrderAllowance = false
	if l, _ = at(); l[11] != 2 {
		t.Errorf("order 11 without the option: %g, want the plain 2", l[11])
	}
	p.LowOrderAllowance = true
	for i := range p.Current {
		p.Current[i] = p.Current[i][:7] // order 7 not computed: not known to be held
	}
	if l, _ = at(); l[6] != 1 {
		t.Errorf("order 6 with order 7 unknown: %g, want the plain 1", l[6])
	}
}

func BenchmarkAssessPoint(b *testing.B) {
	s := mustLookup(b, "ieee519-2022")
	x := flat(50, 0.4)
	p := Point{NominalV: 480, Voltage: x, Current: x, IscA: 2000, DemandA: 100}
	b.ReportAllocs()
	for b.Loop() {
		if _, err := s.Voltage(p); err != nil {
			b.Fatal(err)
		}
		if _, err := s.Current(p); err != nil {
			b.Fatal(err)
		}
	}
}
