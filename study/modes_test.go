package study_test

import (
	"context"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"quietbus/study"
	"quietbus/study/phasor"
	"quietbus/testdata"
)

func demoStudy(t *testing.T) *study.Prepared {
	t.Helper()
	s, err := study.Parse(testdata.Demo)
	if err != nil {
		t.Fatal(err)
	}
	p, err := study.Prepare(s)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Detuning a bank moves its resonance below its tuned order, and the same
// items stay its makers; removing it makes the resonance disappear. (An
// identity of two reactances: behind a reactor of p per cent the bank's
// resonance lies below 10/sqrt(p).)
func TestResonanceMoves(t *testing.T) {
	p := demoStudy(t)
	ctx := context.Background()
	at := func(on ...string) []study.Peak {
		r, err := p.Impedance(ctx, on, "Compressors", phasor.Positive, 1, 25)
		if err != nil {
			t.Fatal(err)
		}
		return r.Peaks
	}
	before := at()
	if len(before) == 0 || before[0].Buses[0].Bus != "Compressors" || !strings.Contains(before[0].Words(), "C1 against") {
		t.Fatalf("%+v", before)
	}
	total := 0.0
	for _, b := range before[0].Buses {
		total += b.Share
	}
	if total < 0.8 || total > 1.0001 {
		t.Errorf("shares add to %.3f", total)
	}
	moved := study.Moves(before, at("Detune C1"))[0]
	if moved.After == nil || moved.After.Order > 3.8 || !strings.Contains(moved.Words(), "moves to order") {
		t.Errorf("detuned: %s", moved.Words())
	}
	gone := study.Moves(before, at("Remove C1"))
	if w := gone[0].Words(); !strings.Contains(w, "is gone") && !strings.Contains(w, "moves to order") {
		t.Errorf("removed: %s", w)
	}
	if stay := study.Moves(before, before); len(stay) != len(before) || !strings.HasSuffix(stay[0].Words(), "stays") {
		t.Errorf("nothing flipped: %s", stay[0].Words())
	}
	modes, err := p.Modes(ctx, nil, "", phasor.Positive, 1, 25)
	if err != nil {
		t.Fatal(err)
	}
	found := false
	for _, m := range modes {
		found = found || math.Abs(m.Order-before[0].Order) < 0.02*before[0].Order && m.Words() == before[0].Words()
	}
	if !found {
		t.Errorf("the resonance that shows at the bus is no mode of the network: %+v", modes)
	}
}

// A transfer impedance is the same in both directions but for the turn of the
// vector groups between (reciprocity), and carries that turn: 30 degrees by
// clock 11, forward in the positive and backward in the negative sequence.
func TestTransferImpedance(t *testing.T) {
	s, err := study.Parse(testdata.Demo)
	if err != nil {
		t.Fatal(err)
	}
	scan := func(from, to, seq string) study.ScanResult {
		c := s.Clone()
		c.Scans = []study.ScanRequest{{Bus: from, At: to, Sequence: seq, From: 2, To: 2.5}}
		c.Scans[0].Name = "transfer"
		o, err := study.Evaluate(context.Background(), c, nil)
		if err != nil {
			t.Fatal(err)
		}
		if len(o.Scans) != 1 {
			t.Fatal(o.Warnings)
		}
		return o.Scans[0]
	}
	there, back := scan("PCC", "Compressors", "positive"), scan("Compressors", "PCC", "positive")
	if there.At != "Compressors" {
		t.Errorf("%+v", there.At)
	}
	a, b := there.Z[0], back.Z[0]
	if math.Abs(cmplx.Abs(a)-cmplx.Abs(b)) > 1e-9*cmplx.Abs(a) {
		t.Errorf("|Z| %v there, %v back", cmplx.Abs(a), cmplx.Abs(b))
	}
	turn := cmplx.Phase(a/b) * 180 / math.Pi
	neg := cmplx.Phase(scan("PCC", "Compressors", "negative").Z[0]/scan("Compressors", "PCC", "negative").Z[0]) * 180 / math.Pi
	if math.Abs(math.Abs(turn)-60) > 1e-6 || math.Abs(turn+neg) > 1e-6 {
		t.Errorf("turned by %.6f in the positive, %.6f in the negative sequence, want twice 30 deg", turn, neg)
	}
	c := s.Clone()
	c.Scans = []study.ScanRequest{{Bus: "PCC", At: "nowhere"}}
	c.Scans[0].Name = "transfer"
	if _, err := study.Evaluate(context.Background(), c, nil); err == nil || !strings.Contains(err.Error(), "nowhere") {
		t.Errorf("%v", err)
	}
}
