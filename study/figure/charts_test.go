package figure

import (
	"context"
	"image/color"
	"math"
	"math/cmplx"
	"slices"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
	"quietbus/study/phasor"
)

// An axisScale reads values off a drawn figure: it knows where the labels of
// the y axis stand, and nothing of how the figure was made.
type axisScale struct{ y0, v0, y1, v1 float64 }

// scaleOf takes the lowest and the highest of the labels that end left of x.
func scaleOf(t *testing.T, sk *sketch, x vg.Length, log bool) axisScale {
	t.Helper()
	var s axisScale
	found := 0
	for _, w := range sk.texts {
		v, err := strconv.ParseFloat(w.text, 64)
		if err != nil || w.box.Max.X > x {
			continue
		}
		if log {
			v = math.Log10(v)
		}
		y := float64(w.box.Min.Y+w.box.Max.Y) / 2
		if found == 0 || v < s.v0 {
			s.y0, s.v0 = y, v
		}
		if found == 0 || v > s.v1 {
			s.y1, s.v1 = y, v
		}
		found++
	}
	if found < 2 {
		t.Fatalf("only %d labels on the y axis", found)
	}
	return s
}

func (s axisScale) value(y vg.Length) float64 {
	// the middle of a label's box is a tenth of its size off its line, the same
	// for each of them
	return s.v0 + (float64(y)-s.y0)*(s.v1-s.v0)/(s.y1-s.y0)
}

// labelX finds where a label of the x axis stands.
func labelX(t *testing.T, sk *sketch, words string) vg.Length {
	t.Helper()
	var at vg.Length
	low := vg.Length(1e9)
	for _, w := range sk.texts {
		if w.text == words && w.box.Min.Y < low {
			at, low = (w.box.Min.X+w.box.Max.X)/2, w.box.Min.Y
		}
	}
	if low == 1e9 {
		t.Fatalf("no label %q", words)
	}
	return at
}

func worstPercent(b *study.BusResult, h int) (v float64) {
	for _, p := range b.Phase {
		v = max(v, 100*cmplx.Abs(p[h])/cmplx.Abs(p[1]))
	}
	return v
}

// Bars end at their values and the limit's line runs at the limit, read off the
// drawing by its own labels. Limits of orders 5, 7, 11 and 13 at class 2 are 6,
// 5, 3.5 and 3 per cent: IEC 61000-2-4, table for class 2 (marks in
// study/limits).
func TestSpectrumIsToScale(t *testing.T) {
	_, b, a := demo(t, "Filter 7")
	f := Spectrum(b, a, Selection{Bus: "Compressors"})
	sk := sketchOf(f, 960, 480)
	scale := scaleOf(t, &sk, 45, false)
	st := Light()
	const near = 0.15 // per cent: half a point and the labels' middle
	for h, limit := range map[int]float64{5: 6, 7: 5, 11: 3.5, 13: 3} {
		x := labelX(t, &sk, strconv.Itoa(h))
		ok := false
		for _, k := range sk.inked {
			if k.ink != color.Color(st.Limit) || k.width == 0 {
				continue
			}
			for i := 1; i < len(k.path); i++ {
				p, q := k.path[i-1].Pos, k.path[i].Pos
				if k.path[i].Type == vg.LineComp && p.X <= x && q.X >= x && math.Abs(scale.value(p.Y)-limit) < near {
					ok = true
				}
			}
		}
		if !ok {
			t.Errorf("order %d: no limit drawn at %g %%", h, limit)
		}
		var tops []float64
		for _, k := range sk.inked {
			box, isBox := boxOf(k.path)
			if isBox && (k.ink == color.Color(st.After) && k.width == 0 || k.ink == color.Color(st.Before) || k.ink == color.Color(st.Over)) && abs((box.Min.X+box.Max.X)/2-x) < 12 {
				tops = append(tops, scale.value(box.Max.Y))
			}
		}
		for when, bus := range map[string]*study.BusResult{"before": b.Bus("Compressors"), "after": a.Bus("Compressors")} {
			v := worstPercent(bus, h)
			if !slices.ContainsFunc(tops, func(top float64) bool { return math.Abs(top-v) < near }) {
				t.Errorf("order %d: no bar ends at %.2f %% (%s), but %v", h, v, when, tops)
			}
		}
	}
}

// Over a limit a bar is hatched and said to be over, with the multiple; before
// in the quiet colour, after in that of alarm; a bar within its limit is not.
func TestOverIsSaid(t *testing.T) {
	_, b, a := demo(t, "Filter 7")
	sk := sketchOf(Spectrum(b, a, Selection{Bus: "Compressors"}), 960, 480)
	want := []string{
		"over " + number(worstPercent(a.Bus("Compressors"), 5)/6) + "×",
		"over " + number(worstPercent(a.Bus("Compressors"), 11)/3.5) + "×",
		"over " + number(worstPercent(b.Bus("Compressors"), 5)/6) + "×",
		"over " + number(worstPercent(b.Bus("Compressors"), 7)/5) + "×",
	}
	var got []string
	for _, w := range sk.texts {
		if strings.HasPrefix(w.text, "over ") {
			got = append(got, w.text)
		}
	}
	slices.Sort(want)
	slices.Sort(got)
	if !slices.Equal(got, want) {
		t.Errorf("said %q, want %q", got, want)
	}
	hatched := 0
	for _, k := range sk.inked {
		if _, box := boxOf(k.path); k.ink == color.Color(Light().Over) && k.width > 0 && !box {
			hatched++
		} else if k.ink == color.Color(Light().Over) && len(k.path) == 5 {
			hatched++
		}
	}
	if hatched < len(want) {
		t.Errorf("%d bars hatched, want %d", hatched, len(want))
	}
}

// One phase that is asked for is shown by itself, and named.
func TestChosenPhase(t *testing.T) {
	_, _, a := demo(t)
	const bus = "Cold hall light"
	seen := map[string]bool{}
	for i, phase := range phaseNames {
		s := Selection{Bus: bus, Phase: phase}.read(a, 0)
		v := a.Bus(bus).Phase[i]
		if want := 100 * cmplx.Abs(v[3]) / cmplx.Abs(v[1]); math.Abs(s.value[3]-want) > 1e-9 {
			t.Errorf("phase %s: order 3 is %g, want %g", phase, s.value[3], want)
		}
		f := Spectrum(nil, a, Selection{Bus: bus, Phase: phase})
		if !strings.Contains(f.Caption, "Phase "+phase) {
			t.Errorf("%q", f.Caption)
		}
		seen[f.Key] = true
	}
	if len(seen) != 3 {
		t.Errorf("keys %v", seen)
	}
}

// A pure sine draws no bar and says so; a dense spectrum to order 100 labels
// without two labels touching.
func TestSpectrumExtremes(t *testing.T) {
	_, _, a := demo(t)
	pure := *a
	pure.Buses = []study.BusResult{{Name: "B", NominalV: 400, Live: true}}
	pure.Points = nil
	for p := range pure.Buses[0].Phase {
		pure.Buses[0].Phase[p] = phasor.New(50)
		pure.Buses[0].Phase[p][1] = 230
	}
	sk := sketchOf(Spectrum(nil, &pure, Selection{Bus: "B"}), 340, 190)
	if !slices.ContainsFunc(sk.texts, func(w words) bool { return strings.HasPrefix(w.text, "No distortion") }) {
		t.Error("a pure sine is not told")
	}
	for p := range pure.Buses[0].Phase {
		dense := phasor.New(100)
		for h := range dense {
			dense[h] = complex(230/float64(h+1), 0)
		}
		pure.Buses[0].Phase[p] = dense
	}
	for _, w := range []vg.Length{250, 340, 960} {
		sk = sketchOf(Spectrum(&pure, &pure, Selection{Bus: "B"}), w, 190)
		if bad := sk.piled(); len(bad) > 0 {
			t.Error(bad)
		}
		if len(sk.hots) != 99 {
			t.Errorf("%d orders answer, want 99", len(sk.hots))
		}
	}
}

// A waveform shows its peak, in kV where it is large, one or two periods: 20 ms
// at 50 Hz each.
func TestWaveformIsToScale(t *testing.T) {
	_, _, a := demo(t)
	for bus, unit := range map[string]string{"Compressors": "V, line to neutral, phase a", "PCC": "kV, line to neutral, phase a"} {
		for periods := 1; periods <= 2; periods++ {
			sk := sketchOf(Waveform(nil, a, Selection{Bus: bus, Periods: periods}), 960, 480)
			if !slices.ContainsFunc(sk.texts, func(w words) bool { return w.text == unit }) {
				t.Errorf("%s: no axis %q", bus, unit)
			}
			labelX(t, &sk, strconv.Itoa(20*periods))
			scale := scaleOf(t, &sk, 45, false)
			top := 0.0
			for _, k := range sk.inked {
				if k.ink == color.Color(Light().After) && len(k.path) > 100 {
					for _, c := range k.path {
						top = max(top, scale.value(c.Pos.Y))
					}
					if len(k.path) != periods*samples+1 {
						t.Errorf("%d points", len(k.path))
					}
				}
			}
			want := phasor.Peak(a.Bus(bus).Phase[0])
			if unit[0] == 'k' {
				want /= 1000
			}
			if math.Abs(top-want) > 0.02*want {
				t.Errorf("%s: the curve reaches %g, want %g", bus, top, want)
			}
		}
	}
}

// The dots of the orders that loads inject stand on the curve.
func TestImpedanceMarks(t *testing.T) {
	s, _, _ := demo(t)
	now := scans(t, s, "Compressors", "Filter 5")
	sk := sketchOf(Impedance(nil, now, []int{5, 11}), 960, 480)
	scale := scaleOf(t, &sk, 45, true)
	for _, h := range []int{5, 11} {
		x := labelX(t, &sk, strconv.Itoa(h))
		z, err := study.Impedance(context.Background(), s, []string{"Filter 5"}, "Compressors", phasor.Positive, float64(h), float64(h)+1)
		if err != nil {
			t.Fatal(err)
		}
		want := math.Log10(cmplx.Abs(z.Z[0]))
		ok := false
		for _, k := range sk.inked {
			for _, c := range k.path {
				if c.Type == vg.ArcComp && abs(c.Pos.X-x) < 1 && math.Abs(scale.value(c.Pos.Y)-want) < 0.03 {
					ok = true
				}
			}
		}
		if !ok {
			t.Errorf("order %d: no dot at %.3g ohm", h, cmplx.Abs(z.Z[0]))
		}
	}
}

// Shares of duty are those of the outcome: a filter's current against 1.3 times
// its rating (IEC 60831-1, from memory), a transformer's against its nameplate.
func TestDuty(t *testing.T) {
	_, b, a := demo(t, "Filter 5")
	rows := duties(b, a)
	find := func(name string) barRow {
		for _, r := range rows {
			if r.name() == name {
				return r
			}
		}
		t.Fatalf("no row %q", name)
		return barRow{}
	}
	d := a.Measures[0].Duty
	if r := find("Filter 5  current"); !math.IsNaN(r.before) || math.Abs(r.after-d.CurrentA/(1.3*d.RatedA)) > 1e-12 {
		t.Errorf("filter: %g before, %g after", r.before, r.after)
	}
	rated := 1600.0 / 0.41 / math.Sqrt(3)
	for i, o := range []*study.Outcome{b, a} {
		want := 0.0
		for _, p := range o.Element("T1").Ends[1].Phase {
			want = max(want, phasor.RMS(p)/rated)
		}
		if r := find("T1  current"); math.Abs([]float64{r.before, r.after}[i]-want) > 1e-12 {
			t.Errorf("T1: %v, want %g", r, want)
		}
	}
	// the bank resonates before and is gone after
	if r := find("C1  current"); r.before <= 1 || !math.IsNaN(r.after) {
		t.Errorf("C1: %g before, %g after", r.before, r.after)
	}
	if !slices.IsSortedFunc(rows, func(x, y barRow) int { return int(math.Copysign(1, y.worst()-x.worst())) }) {
		t.Error("not the worst first")
	}
	if f := Duty(b, a); !strings.Contains(f.Caption, "Filter 5 "+number(d.LossW)+" W") {
		t.Errorf("%q", f.Caption)
	}
}

// A bank at rated sinusoidal voltage draws its rated current, which is 1/1.3 of
// what it bears; behind a reactor of 7 % its capacitors see 1/(1 - 0.07) of the
// bus voltage (derived).
func TestBankDutyAtRating(t *testing.T) {
	s := &study.Study{FrequencyHz: 50, Banks: []study.Bank{
		{Named: study.Named{Name: "C"}, Bus: "B", Kvar: 100},
		{Named: study.Named{Name: "D"}, Bus: "B", Kvar: 100, DetuningPercent: 7, RatedKV: 0.48},
		{Named: study.Named{Name: "E"}, Bus: "B", Kvar: 100, DetuningPercent: 7},
	}}
	o := &study.Outcome{Study: s, Buses: []study.BusResult{{Name: "B", NominalV: 400, Live: true}}}
	var current [3]phasor.Spectrum
	for p := range current {
		current[p] = phasor.New(50)
		current[p][1] = cmplx.Rect(100e3/400/math.Sqrt(3), math.Pi/2-2*math.Pi/3*float64(p))
	}
	for _, b := range s.Banks {
		o.Elements = append(o.Elements, study.ElementResult{Name: b.Name, Kind: study.KindBank, Ends: []study.EndResult{{Bus: "B", Phase: current}}})
	}
	want := map[string]float64{"C  current": 1 / 1.3, "E  current": 1 / 1.3, "D  voltage": 400 / 0.93 / 480, "D  crest": 400 / 0.93 / 480 / 1.2}
	for _, r := range duties(nil, o) {
		if w, ok := want[r.name()]; ok {
			if math.Abs(r.after-w) > 1e-3*w {
				t.Errorf("%s: %g, want %g", r.name(), r.after, w)
			}
			delete(want, r.name())
		}
	}
	if len(want) > 0 {
		t.Errorf("missing %v", want)
	}
}

// A response answers at every order with what the outcome has.
func TestResponse(t *testing.T) {
	_, _, a := demo(t, "Recorder filter")
	f := Response(a, "Recorder filter")
	sk := sketchOf(f, 480, 260)
	if len(sk.hots) != a.Study.Order() {
		t.Errorf("%d orders answer", len(sk.hots))
	}
	g := a.Measures[0].Response[4]
	want := "Order 5\noutlet\t" + number(100*g.Ratio) + " %\nlag\t" + number(g.LagDeg) + "°"
	if !slices.ContainsFunc(sk.hots, func(h Hot) bool { return h.Text == want }) {
		t.Errorf("nobody says %q", want)
	}
	if bad := append(sk.piled(), sk.crossed()...); len(bad) > 0 {
		t.Error(bad)
	}
	if sk := sketchOf(Response(a, "Filter 5"), 300, 200); len(sk.texts) == 0 {
		t.Error("no word without a response")
	}
}

// Each bar of the margins is as long as its share, read against the limit's
// line.
func TestMarginsAreToScale(t *testing.T) {
	_, b, a := demo(t, "Filter 7")
	sk := sketchOf(Margins(b, a), 960, 480)
	rows, _ := shares(b, a)
	st := Light()
	var line, zero vg.Length
	for _, k := range sk.inked {
		if k.ink == color.Color(st.Limit) && k.width > 0 {
			line = k.path[0].Pos.X
		}
		if k.ink == color.Color(st.Grid) {
			zero = k.path[0].Pos.X
		}
	}
	var ends []float64
	for _, k := range sk.inked {
		if box, ok := boxOf(k.path); ok && (k.ink == color.Color(st.Over) || k.ink == color.Color(st.After) || k.ink == color.Color(st.Before)) {
			ends = append(ends, float64((box.Max.X-zero)/(line-zero)))
		}
	}
	for _, r := range rows[:5] {
		for _, want := range []float64{r.before, r.after} {
			if !slices.ContainsFunc(ends, func(v float64) bool { return math.Abs(v-want) < 0.01 }) {
				t.Errorf("%s: no bar of %.3g", r.name(), want)
			}
		}
	}
}

// The set holds every figure once, in print order, with title and caption.
func TestAll(t *testing.T) {
	s, b, a := demo(t, "Filter 5", "Recorder filter")
	in := Input{Before: b, After: a, ScansBefore: scans(t, s, "Compressors"), ScansAfter: scans(t, s, "Compressors", "Filter 5")}
	keys := map[string]bool{}
	var order []string
	for _, f := range All(in) {
		if keys[f.Key] || f.Title == "" || f.Caption == "" || f.Size.X <= 0 || f.Size.Y <= 0 {
			t.Errorf("%+v", f)
		}
		keys[f.Key] = true
		order = append(order, f.Key)
	}
	for _, want := range []string{"single-line", "margins", "spectrum-bus-pcc", "waveform-element-grid-pcc", "impedance-bus-compressors", "duty", "response-recorder-filter"} {
		if !keys[want] {
			t.Errorf("no %s in %v", want, order)
		}
	}
	if order[0] != "single-line" || order[1] != "margins" || order[len(order)-1] != "response-recorder-filter" {
		t.Errorf("order %v", order)
	}
	if All(Input{}) != nil {
		t.Error("a set of nothing")
	}
}

// Sources are the orders of six-pulse bridges and of the rest of the demo.
func TestSources(t *testing.T) {
	_, _, a := demo(t)
	got := Sources(a)
	for _, h := range []int{3, 5, 7, 11, 13} {
		if !slices.Contains(got, h) {
			t.Errorf("order %d is not among %v", h, got)
		}
	}
	if slices.Contains(got, 2) || !slices.IsSorted(got) {
		t.Errorf("%v", got)
	}
}

// Texts of charts are crossed by no line, light or large.
func TestChartTextsNotCrossed(t *testing.T) {
	for _, on := range []string{"Filter 5", "Filter 7"} {
		for _, f := range figures(t, on) {
			for _, size := range []vg.Point{f.Size, {X: 330, Y: 200}, {X: 250, Y: 150}} {
				if f.Key == "single-line" {
					continue
				}
				sk := sketchOf(f, size.X, size.Y)
				if bad := sk.crossed(); len(bad) > 0 {
					t.Errorf("%s at %v: %v", f.Key, size, bad)
				}
			}
		}
	}
}
