package handout

import (
	"bytes"
	"context"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"quietbus/study"
)

// TestOperatingStates follows states from the study to page and document: the
// verdict is the worst state's, and is named as such.
func TestOperatingStates(t *testing.T) {
	in := solved(t)
	s := in.Study
	s.OperatingStates = []study.OperatingState{{Named: study.Named{Name: "Sunday"}, LoadPercent: 50}, {Named: study.Named{Name: "More pumps"}, Loads: []study.LoadShare{{Item: "Pumps", Percent: 140}}}}
	p, err := study.Prepare(s)
	if err != nil {
		t.Fatal(err)
	}
	if in.BeforeStates, err = p.EvaluateAll(context.Background(), nil); err != nil {
		t.Fatal(err)
	}
	if in.AfterStates, err = p.EvaluateAll(context.Background(), s.OnMeasures()); err != nil {
		t.Fatal(err)
	}
	in.Before, in.After = in.BeforeStates[0], in.AfterStates[0]
	doc, raw := mustResults(t, in)
	plain, err := jsonschema.UnmarshalJSON(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	if err := compiledSchema(t).Validate(plain); err != nil {
		t.Fatal(err)
	}
	if len(doc.States) != 3 || doc.States[2].Changes != "Pumps 140 %" {
		t.Fatalf("states: %+v", doc.States)
	}
	for k := range in.After.Points {
		worst, decides := -1.0, ""
		for i, o := range in.AfterStates {
			if share := o.Points[k].Worst().Share; share > worst {
				worst, decides = share, o.State
			}
			if got := float64(doc.States[i].Points[k].Share); got-o.Points[k].Worst().Share > 1e-8 {
				t.Errorf("%s: share %g", o.State, got)
			}
		}
		if !strings.Contains(doc.Verdict[k].Text, "operating states: "+decides) {
			t.Errorf("%q; %s decides", doc.Verdict[k].Text, decides)
		}
	}
	text, _ := summary(t, in, A4)
	for _, words := range []string{"Operating states", "Pumps 140 %", "load 50 %", "worst of 3 operating states"} {
		if !strings.Contains(squeezed(text), words) {
			t.Errorf("%q is not printed", words)
		}
	}
}
