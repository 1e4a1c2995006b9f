package handout

import (
	"bytes"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"quietbus/study"
	"quietbus/study/phasor"
)

func mustResults(t *testing.T, in Input) (*Results, []byte) {
	t.Helper()
	doc, err := NewResults(in)
	if err != nil {
		t.Fatal(err)
	}
	var b bytes.Buffer
	if _, err := doc.WriteTo(&b); err != nil {
		t.Fatal(err)
	}
	return doc, b.Bytes()
}

// near compares to the nine digits that the document keeps.
func near(t *testing.T, what string, got Num, want float64) {
	t.Helper()
	if math.Abs(float64(got)-want) > 1e-8*math.Max(math.Abs(want), 1e-6) {
		t.Errorf("%s: %v, want %v", what, got, want)
	}
}

// TestResultsReadBack reads the written document and finds the outcome's
// numbers in it.
func TestResultsReadBack(t *testing.T) {
	in := sample()
	_, raw := mustResults(t, in)
	doc, err := ReadResults(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	for which, pair := range map[string]struct {
		state   *State
		outcome *study.Outcome
	}{"before": {doc.Before, in.Before}, "after": {doc.After, in.After}} {
		for i, b := range pair.state.Buses {
			want := &pair.outcome.Buses[i]
			for p, v := range []PhaseVoltage{b.Phases.A, b.Phases.B, b.Phases.C} {
				base := cmplx.Abs(want.Phase[p].At(1))
				near(t, which+" fundamental", v.FundamentalV, base)
				for h, percent := range v.Percent {
					z := want.Phase[p][h]
					if base == 0 {
						near(t, "dead bus", percent, 0)
						continue
					}
					near(t, which+" "+b.Name, percent, 100*cmplx.Abs(z)/base)
					if z != 0 {
						near(t, "angle", v.Degrees[h], cmplx.Phase(z)*180/math.Pi)
					}
				}
			}
			if len(b.Sequences.Positive.Percent) != in.Study.Order()+1 {
				t.Errorf("%s: %d orders, want %d", b.Name, len(b.Sequences.Positive.Percent), in.Study.Order()+1)
			}
			if b.Live {
				near(t, "positive sequence", b.Sequences.Positive.Percent[7], 100*cmplx.Abs(want.Seq[phasor.Positive][7]/want.Seq[phasor.Positive][1]))
				near(t, "5th is negative", b.Sequences.Positive.Percent[5]+b.Sequences.Negative.Percent[5]+b.Sequences.Zero.Percent[5],
					100*(cmplx.Abs(want.Seq[0][5])+cmplx.Abs(want.Seq[1][5])+cmplx.Abs(want.Seq[2][5]))/cmplx.Abs(want.Seq[phasor.Positive][1]))
			}
		}
		for i, e := range pair.state.Elements {
			for k, end := range e.Ends {
				want := &pair.outcome.Elements[i].Ends[k]
				for h, a := range end.Phases.B.A {
					near(t, e.Name, a, cmplx.Abs(want.Phase[1][h]))
				}
				if (end.Neutral == nil) != (want.Neutral == nil) {
					t.Errorf("%s end %d: neutral is lost or made up", e.Name, k)
				}
			}
		}
		for i, p := range pair.state.Points {
			for k, row := range p.Rows {
				want := pair.outcome.Points[i].Rows[k]
				near(t, row.Name, row.Share, want.Share)
				if (row.Verdict == "over") != (want.Value > want.Limit) {
					t.Errorf("%s %s: verdict %q for %v of %v", p.Name, row.Name, row.Verdict, want.Value, want.Limit)
				}
			}
		}
	}
}

// TestNotFinite makes one value of an outcome not a number.
func TestNotFinite(t *testing.T) {
	in := sample()
	in.After.Buses[1].Phase[2][5] = complex(math.NaN(), 0)
	_, err := NewResults(in)
	if err == nil || !strings.Contains(err.Error(), "after, bus Board A") {
		t.Fatalf("error %v does not name the bus", err)
	}
}

// TestProvenanceComplete compares the list with the study file itself: each
// key that the file states is there once.
func TestProvenanceComplete(t *testing.T) {
	in := sample()
	doc, _ := mustResults(t, in)
	seen := map[string]InputValue{}
	for _, v := range doc.Provenance {
		key := v.Item + "/" + v.Field
		if _, twice := seen[key]; twice {
			t.Errorf("%s is listed twice", key)
		}
		seen[key] = v
		if v.Label == "" {
			t.Errorf("%s has no label", key)
		}
	}
	for key, origin := range map[string]string{
		"Grid/faultMVA": "given", "Grid/xOverR": "assumed", "T1/impedancePercent": "measured",
		"T1/vectorGroup": "unstated", "PCC/nominalKV": "unstated", "Filter 5/order": "unstated", "Drives/lines": "unstated",
	} {
		v, ok := seen[key]
		if !ok || v.Origin != origin {
			t.Errorf("%s: origin %q (listed %v), want %q", key, v.Origin, ok, origin)
		}
	}
	if v := seen["T1/ratedKVA"]; v.Value != Num(1000) || v.Unit != "kVA" || v.Note != "nameplate" {
		t.Errorf("rated power: %+v", v)
	}
	if _, ok := seen["T1/tapPercent"]; ok {
		t.Error("an absent tap is listed as an input")
	}
}

func TestNumber(t *testing.T) {
	for v, want := range map[float64]string{
		0: "0", 1: "1", -2.5: "-2.5", 1.0 / 3: "0.333333333", 123456789.123: "123456789", 2e-14: "2e-14", 6350.85296108588: "6350.85296", 1e15: "1e+15",
	} {
		if got, err := Num(v).MarshalJSON(); err != nil || string(got) != want {
			t.Errorf("%v is written %s (%v), want %s", v, got, err, want)
		}
	}
	if _, err := Num(math.Inf(1)).MarshalJSON(); err == nil {
		t.Error("infinity is written")
	}
	for v, want := range map[float64]string{9.996: "10.0", 0.09996: "0.100", 12.34: "12.3", 6350.9: "6351", 1: "1.00", -0.5: "−0.500", 99.96: "100"} {
		if got := figures3(v); got != want {
			t.Errorf("%v with three digits is %s, want %s", v, got, want)
		}
	}
	if n, u := engineering(2.28e-3, "F"); n != "2.28" || u != "mF" {
		t.Errorf("2.28 mF is %s %s", n, u)
	}
	if money(1234567) != "1 234 567" || money(150) != "150" {
		t.Errorf("money: %s, %s", money(1234567), money(150))
	}
}
