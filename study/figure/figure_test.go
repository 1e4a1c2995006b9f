package figure

import (
	"bytes"
	"context"
	"fmt"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
	"pgregory.net/rapid"

	"quietbus/study"
	"quietbus/study/phasor"
	"quietbus/testdata"
)

// demo returns the demonstration before and after some measures.
func demo(t testing.TB, on ...string) (s *study.Study, before, after *study.Outcome) {
	t.Helper()
	s, err := study.Parse(testdata.Demo)
	if err != nil {
		t.Fatal(err)
	}
	p, err := study.Prepare(s)
	if err != nil {
		t.Fatal(err)
	}
	if before, err = p.Evaluate(context.Background(), nil); err != nil {
		t.Fatal(err)
	}
	if after, err = p.Evaluate(context.Background(), on); err != nil {
		t.Fatal(err)
	}
	return s, before, after
}

func scans(t testing.TB, s *study.Study, bus string, on ...string) []*study.ScanResult {
	t.Helper()
	r, err := study.Impedance(context.Background(), s, on, bus, phasor.Positive, 1, 50)
	if err != nil {
		t.Fatal(err)
	}
	return []*study.ScanResult{r}
}

// figures is every figure of the demo with some measures on.
func figures(t testing.TB, on ...string) []*Figure {
	s, b, a := demo(t, on...)
	var list []*Figure
	for _, bus := range s.Buses {
		list = append(list, Spectrum(b, a, Selection{Bus: bus.Name}), Waveform(b, a, Selection{Bus: bus.Name}),
			Impedance(scans(t, s, bus.Name), scans(t, s, bus.Name, on...), []int{5, 7, 11, 13, 17, 19}))
	}
	for _, e := range a.Elements {
		list = append(list, Spectrum(b, a, Selection{Element: e.Name}), Waveform(b, a, Selection{Element: e.Name}))
	}
	return append(list, Margins(b, a), SingleLine(s, b, a, nil, View{}))
}

// words are the texts that a figure writes, with the room they take.
type words struct {
	text string
	box  vg.Rectangle
}

// record draws on a canvas that keeps what is drawn.
func record(f *Figure, w, h vg.Length) (hots []Hot, texts []words) { return recordIn(Light(), f, w, h) }

func recordIn(st *Style, f *Figure, w, h vg.Length) (hots []Hot, texts []words) {
	s := sketchIn(st, f, w, h)
	return s.hots, s.texts
}

// No two texts of a figure lie over each other, none leaves the canvas, and no
// place that answers does, at the size of paper and of a small panel.
func TestTextsKeepApart(t *testing.T) {
	for _, on := range [][]string{{"Filter 5"}, {"Filter 7"}, {"Detune C1", "Reactor K1", "Active filter"}} {
		for _, f := range figures(t, on...) {
			if f.Key == "single-line" {
				continue // fits itself by scaling: see below
			}
			for _, size := range []vg.Point{f.Size, {X: 330, Y: 200}, {X: 250, Y: 150}, {X: 200, Y: 110}} {
				st := Light()
				if size == (vg.Point{X: 250, Y: 150}) { // a quarter of the window's evidence
					st = st.Scaled(1.3)
				}
				if size.X == 200 { // type at 200 %
					st = st.Scaled(2.3)
				}
				hots, texts := recordIn(st, f, size.X, size.Y)
				for i, a := range texts {
					if a.box.Min.X < -0.5 || a.box.Max.X > size.X+0.5 || a.box.Min.Y < -0.5 || a.box.Max.Y > size.Y+0.5 {
						t.Errorf("%s at %.0f x %.0f: %q leaves the canvas", f.Key, size.X, size.Y, a.text)
					}
					for _, b := range texts[:i] {
						if meet(a.box, b.box) {
							t.Errorf("%s at %.0f x %.0f: %q lies over %q", f.Key, size.X, size.Y, a.text, b.text)
						}
					}
				}
				for _, h := range hots {
					if h.Rect.Min.X < -1 || h.Rect.Max.X > size.X+1 || h.Rect.Min.Y < -1 || h.Rect.Max.Y > size.Y+1 {
						t.Errorf("%s: the place %s leaves the canvas", f.Key, h.ID)
					}
				}
			}
		}
	}
}

// The read-out of an order says its values and its limit.
func TestReadout(t *testing.T) {
	_, b, a := demo(t, "Detune C1")
	hots, texts := record(Spectrum(b, a, Selection{Bus: "Compressors"}), 480, 240)
	i := slices.IndexFunc(hots, func(h Hot) bool { return h.ID == "7" })
	if i < 0 {
		t.Fatal("order 7 does not answer")
	}
	was, now := 0.0, 0.0
	for p := range 3 {
		v := b.Bus("Compressors").Phase[p]
		was = max(was, 100*abs64(v[7])/abs64(v[1]))
		v = a.Bus("Compressors").Phase[p]
		now = max(now, 100*abs64(v[7])/abs64(v[1]))
	}
	for _, want := range []string{"Order 7", "before\t" + number(was) + " %", "after\t" + number(now) + " %", "limit\t5.00 %"} {
		if !strings.Contains(hots[i].Text, want) {
			t.Errorf("%q does not say %q", hots[i].Text, want)
		}
	}
	if !slices.ContainsFunc(texts, func(w words) bool { return strings.Contains(w.text, "class 2") }) {
		t.Error("the limit's name is not written")
	}
	_, worse, _ := record2(t, "Filter 7")
	if !slices.ContainsFunc(worse, func(w words) bool { return strings.HasPrefix(w.text, "over ") }) {
		t.Error("an exceeded limit is not told in words")
	}
}

func record2(t *testing.T, on string) ([]Hot, []words, *study.Outcome) {
	_, b, a := demo(t, on)
	h, w := record(Spectrum(b, a, Selection{Bus: "Compressors"}), 480, 240)
	return h, w, a
}

func abs64(v complex128) float64 { return (phasor.RMS(phasor.Spectrum{v})) }

// Empty states speak: every figure draws a sentence when it has nothing.
func TestEmptyStates(t *testing.T) {
	s := &study.Study{FrequencyHz: 50}
	for _, f := range []*Figure{
		Spectrum(nil, nil, Selection{Bus: "x"}), Waveform(nil, nil, Selection{Element: "x"}), Impedance(nil, nil, nil),
		Margins(nil, &study.Outcome{Study: s}), Margins(nil, nil), SingleLine(s, nil, nil, nil, View{}),
	} {
		_, texts := record(f, 200, 160)
		if len(texts) == 0 {
			t.Errorf("%s: nothing is said", f.Key)
		}
		for _, w := range texts {
			if w.box.Min.X < 0 || w.box.Max.X > 200 {
				t.Errorf("%s: %q leaves the canvas", f.Key, w.text)
			}
		}
	}
	whole, _, a := demo(t)
	if _, texts := record(Spectrum(nil, a, Selection{Bus: "PCC"}), 300, 200); len(texts) < 4 {
		t.Error("one outcome alone is not drawn")
	}
	if _, texts := record(SingleLine(whole, nil, nil, nil, View{}), 600, 600); len(texts) < 20 {
		t.Error("a study that is not solved yet is not drawn")
	}
}

// Every measure, bus and item of the single-line answers, each measure by a
// switch too; on paper there is no switch.
func TestSingleLinePlaces(t *testing.T) {
	s, b, a := demo(t, "Filter 5")
	f := SingleLine(s, b, a, nil, View{})
	hots, texts := record(f, f.Size.X, f.Size.Y)
	count := func(role, id string) (n int) {
		for _, h := range hots {
			if h.Role == role && h.ID == id {
				n++
			}
		}
		return n
	}
	for _, x := range s.Buses {
		if count("bus", x.Name) != 1 {
			t.Errorf("bus %s answers %d times", x.Name, count("bus", x.Name))
		}
	}
	for _, x := range s.Measures {
		if count("switch", x.Name) != 1 || count("measure", x.Name) != 1 {
			t.Errorf("measure %s does not answer", x.Name)
		}
	}
	for _, k := range []study.Kind{study.KindSupply, study.KindTransformer, study.KindCable, study.KindLoad, study.KindMotor, study.KindNonlinearLoad, study.KindBank} {
		for _, item := range s.Items(k) {
			if count("item", study.NameOf(item)) != 1 {
				t.Errorf("%s %s does not answer", k, study.NameOf(item))
			}
		}
	}
	for i, x := range texts {
		for _, y := range texts[:i] {
			if meet(x.box, y.box) {
				t.Errorf("%q lies over %q", x.text, y.text)
			}
		}
	}
	plain, _ := record(SingleLine(s, b, a, nil, View{Plain: true}), 400, 400)
	if slices.ContainsFunc(plain, func(h Hot) bool { return h.Role == "switch" }) {
		t.Error("a switch on paper")
	}
}

// Tidy never lays two buses or their rows over each other, whatever the tree.
func TestTidyKeepsApart(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := &study.Study{FrequencyHz: 50, Supplies: []study.Supply{{Named: study.Named{Name: "S"}, Bus: "b0", FaultMVA: 10, XOverR: 5}}}
		n := rapid.IntRange(1, 30).Draw(t, "buses")
		for i := range n {
			name := fmt.Sprint("b", i)
			s.Buses = append(s.Buses, study.Bus{Named: study.Named{Name: name}, NominalKV: 0.4})
			if i > 0 {
				from := fmt.Sprint("b", rapid.IntRange(0, i-1).Draw(t, "from"))
				if rapid.Bool().Draw(t, "transformer") {
					s.Transformers = append(s.Transformers, study.Transformer{Named: study.Named{Name: fmt.Sprint("t", i)}, HVBus: from, LVBus: name})
				} else {
					s.Cables = append(s.Cables, study.Cable{Named: study.Named{Name: fmt.Sprint("c", i)}, From: from, To: name})
				}
			}
			for k := range rapid.IntRange(0, 4).Draw(t, "loads") {
				s.Loads = append(s.Loads, study.Load{Named: study.Named{Name: fmt.Sprint("l", i, "-", k)}, Bus: name, KW: 1})
			}
		}
		lay := Tidy(s)
		if len(lay.Buses) != n {
			t.Fatalf("%d of %d buses placed", len(lay.Buses), n)
		}
		type place struct {
			bus string
			box vg.Rectangle
		}
		var places []place
		for _, b := range lay.Buses {
			x, y := vg.Length(b.X), vg.Length(b.Y)
			places = append(places, place{b.Name, rect(x, y-vg.Length(b.Head)+0.1, x+vg.Length(b.W), y)})
			if len(b.Rows) > 0 {
				places = append(places, place{b.Name, rect(x+vg.Length(b.Stem), y+0.1, x+columnWidth, vg.Length(b.Bottom))})
			}
			if b.X < 0 || b.X+b.W > lay.W || b.Y < 0 || b.Y > lay.H {
				t.Fatalf("%s leaves the layout", b.Name)
			}
		}
		for i := range lay.Feeders {
			f := &lay.Feeders[i]
			from, to := lay.Bus(f.From), lay.Bus(f.To)
			if !f.straight(from, to) {
				continue
			}
			line := rect(vg.Length(f.X), vg.Length(from.Y)+0.2, vg.Length(f.X), vg.Length(to.Y)-0.2)
			for j := range lay.Buses {
				b := &lay.Buses[j]
				rows := rect(vg.Length(b.X+b.Stem), vg.Length(b.Y)+0.1, vg.Length(b.X+columnWidth), vg.Length(b.Bottom)-0.1)
				if len(b.Rows) > 0 && line.Min.X >= rows.Min.X && line.Max.X <= rows.Max.X && line.Min.Y < rows.Max.Y && line.Max.Y > rows.Min.Y {
					t.Fatalf("%s passes through what hangs on %s", f.Name, b.Name)
				}
			}
		}
		for i, a := range places {
			for _, b := range places[:i] {
				if meet(a.box, b.box) && a.bus != b.bus {
					t.Fatalf("%s lies over %s", a.bus, b.bus)
				}
			}
		}
	})
}

func TestNumber(t *testing.T) {
	for v, want := range map[float64]string{0: "0", 1.2345: "1.23", 12.345: "12.3", 123.45: "123", 1234.5: "1230", 0.012345: "0.0123", -3.456: "-3.46", 2e7: "2.00e+07", 9.999: "10.0"} {
		if got := number(v); got != want {
			t.Errorf("%g: %q, want %q", v, got, want)
		}
	}
}

// The caption says the distortion that the outcome has.
func TestCaption(t *testing.T) {
	_, b, a := demo(t, "Filter 5")
	f := Spectrum(b, a, Selection{Bus: "Compressors"})
	if want := "THD " + number(100*b.Bus("Compressors").THD()) + " % before"; !strings.Contains(f.Caption, want) {
		t.Errorf("%q does not say %q", f.Caption, want)
	}
	if !bytes.Contains([]byte(f.Key), []byte("compressors")) {
		t.Errorf("key %q", f.Key)
	}
}
