package limits

import (
	"math"
	"strings"
	"testing"

	"quietbus/study/phasor"
)

// appliance returns equipment on 400 V whose phases carry a fundamental of
// base amperes and v at each order above.
func applianceOf(base, v float64) Equipment {
	x := flat(50, v)
	for p := range x {
		x[p][1] = complex(base, 0)
	}
	return Equipment{NominalV: 400, Current: x, ReferenceA: base, PowerW: 300, PowerFactor: 0.8, IscA: 10000}
}

func close6(a, b float64) bool { return math.Abs(a-b) <= 1e-9*math.Max(1, math.Abs(b)) }

// IEC 61000-3-2 class A in amperes, B 1.5 times of it, C in per cent of the
// fundamental, D in mA/W with class A as ceiling (limits of ed. 2 to ed. 5;
// found; the formula rows derived).
func TestClassesAToD(t *testing.T) {
	classA := map[int]float64{3: 2.3, 5: 1.14, 7: 0.77, 9: 0.4, 11: 0.33, 13: 0.21, 2: 1.08, 4: 0.43, 6: 0.3}
	for h := 15; h <= 39; h += 2 {
		classA[h] = 0.15 * 15 / float64(h)
	}
	for h := 8; h <= 40; h += 2 {
		classA[h] = 0.23 * 8 / float64(h)
	}
	classC := map[int]float64{2: 2, 3: 30 * 0.8, 5: 10, 7: 7, 9: 5}
	for h := 11; h <= 39; h += 2 {
		classC[h] = 3
	}
	perW := map[int]float64{3: 3.4, 5: 1.9, 7: 1.0, 9: 0.5, 11: 0.35}
	for h := 13; h <= 39; h += 2 {
		perW[h] = 3.85 / float64(h)
	}
	classB, classD, capped := map[int]float64{}, map[int]float64{}, map[int]float64{}
	for h, v := range classA {
		classB[h] = 1.5 * v
	}
	for h, v := range perW {
		classD[h] = 0.3 * v
		// at 600 W the ceiling of class A binds only where it is lower
		capped[h] = math.Min(0.6*v, classA[h])
	}
	at600 := func(e *Equipment) { e.PowerW = 600 }
	for _, c := range []struct {
		id   string
		set  func(*Equipment)
		want map[int]float64
		unit string
	}{
		{"iec61000-3-2-class-a", nil, classA, "A"},
		{"iec61000-3-2-class-b", nil, classB, "A"},
		{"iec61000-3-2-class-c", nil, classC, Percent},
		{"iec61000-3-2-class-d", nil, classD, "A"},
		{"iec61000-3-2-class-d", at600, capped, "A"},
	} {
		e := applianceOf(8, 0.05)
		if c.set != nil {
			c.set(&e)
		}
		rows, err := mustLookup(t, c.id).Equipment(e)
		if err != nil || len(rows) != len(c.want) {
			t.Fatalf("%s: %d rows, want %d, error %v", c.id, len(rows), len(c.want), err)
		}
		for _, r := range rows {
			value := 0.05
			if c.unit == Percent {
				value = 100 * 0.05 / 8
			}
			if !close6(r.Limit, c.want[r.Order]) || r.Unit != c.unit || !close6(r.Value, value) || r.Mark != Found || !close6(r.Share, r.Value/r.Limit) {
				t.Errorf("%s order %d: %+v, want %g %s of value %g, found", c.id, r.Order, r, c.want[r.Order], c.unit, value)
			}
		}
	}
}

// The ceiling of class A on class D: 3.4 mA/W of 600 W is 2.04 A, below 2.3 A;
// order 13 3.85/13 x 600 = 0.178 A, below 0.21 A. So within its range class D
// never meets the ceiling at order 3: by the documents' numbers it would from
// 676 W on (derived).
func TestCeilingOfClassD(t *testing.T) {
	e := applianceOf(8, 0.05)
	e.PowerW = 600
	rows, _ := mustLookup(t, "iec61000-3-2-class-d").Equipment(e)
	for _, r := range rows {
		if r.Order == 3 && !close6(r.Limit, 2.04) || r.Order == 13 && math.Abs(r.Limit-0.177692) > 1e-6 {
			t.Errorf("order %d: %g", r.Order, r.Limit)
		}
	}
}

// IEC 61000-3-12:2011 Tables 2, 3 and 4 (memory; Table 4 of medium confidence,
// so its values here are a regression, not a proof). Even orders 16/h per cent
// to order 12 (memory, high).
func TestTablesByShortCircuitRatio(t *testing.T) {
	type row struct {
		rsce   float64
		orders []float64
		thc    float64
		pwhc   float64
	}
	for _, c := range []struct {
		id     string
		orders []int
		rows   []row
	}{
		{"iec61000-3-12-other", []int{3, 5, 7, 9, 11, 13}, []row{
			{33, []float64{21.6, 10.7, 7.2, 3.8, 3.1, 2}, 23, 23},
			{66, []float64{24, 13, 8, 5, 4, 3}, 26, 26},
			{120, []float64{27, 15, 10, 6, 5, 4}, 30, 30},
			{250, []float64{35, 20, 13, 9, 8, 6}, 40, 40},
			{350, []float64{41, 24, 15, 12, 10, 8}, 47, 47}}},
		{"iec61000-3-12-balanced", []int{5, 7, 11, 13}, []row{
			{33, []float64{10.7, 7.2, 3.1, 2}, 13, 22},
			{66, []float64{14, 9, 5, 3}, 16, 25},
			{120, []float64{19, 12, 7, 4}, 22, 28},
			{250, []float64{31, 20, 12, 7}, 37, 38},
			{350, []float64{40, 25, 15, 10}, 48, 46}}},
		{"iec61000-3-12-balanced-abc", []int{5, 7, 11, 13}, []row{
			{33, []float64{10.7, 7.2, 3.1, 2}, 13, 22},
			{120, []float64{40, 25, 15, 10}, 48, 46}}},
	} {
		for i, w := range c.rows {
			for _, rsce := range []float64{w.rsce, 2 * w.rsce} {
				if rsce != w.rsce && i < len(c.rows)-1 {
					continue // beyond the last row its values hold
				}
				e := applianceOf(40, 0.4)
				_, _, sequ := e.ShortCircuitRatio()
				e.IscA = rsce * sequ / (math.Sqrt(3) * 400) * (1 + 1e-12)
				rows, err := mustLookup(t, c.id).Equipment(e)
				if err != nil {
					t.Fatalf("%s at Rsce %g: %v", c.id, rsce, err)
				}
				if want := len(c.orders) + 6 + 2; len(rows) != want {
					t.Fatalf("%s: %d rows, want %d", c.id, len(rows), want)
				}
				got := limitsByName(rows)
				for k, h := range c.orders {
					if math.Abs(got[h]-w.orders[k]) > 1e-6 {
						t.Errorf("%s Rsce %g order %d: %g, want %g", c.id, rsce, h, got[h], w.orders[k])
					}
				}
				for h := 2; h <= 12; h += 2 {
					if !close6(got[h], 16/float64(h)) {
						t.Errorf("%s order %d: %g, want %g", c.id, h, got[h], 16/float64(h))
					}
				}
				if math.Abs(got[-1]-w.thc) > 1e-6 || math.Abs(got[-2]-w.pwhc) > 1e-6 {
					t.Errorf("%s Rsce %g: THC %g, PWHC %g, want %g, %g", c.id, rsce, got[-1], got[-2], w.thc, w.pwhc)
				}
				for _, r := range rows {
					if r.Mark != Memory {
						t.Errorf("%s: a row is not marked as from memory: %+v", c.id, r)
					}
				}
			}
		}
	}
}

func limitsByName(rows []Row) map[int]float64 {
	out := map[int]float64{}
	for _, r := range rows {
		switch r.Index {
		case "THC":
			out[-1] = r.Limit
		case "PWHC":
			out[-2] = r.Limit
		default:
			out[r.Order] = r.Limit
		}
	}
	return out
}

// Between two rows the limits are interpolated (permitted by the document;
// memory, high): halfway from 33 to 66 the 5th may be (10.7 + 14)/2 (derived).
func TestInterpolatedRow(t *testing.T) {
	e := applianceOf(40, 0.4)
	_, _, sequ := e.ShortCircuitRatio()
	e.IscA = 49.5 * sequ / (math.Sqrt(3) * 400)
	rows, err := mustLookup(t, "iec61000-3-12-balanced").Equipment(e)
	if err != nil {
		t.Fatal(err)
	}
	if got := limitsByName(rows)[5]; math.Abs(got-12.35) > 1e-9 {
		t.Errorf("order 5: %g, want 12.35", got)
	}
	for _, r := range rows {
		if !strings.Contains(r.Rule, "Rsce 49.5, between rows 33 and 66, of Iref") {
			t.Errorf("rule %q", r.Rule)
		}
	}
}

// Rsce and the totals by their definitions (IEC 61000-3-12:2011, memory): a
// 40 A load at 400 V is 27.7 kVA; THC sqrt(5^2+3^2) and PWHC sqrt(25)*1 A of
// the 40 A (derived).
func TestRatioAndTotals(t *testing.T) {
	e := applianceOf(40, 0)
	for p := range e.Current {
		e.Current[p][5], e.Current[p][7], e.Current[p][25], e.Current[p][41] = 5, 3i, 1, 9
	}
	ratio, ssc, sequ := e.ShortCircuitRatio()
	if math.Abs(ssc-6.9282032e6) > 1 || math.Abs(sequ-27712.81) > 0.01 || math.Abs(ratio-250) > 1e-9 {
		t.Errorf("Ssc %g, Sequ %g, Rsce %g", ssc, sequ, ratio)
	}
	rows, err := mustLookup(t, "iec61000-3-12-balanced").Equipment(e)
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range rows {
		want := map[string]float64{"THC": 100 * math.Sqrt(25+9+1) / 40, "PWHC": 100 * 5 / 40.0}[r.Index]
		if r.Index != "" && !close6(r.Value, want) {
			t.Errorf("%s is %g %%, want %g", r.Index, r.Value, want)
		}
	}
	e.Wires = PhaseNeutral
	if r, _, s := e.ShortCircuitRatio(); math.Abs(r-250) > 1e-9 || math.Abs(s-9237.604) > 0.01 {
		t.Errorf("single-phase: Rsce %g, Sequ %g", r, s)
	}
	e.Wires = PhasePhase
	if r, _, _ := e.ShortCircuitRatio(); math.Abs(r-math.Sqrt(3)*10000/(2*40)) > 1e-9 {
		t.Errorf("interphase: Rsce %g", r)
	}
}

// What a document does not cover is said, and gives no rows.
func TestEquipmentNotAssessed(t *testing.T) {
	for _, c := range []struct {
		name, id, reason string
		change           func(*Equipment)
	}{
		{"network set", "ieee519-2022", "is no limit set for equipment", func(*Equipment) {}},
		{"too big", "iec61000-3-2-class-a", "takes 45 A a phase; IEC 61000-3-2 class A covers up to 16 A", func(e *Equipment) { e.ReferenceA = 45 }},
		{"too small", "iec61000-3-12-other", "takes 8 A a phase; IEC 61000-3-12:2011 Table 2 covers above 16 to 75 A", func(*Equipment) {}},
		{"other voltage", "iec61000-3-2-class-a", "does not cover equipment at 480 V", func(e *Equipment) { e.NominalV = 480 }},
		{"medium voltage", "iec61000-3-12-other", "does not cover", func(e *Equipment) { e.NominalV, e.ReferenceA = 11000, 40 }},
		{"no voltage", "iec61000-3-2-class-a", "nominal voltage", func(e *Equipment) { e.NominalV = 0 }},
		{"no current", "iec61000-3-2-class-a", "no current of the equipment", func(e *Equipment) { e.Current = [3]phasor.Spectrum{} }},
		{"below 75 W", "iec61000-3-2-class-a", "takes 60 W; IEC 61000-3-2 class A has no limits below 75 W (from memory", func(e *Equipment) { e.PowerW = 60 }},
		{"small lamp", "iec61000-3-2-class-c", "no limits below 25 W", func(e *Equipment) { e.PowerW = 20 }},
		{"no power", "iec61000-3-2-class-d", "active power", func(e *Equipment) { e.PowerW = 0 }},
		{"class D above 600 W", "iec61000-3-2-class-d", "covers up to 600 W", func(e *Equipment) { e.PowerW = 601 }},
		{"no Isc", "iec61000-3-12-other", "no short-circuit current", func(e *Equipment) { e.ReferenceA, e.IscA = 40, 0 }},
		{"weak point", "iec61000-3-12-other", "below the lowest row of IEC 61000-3-12:2011 Table 2, 33", func(e *Equipment) { e.ReferenceA, e.IscA = 40, 1000 }},
		{"single-phase in the balanced table", "iec61000-3-12-balanced", "balanced three-phase", func(e *Equipment) { e.ReferenceA, e.Wires = 40, PhaseNeutral }},
		{"unbalanced in the balanced table", "iec61000-3-12-balanced", "balanced three-phase", func(e *Equipment) { e.ReferenceA = 40; e.Current[1][1] = 3 }},
	} {
		e := applianceOf(8, 0.05)
		c.change(&e)
		rows, err := mustLookup(t, c.id).Equipment(e)
		reason, ok := IsNotAssessed(err)
		if rows != nil || !ok || !strings.Contains(reason, c.reason) {
			t.Errorf("%s: %d rows, %v; want %q", c.name, len(rows), err, c.reason)
		}
	}
	// exactly on the bounds: 16 A and 75 W still belong to IEC 61000-3-2, 75 A to 3-12
	e := applianceOf(16, 0.05)
	e.PowerW = 75
	if rows, err := mustLookup(t, "iec61000-3-2-class-a").Equipment(e); err != nil || len(rows) != 39 {
		t.Errorf("16 A and 75 W: %d rows, %v", len(rows), err)
	}
	e = applianceOf(75, 0.05)
	if _, err := mustLookup(t, "iec61000-3-12-balanced").Equipment(e); err != nil {
		t.Errorf("75 A: %v", err)
	}
}
