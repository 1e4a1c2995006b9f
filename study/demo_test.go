package study

import (
	"bytes"
	"context"
	"testing"

	"quietbus/testdata"
)

func demo(t testing.TB) *Study {
	t.Helper()
	s, err := Read(bytes.NewReader(testdata.Demo))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// The demo tells its story: something fails before for a resonance near the
// seventh, one sensible set meets everything, one tempting measure makes it
// worse.
func TestDemoStory(t *testing.T) {
	p, err := Prepare(demo(t))
	if err != nil {
		t.Fatal(err)
	}
	show := func(on ...string) *Outcome {
		o, err := p.Evaluate(context.Background(), on)
		if err != nil {
			t.Fatal(err)
		}
		return o
	}
	before := show()
	if before.MeetsAll() {
		t.Error("the demo meets its limits before")
	}
	scan := before.Scans[0]
	if len(scan.Peaks) == 0 || scan.Peaks[0].Order < 6.5 || scan.Peaks[0].Order > 8 {
		t.Errorf("the resonance is not beside the seventh: %v", scan.Peaks)
	}
	if words := scan.Peaks[0].Words(); words != "C1 against T1" && words != "C1 against T1 and Grid" {
		t.Errorf("the resonance is %q", words)
	}
	if w := before.Points[1].Worst(); w.Order != 7 {
		t.Errorf("the worst row is %s, not the seventh", RowName(*w))
	}
	good := show("Filter 5", "Reactor K1")
	if !good.MeetsAll() {
		t.Error("the sensible set does not pass")
	}
	bad := show("Filter 7")
	if bad.Points[0].Worst().Share <= before.Points[0].Worst().Share {
		t.Error("the tempting filter does not make it worse")
	}
}

// The demo file is exactly what saving it writes, so that saving it changes no
// line.
func TestDemoIsFormatted(t *testing.T) {
	data, err := demo(t).Bytes()
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(data, testdata.Demo) {
		t.Error("testdata/demo.study.json is not in the form that Save writes")
	}
	if w := demo(t).Warnings(); len(w) > 0 {
		t.Errorf("unusual values in the demo: %v", w[0])
	}
}
