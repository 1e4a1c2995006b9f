package handout

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"gonum.org/v1/plot/vg"

	"quietbus/assets"
)

func testBook() *book {
	b := newBook(newCanvas("test", "", testDate), A4)
	b.open(false)
	return b
}

func lineText(l line) string {
	var s strings.Builder
	for _, p := range l.parts {
		s.WriteString(p.text)
	}
	return s.String()
}

func TestWrap(t *testing.T) {
	b := testBook()
	text := "PCC: meets the limits with 18 % to spare, and the 5 % reactor at 11 kV stays; Donaudampfschifffahrtsgesellschaftskapitän"
	for w := vg.Length(30); w < 300; w += 7 {
		var all []string
		for _, l := range b.wrap(w, []span{{b.body.bold(), text[:11]}, {b.body, text[11:]}}) {
			if l.width > w+1e-6 {
				t.Errorf("width %v: line %q is %v wide", w, lineText(l), l.width)
			}
			all = append(all, lineText(l))
			if s := strings.TrimSpace(lineText(l)); strings.HasPrefix(s, "%") || strings.HasPrefix(s, "kV") {
				if w > 60 {
					t.Errorf("width %v: unit at the start of %q", w, s)
				}
			}
		}
		if got := strings.Join(strings.Fields(strings.Join(all, " ")), ""); w > 280 && got != strings.ReplaceAll(text, " ", "") {
			t.Errorf("width %v: text is changed to %q", w, got)
		}
	}
	if n := len(b.wrap(100, []span{{b.body, "one\n\ntwo"}})); n != 3 {
		t.Errorf("two line feeds make %d lines, want 3", n)
	}
	if n := len(b.wrap(100, []span{{b.body, ""}})); n != 1 {
		t.Errorf("empty text makes %d lines, want 1", n)
	}
}

// TestKerning compares the runs a text is set in with the plotting library's
// measure of the whole, by which figures place their labels.
func TestKerning(t *testing.T) {
	f := newFonts()
	for _, text := range []string{"AVATAR To", "Voltage THD", "11th harmonic", "Ω 1.1"} {
		face := f.face(style{bold, 10, assets.Light.Ink})
		runs := kerned(face, text)
		last := runs[len(runs)-1]
		if end := last.at + face.Width(last.text); math.Abs(float64(end-face.Width(text))) > 1e-9 {
			t.Errorf("%q ends at %v, want %v", text, end, face.Width(text))
		}
	}
}

func TestLegible(t *testing.T) {
	f := newFonts()
	if got := legible(f.faces[0], "a\tb 漢 \U0001F600 Ω%°²–"); got != "a b ? ? Ω%°²–" {
		t.Errorf("legible: %q", got)
	}
}

// TestArc draws a full circle and compares its path with the circle.
func TestArc(t *testing.T) {
	comp := vg.PathComp{Type: vg.ArcComp, Pos: vg.Point{X: 50, Y: 40}, Radius: 10, Start: 0.3, Angle: -2 * math.Pi}
	ops, end := appendArc(nil, comp)
	if !strings.HasPrefix(string(ops), "59.55 42.96 m ") || strings.Count(string(ops), "c") != 4 {
		t.Errorf("circle: %s", ops)
	}
	if math.Hypot(float64(end.X)-50-10*math.Cos(0.3), float64(end.Y)-40-10*math.Sin(0.3)) > 1e-9 {
		t.Errorf("it ends at %v", end)
	}
}

// TestTableBreaks fills several pages and wants the heading on each.
func TestTableBreaks(t *testing.T) {
	b := testBook()
	tab := &table{columns: []column{{head: "Item", min: 80}, {head: "Value", unit: "V", align: point}, {head: "Text", flex: 1}}}
	for i := range 200 {
		tab.add(plain("row", figures3(float64(i)*1.37), strings.Repeat("word ", i%30))...)
	}
	b.table(tab, 0)
	if len(b.pages) < 4 {
		t.Fatalf("%d pages", len(b.pages))
	}
	b.finish("head", "rev", "foot")
	var raw bytes.Buffer
	if _, err := b.WriteTo(&raw); err != nil {
		t.Fatal(err)
	}
	text := pdfText(t, raw.Bytes())
	if n := strings.Count(text, "Value"); n != len(b.pages) {
		t.Errorf("heading stands %d times on %d pages", n, len(b.pages))
	}
	if n := strings.Count(text, "row"); n != 200 {
		t.Errorf("%d rows of 200", n)
	}
}

// TestDecimals wants all decimal points of a column under each other.
func TestDecimals(t *testing.T) {
	b := testBook()
	tab := &table{columns: []column{{head: "A long heading", align: point}}, style: b.small}
	for _, v := range []string{"1.5", "12.25", "1040", "0.125"} {
		tab.add(cell{text: v})
	}
	g := b.measure(tab, 0, 200)
	for _, r := range tab.rows {
		whole, fraction := splitPoint(r.cells[0].text)
		if right := g.whole[0] + b.fonts.width(b.small, fraction); right > g.w[0]+1e-6 {
			t.Errorf("%s leaves its column: %v of %v", r.cells[0].text, right, g.w[0])
		}
		if b.fonts.width(b.small, whole) > g.whole[0]+1e-6 {
			t.Errorf("%s begins before its column", r.cells[0].text)
		}
	}
}
