package handout

import (
	"bytes"
	"context"
	"math"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"quietbus/study"
	"quietbus/study/phasor"
	"quietbus/testdata"
)

// solved returns a small invented study, evaluated without and with its
// measure: a six-pulse drive beside a bank that resonates near its 7th.
func solved(t testing.TB) Input {
	t.Helper()
	named := func(name string) study.Named { return study.Named{Name: name} }
	s := &study.Study{
		Format: 1, FrequencyHz: 50,
		Title:        study.Title{Study: "A pump house (invented)", Invented: true},
		Supplies:     []study.Supply{{Named: named("Grid"), Bus: "PCC", FaultMVA: 150, XOverR: 8}},
		Buses:        []study.Bus{{Named: named("PCC"), NominalKV: 11}, {Named: named("Board"), NominalKV: 0.4}},
		Transformers: []study.Transformer{{Named: named("T1"), HVBus: "PCC", LVBus: "Board", RatedKVA: 1000, HVKV: 11, LVKV: 0.4, ImpedancePercent: 6, XOverR: 6, VectorGroup: "Dyn11"}},
		NonlinearLoads: []study.NonlinearLoad{
			{Named: named("Pumps"), Bus: "Board", KW: 400, Spectrum: "six-pulse"},
			{Named: named("Office"), Bus: "Board", Connection: study.PhaseA, KW: 15, Spectrum: "single-phase-supply"},
		},
		Loads:       []study.Load{{Named: named("Light"), Bus: "Board", KW: 60, Kvar: 20}},
		Banks:       []study.Bank{{Named: named("C1"), Bus: "Board", Kvar: 250}},
		Measures:    []study.Measure{{Named: named("Detune"), Kind: study.DetuneBank, Target: "C1", Percent: 7, On: true, Cost: 3000}},
		Assessments: []study.Assessment{{Named: named("At the PCC"), Bus: "PCC", Set: "ieee519-2022", Current: "Grid", DemandA: 40}, {Named: named("On site"), Bus: "Board", Set: "iec61000-2-4-class2"}},
		Scans:       []study.ScanRequest{{Named: named("Board, zero"), Bus: "Board", Sequence: "zero"}},
	}
	in := Input{Study: s, Version: "test"}
	var err error
	if in.Before, err = study.Evaluate(context.Background(), s, nil); err != nil {
		t.Fatal(err)
	}
	if in.After, err = study.Evaluate(context.Background(), s, s.OnMeasures()); err != nil {
		t.Fatal(err)
	}
	return in
}

// TestSolved follows a study from its nameplates to results.json. At each bus
// the currents of all ends add to nothing (Kirchhoff), order by order, as read
// from the document alone: a check of its signs, angles and ends.
func TestSolved(t *testing.T) {
	in := solved(t)
	_, raw := mustResults(t, in)
	plain, err := jsonschema.UnmarshalJSON(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	if err := compiledSchema(t).Validate(plain); err != nil {
		t.Fatal(err)
	}
	doc, err := ReadResults(bytes.NewReader(raw))
	if err != nil {
		t.Fatal(err)
	}
	for which, s := range map[string]*State{"before": doc.Before, "after": doc.After} {
		for _, bus := range s.Buses {
			for h := 1; h <= doc.Settings.MaxOrder; h++ {
				var re, im, size float64
				for _, e := range s.Elements {
					for _, end := range e.Ends {
						if end.Bus != bus.Name {
							continue
						}
						a, deg := float64(end.Phases.A.A[h]), float64(end.Phases.A.Degrees[h])*math.Pi/180
						re, im, size = re+a*math.Cos(deg), im+a*math.Sin(deg), size+a
					}
				}
				if size == 0 && (h == 1 || h == 5 || h == 7 || h == 11) {
					t.Errorf("%s: no current at %s, order %d", which, bus.Name, h)
				}
				if math.Hypot(re, im) > 1e-6*size {
					t.Errorf("%s: %s order %d: currents add to %g A of %g A", which, bus.Name, h, math.Hypot(re, im), size)
				}
			}
		}
		if len(s.Scans) != 1 || s.Scans[0].Sequence != phasor.Zero.String() || len(s.Scans[0].Orders) < 50 {
			t.Errorf("%s: the scan that was asked for is not there", which)
		}
	}
	if doc.Before.MeetsAll || len(doc.After.Measures) != 1 || len(doc.After.Measures[0].Components) == 0 {
		t.Error("before meets its limits, or the measure is not described")
	}
}

// TestSolvedPrinted prints it, with impedances made on the spot.
func TestSolvedPrinted(t *testing.T) {
	in := solved(t)
	text, _ := summary(t, in, Letter)
	flat := squeezed(text)
	for _, want := range []string{"Driving-point impedance at PCC", "Driving-point impedance at Board", "Driving-point impedance at Board, zero sequence", "Detuning reactor before a bank, 7 %", "Waveform of the current of Grid", "Left at the program's default"} {
		if !strings.Contains(flat, want) {
			t.Errorf("%q is not printed", want)
		}
	}
}

// TestDigest is the digest of the file's bytes where they are given.
func TestDigest(t *testing.T) {
	in := Input{Study: &study.Study{}, File: []byte("abc")}
	// FIPS 180-2, appendix B.1 (from memory)
	if got, err := in.digest(); err != nil || got != "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad" {
		t.Errorf("%s, %v", got, err)
	}
	in = solved(t)
	asSaved, err := in.Study.Bytes()
	if err != nil {
		t.Fatal(err)
	}
	without, _ := in.digest()
	in.File = asSaved
	if with, _ := in.digest(); with != without {
		t.Error("a study that was saved has another digest than its file")
	}
}

// demo returns the program's demonstration, evaluated with measures on.
func demo(t testing.TB, on ...string) Input {
	t.Helper()
	s, err := study.Read(bytes.NewReader(testdata.Demo))
	if err != nil {
		t.Fatal(err)
	}
	in := Input{Study: s, File: testdata.Demo, Version: "test"}
	if in.Before, err = study.Evaluate(context.Background(), s, nil); err != nil {
		t.Fatal(err)
	}
	if in.After, err = study.Evaluate(context.Background(), s, on); err != nil {
		t.Fatal(err)
	}
	return in
}
