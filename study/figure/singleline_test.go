package figure

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"pgregory.net/rapid"

	"quietbus/study"
	"quietbus/testdata"
)

// The sketch sees what it must: a line through a text, and not one that a patch
// of ground covers.
func TestSketch(t *testing.T) {
	through := func(patch bool) []string {
		f := &Figure{Draw: func(c draw.Canvas, st *Style) []Hot {
			p := newPen(c, st)
			p.stroke(1, st.Ink, nil, vg.Point{X: 10, Y: 100}, vg.Point{X: 390, Y: 100})
			if patch {
				p.patch(50, 100, st.Body, st.Ink, false, "words")
			} else {
				p.write(50, 100, left, st.Body, st.Ink, "words")
			}
			return nil
		}}
		s := sketchOf(f, 400, 300)
		return s.crossed()
	}
	if len(through(false)) != 1 || len(through(true)) != 0 {
		t.Errorf("seen %v, under a patch %v", through(false), through(true))
	}
}

// No line of a single-line runs through a text, no two texts meet, and each
// switch is 24 points high: the demonstration, thirty buses, both as on paper
// and as in the window.
func TestSingleLineReads(t *testing.T) {
	big, err := study.Parse(testdata.Thirty)
	if err != nil {
		t.Fatal(err)
	}
	s, before, after := demo(t, "Filter 7")
	for _, plain := range []bool{true, false} {
		for _, f := range []*Figure{SingleLine(s, before, after, nil, View{Plain: plain}), SingleLine(big, nil, nil, nil, View{Plain: plain})} {
			sk := sketchOf(f, f.Size.X, f.Size.Y)
			for _, x := range append(sk.crossed(), sk.piled()...) {
				t.Error(x)
			}
			for _, h := range sk.hots {
				if r := h.Rect; h.Role == "switch" && (r.Max.X-r.Min.X < 23.9 || r.Max.Y-r.Min.Y < 23.9) {
					t.Errorf("switch %s is %.0f x %.0f", h.ID, r.Max.X-r.Min.X, r.Max.Y-r.Min.Y)
				}
				if h.Rect.Min.X < -1 || h.Rect.Min.Y < -1 || h.Rect.Max.X > f.Size.X+1 || h.Rect.Max.Y > f.Size.Y+1 {
					t.Errorf("%s %s leaves the canvas", h.Role, h.ID)
				}
			}
		}
	}
	if f := SingleLine(big, nil, nil, nil, View{}); f.Size.X/f.Size.Y > 3 {
		t.Errorf("thirty buses take %v: too wide to read", f.Size)
	}
}

// drawStudy makes a random study: a tree of buses with loads and measures, and,
// with meshes, further connections.
func drawStudy(t *rapid.T, meshes bool) *study.Study {
	named := func(format string, a ...any) study.Named { return study.Named{Name: fmt.Sprintf(format, a...)} }
	s := &study.Study{FrequencyHz: 50}
	for i := range rapid.IntRange(1, 2).Draw(t, "supplies") {
		s.Supplies = append(s.Supplies, study.Supply{Named: named("Supply %d", i), Bus: "Board 0", FaultMVA: 100, XOverR: 10})
	}
	n := rapid.IntRange(1, 30).Draw(t, "buses")
	for i := range n {
		bus := fmt.Sprint("Board ", i)
		s.Buses = append(s.Buses, study.Bus{Named: named("Board %d", i), NominalKV: 0.4})
		if i > 0 {
			from := fmt.Sprint("Board ", rapid.IntRange(max(0, i-6), i-1).Draw(t, "from"))
			switch rapid.IntRange(0, 3).Draw(t, "feeder") {
			case 0:
				s.Cables = append(s.Cables, study.Cable{Named: named("Cable %d", i), From: from, To: bus, LengthM: 100})
			case 1:
				s.Couplers = append(s.Couplers, study.Coupler{Named: named("Coupler %d", i), From: from, To: bus, Closed: true})
			case 2:
				s.Reactors = append(s.Reactors, study.Reactor{Named: named("Reactor %d", i), From: from, To: bus})
			default:
				for k := range rapid.IntRange(1, 2).Draw(t, "parallel") {
					s.Transformers = append(s.Transformers, study.Transformer{Named: named("T%d-%d", i, k), HVBus: from, LVBus: bus, RatedKVA: 1000, VectorGroup: "Dyn11"})
				}
			}
		}
		for k := range rapid.IntRange(0, 4).Draw(t, "loads") {
			s.Loads = append(s.Loads, study.Load{Named: named("Load %d-%d", i, k), Bus: bus, KW: 50})
		}
		if rapid.Bool().Draw(t, "measure") {
			s.Measures = append(s.Measures, study.Measure{Named: named("Filter %d", i), Kind: study.SingleTuned, Bus: bus, Kvar: 100, Order: 4.7})
		}
	}
	if meshes && n > 2 {
		for k := range rapid.IntRange(1, 3).Draw(t, "meshes") {
			a, b := rapid.IntRange(0, n-1).Draw(t, "a"), rapid.IntRange(0, n-1).Draw(t, "b")
			if a != b {
				s.Couplers = append(s.Couplers, study.Coupler{Named: named("Tie %d", k), From: fmt.Sprint("Board ", a), To: fmt.Sprint("Board ", b)})
			}
		}
	}
	return s
}

// Any tree reads: no two texts meet, no line runs through a text, every bus and
// item answers.
func TestAnyTreeReads(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawStudy(t, false)
		f := SingleLine(s, nil, nil, nil, View{})
		sk := sketchOf(f, f.Size.X, f.Size.Y)
		if bad := append(sk.piled(), sk.crossed()...); len(bad) > 0 {
			t.Fatalf("%s", strings.Join(bad, "\n"))
		}
		want := len(s.Supplies) + len(s.Loads) + len(s.Cables) + len(s.Couplers) + len(s.Reactors) + len(s.Transformers)
		items := map[string]bool{}
		for _, h := range sk.hots {
			if h.Role == "item" {
				items[h.ID] = true
			}
		}
		if len(items) != want {
			t.Fatalf("%d of %d items answer", len(items), want)
		}
	})
}

// Meshes are drawn: every tie has a way from one of its bars to the other, and
// answers.
func TestMeshesAreDrawn(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := drawStudy(t, true)
		lay := Tidy(s)
		for i := range lay.Feeders {
			f := &lay.Feeders[i]
			from, to := lay.Bus(f.From), lay.Bus(f.To)
			if f.straight(from, to) || f.sideways(from, to) {
				continue
			}
			if len(f.Way) < 2 || !ends(f.Way[0], from, to) || !ends(f.Way[len(f.Way)-1], from, to) {
				t.Fatalf("%s has no way: %v", f.Name, f.Way)
			}
			for _, q := range f.Way {
				if q.X < 0 || q.Y < 0 || q.X > lay.W || q.Y > lay.H {
					t.Fatalf("%s leaves the drawing: %v", f.Name, f.Way)
				}
			}
		}
		f := SingleLine(s, nil, nil, lay, View{})
		sk := sketchOf(f, f.Size.X, f.Size.Y)
		for _, c := range s.Couplers {
			if !slices.ContainsFunc(sk.hots, func(h Hot) bool { return h.ID == c.Name && h.Role == "item" }) {
				t.Fatalf("%s does not answer", c.Name)
			}
		}
	})
}

// ends reports whether a point is an end of one of two bars.
func ends(q study.Point, bars ...*PlacedBus) bool {
	for _, b := range bars {
		if q.Y == b.Y && (q.X == b.X || q.X == b.X+b.W) {
			return true
		}
	}
	return false
}

// A place given by hand is kept, and what hangs on it moves along.
func TestDrawnPlacesHold(t *testing.T) {
	s, _, _ := demo(t)
	s.Drawing = map[string]study.Point{"Yard": {X: 60, Y: 55}}
	lay := Tidy(s)
	b := lay.Bus("Yard")
	if b.X != 60 || b.Y != 55 || b.Bottom < 55 || lay.W < 60+b.W || lay.H < b.Bottom {
		t.Errorf("Yard stands at %v, %v in %v x %v", b.X, b.Y, lay.W, lay.H)
	}
	f := SingleLine(s, nil, nil, lay, View{})
	for _, h := range sketchOf(f, f.Size.X, f.Size.Y).hots {
		if h.ID == "Fast chargers" && (h.Rect.Min.X < 60*Step || h.Rect.Max.Y > f.Size.Y-55*Step) {
			t.Errorf("its load stayed behind at %v", h.Rect)
		}
	}
}

// A bus that no supply reaches says so; one over its limit is marked by shape
// and word; without results neither is claimed.
func TestBusWords(t *testing.T) {
	s, before, after := demo(t, "Filter 7")
	say := func(f *Figure) string {
		var all []string
		for _, x := range sketchOf(f, f.Size.X, f.Size.Y).texts {
			all = append(all, x.text)
		}
		return strings.Join(all, "\n")
	}
	if words := say(SingleLine(s, before, after, nil, View{})); !strings.Contains(words, "over 3×") || !strings.Contains(words, "THD 19.1 → 18.3 %") {
		t.Errorf("%s", words)
	}
	if words := say(SingleLine(s, nil, nil, nil, View{})); strings.Contains(words, "over ") || strings.Contains(words, "THD") {
		t.Errorf("%s", words)
	}
	dark := *after
	dark.Buses = slices.Clone(after.Buses)
	dark.Buses[4].Live = false
	if words := say(SingleLine(s, before, &dark, nil, View{})); !strings.Contains(words, "no supply") {
		t.Errorf("%s", words)
	}
}
