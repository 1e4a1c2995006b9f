package handout

import (
	"bytes"
	"context"
	"encoding/xml"
	"fmt"
	"image/png"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/xuri/excelize/v2"

	"quietbus/study"
)

var testDate = time.Date(2031, 2, 3, 4, 5, 6, 0, time.UTC)

// made returns the files of a handout by name.
func made(t testing.TB, in Input, paper Paper) map[string][]byte {
	t.Helper()
	list, err := files(context.Background(), in, Options{Paper: paper, Date: testDate})
	if err != nil {
		t.Fatal(err)
	}
	out := map[string][]byte{}
	for _, f := range list {
		if _, twice := out[f.name]; twice {
			t.Errorf("%s is made twice", f.name)
		}
		out[f.name] = f.data
	}
	return out
}

// summary returns the text of the PDF alone, without the pictures that take
// the time.
func summary(t *testing.T, in Input, paper Paper) (text string, raw []byte) {
	t.Helper()
	doc, err := NewResults(in)
	if err != nil {
		t.Fatal(err)
	}
	set, err := figures(context.Background(), &in, in.compared())
	if err != nil {
		t.Fatal(err)
	}
	if raw, err = printed(context.Background(), in, doc, set, Options{Paper: paper, Date: testDate}); err != nil {
		t.Fatal(err)
	}
	return pdfText(t, raw), raw
}

// squeezed joins words by single spaces, so that line ends do not matter.
func squeezed(text string) string { return strings.Join(strings.Fields(text), " ") }

// TestPrinted reads the summary back on both papers.
func TestPrinted(t *testing.T) {
	for _, paper := range []Paper{A4, Letter} {
		in := sample()
		text, raw := summary(t, in, paper)
		flat := squeezed(text)
		for _, v := range study.Verdict(in.Before, in.After) {
			for _, word := range strings.Fields(v.Text + " " + v.Before) {
				if !strings.Contains(flat, word) {
					t.Errorf("%s: %q of the verdict is not printed", paper, word)
				}
			}
		}
		pages := strings.Count(string(raw), "/Type /Page\n")
		for i := 1; i <= pages; i++ {
			if n := strings.Count(flat, fmt.Sprintf("page %d of %d", i, pages)); n != 1 {
				t.Errorf("%s: page %d of %d is numbered %d times", paper, i, pages, n)
			}
		}
		if pages < 5 {
			t.Errorf("%s: %d pages", paper, pages)
		}
		for _, want := range []string{
			"Invented data", "Σ-line", "45 °C", "35 mm²", "Ω-rated earth – see letter", "Nobody & Sons",
			"to be confirmed against the document", "over, 1.05 x", "letter of the network operator, 3 May", "usual at this voltage",
			"2280 µF", "0.1930 mH", "43.3", "14 150", "currents: no maximum demand current is stated", "hold a charge", "Signature",
			"No origin stated", "Check of the solution", "revision B",
		} {
			if !strings.Contains(flat, want) {
				t.Errorf("%s: %q is not printed", paper, want)
			}
		}
		for _, bad := range []string{"NaN", "Inf", "%!", "<nil>", "□"} {
			if strings.Contains(text, bad) {
				t.Errorf("%s: %q is printed", paper, bad)
			}
		}
		w, h := paper.Size()
		if box := fmt.Sprintf("%.2f %.2f", h.Points(), w.Points()); !strings.Contains(string(raw), box) {
			t.Errorf("%s: no lying page of %s points", paper, box)
		}
	}
}

// TestSame makes the handout twice: nothing but the date may differ.
func TestSame(t *testing.T) {
	a, b := made(t, sample(), A4), made(t, sample(), A4)
	if len(a) != len(b) {
		t.Errorf("%d files, then %d", len(a), len(b))
	}
	for name, raw := range a {
		if !bytes.Equal(raw, b[name]) {
			t.Errorf("%s differs from one time to the next", name)
		}
	}
}

// TestStates leaves out what may be absent.
func TestStates(t *testing.T) {
	noBefore, noMeasures, bare, none := sample(), sample(), sample(), sample()
	noBefore.Before = nil
	noMeasures.After = noMeasures.Before
	bare.Study = &study.Study{Format: 1, FrequencyHz: 60, Title: study.Title{Study: "Nothing yet"}}
	bare.Before, bare.After = nil, &study.Outcome{Study: bare.Study}
	none.After.Points, none.Before.Points = nil, nil
	none.Study.Assessments = nil
	for name, c := range map[string]struct {
		in           Input
		with, absent []string
	}{
		"no before":      {noBefore, []string{"Measures on", "Filter 5"}, []string{"Before"}},
		"no measures on": {noMeasures, []string{"No measure is on", "Considered, off"}, []string{"Before", "Measures on"}},
		"nothing":        {bare, []string{"Nothing yet", "No assessment point yet", "holds no measures"}, []string{"Invented data"}},
		"no points":      {none, []string{"No assessment point yet"}, []string{"Against the limits"}},
	} {
		text, _ := summary(t, c.in, A4)
		text = squeezed(text)
		for _, want := range c.with {
			if !strings.Contains(text, want) {
				t.Errorf("%s: %q is not printed", name, want)
			}
		}
		for _, bad := range c.absent {
			if strings.Contains(text, bad) {
				t.Errorf("%s: %q is printed", name, bad)
			}
		}
	}
	if _, err := files(context.Background(), Input{Study: sample().Study}, Options{}); err == nil {
		t.Error("a handout without an outcome is made")
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := files(ctx, sample(), Options{}); err == nil {
		t.Error("a cancelled handout is made")
	}
}

// TestHostileTexts prints names that are too long, in no language, or empty.
func TestHostileTexts(t *testing.T) {
	long := strings.Repeat("Wx", 160)
	for _, text := range []string{"", long, strings.Repeat("many words ", 90), "line\nfeed\ttab\x00\x1b", "漢字 \U0001F600 \u202e right to left \xff\xfe", "(\\)%s%d <b>&amp;"} {
		in := sample()
		s := in.Study
		s.Title = study.Title{Study: text, Client: text, Site: text, Author: text, Revision: text, Date: text, Remarks: text, Invented: true}
		s.Measures[0].Name, s.Supplies[0].Name, s.Banks[0].Name = text, text, text
		s.Supplies[0].Provenance["xOverR"] = study.Provenance{Origin: study.Assumed, Note: text}
		for _, o := range []*study.Outcome{in.Before, in.After} {
			o.Buses[0].Name, o.Points[0].Name, o.Points[0].Bus, o.Points[0].SetTitle = text, text, text, text
			o.Points[0].Rows[0].Rule = text
			o.Elements[0].Name = text
			o.Warnings = []string{text}
		}
		in.After.Measures[0].Name, in.After.Measures[0].Components[0].Note, in.After.Measures[0].Notes = text, text, []string{text}
		got, raw := summary(t, in, A4)
		if !strings.Contains(got, "page 1 of") || !bytes.HasPrefix(raw, []byte("%PDF")) {
			t.Errorf("%.20q: no readable summary", text)
		}
		if dir := os.Getenv("HANDOUT_LOOK"); dir != "" && text == long {
			if err := os.WriteFile(filepath.Join(dir, "long.pdf"), raw, 0o644); err != nil {
				t.Error(err)
			}
		}
	}
}

// TestTables opens the workbook and compares cells with the document.
func TestTables(t *testing.T) {
	in := sample()
	out := made(t, in, A4)
	book, err := excelize.OpenReader(bytes.NewReader(out["tables.xlsx"]))
	if err != nil {
		t.Fatal(err)
	}
	defer book.Close()
	if got := strings.Join(book.GetSheetList(), " "); got != "about buses limits currents measures assumptions" {
		t.Errorf("sheets: %s", got)
	}
	rows, err := book.GetRows("buses")
	if err != nil {
		t.Fatal(err)
	}
	if want := 1 + 2*3*len(in.Study.Buses); len(rows) != want || len(rows[0]) != 8+in.Study.Order()-1 {
		t.Errorf("%d rows of %d columns, want %d of %d", len(rows), len(rows[0]), want, 8+in.Study.Order()-1)
	}
	kind, err := book.GetCellType("buses", "E2")
	if err != nil || kind != excelize.CellTypeUnset && kind != excelize.CellTypeNumber {
		t.Errorf("a voltage is kept as %v (%v), not as a number", kind, err)
	}
	for name, raw := range out {
		if !strings.HasSuffix(name, ".csv") {
			continue
		}
		if lines := strings.Split(strings.TrimSpace(string(raw)), "\n"); len(lines) < 2 {
			t.Errorf("%s holds no rows", name)
		}
		for _, bad := range []string{"NaN", "Inf", "<nil>"} {
			if strings.Contains(string(raw), bad) {
				t.Errorf("%s holds %q", name, bad)
			}
		}
	}
	if !strings.Contains(string(out["tables/limits.csv"]), "Board A,Board A,5th harmonic voltage,5,b,3,%,9,3,3.15,1.05,over") {
		t.Errorf("limits.csv:\n%s", out["tables/limits.csv"])
	}
}

// TestFigures wants each figure in three forms, the pictures readable and of
// the size they are said to have.
func TestFigures(t *testing.T) {
	out := made(t, sample(), A4)
	n := 0
	for name, raw := range out {
		switch filepath.Ext(name) {
		case ".png":
			n++
			pic, err := png.Decode(bytes.NewReader(raw))
			if err != nil {
				t.Errorf("%s: %v", name, err)
				continue
			}
			if w := pic.Bounds().Dx(); w < 900 {
				t.Errorf("%s is only %d pixels wide", name, w)
			}
			stem := strings.TrimSuffix(name, ".png")
			if len(out[stem+".svg"]) == 0 || !bytes.HasPrefix(out[stem+".pdf"], []byte("%PDF")) {
				t.Errorf("%s has no SVG or PDF beside it", name)
			}
			if err := xml.Unmarshal(out[stem+".svg"], new(struct{})); err != nil || bytes.Contains(out[stem+".svg"], []byte("NaN")) {
				t.Errorf("%s.svg cannot be read: %v", stem, err)
			}
			if !strings.Contains(string(out["figures/captions.txt"]), filepath.Base(stem)+"\n") {
				t.Errorf("%s has no caption", name)
			}
		}
	}
	if n < 5 {
		t.Errorf("only %d figures", n)
	}
}

// TestWrite writes to a folder, with the environment's HANDOUT_LOOK to a
// folder that stays, for the eye.
func TestWrite(t *testing.T) {
	dir := os.Getenv("HANDOUT_LOOK")
	if dir == "" {
		dir = t.TempDir()
	}
	for _, paper := range []Paper{A4, Letter} {
		r, err := Write(context.Background(), filepath.Join(dir, paper.String()), demo(t, "Filter 5", "Reactor K1", "Recorder filter"), Options{Paper: paper, Date: testDate})
		if err != nil {
			t.Fatal(err)
		}
		for _, name := range r.Files {
			if info, err := os.Stat(filepath.Join(r.Dir, filepath.FromSlash(name))); err != nil || info.Size() == 0 {
				t.Errorf("%s is reported but not there", name)
			}
		}
		if got := len(names(t, r.Dir)); got != len(r.Files) {
			t.Errorf("%d files are there, %d are reported", got, len(r.Files))
		}
	}
}

// BenchmarkWrite writes the whole handout of the demonstration; it is to take
// less than a second.
func BenchmarkWrite(b *testing.B) {
	dir := b.TempDir()
	in := demo(b, "Filter 5", "Reactor K1", "Recorder filter")
	b.ReportAllocs()
	for b.Loop() {
		if _, err := Write(context.Background(), dir, in, Options{Date: testDate}); err != nil {
			b.Fatal(err)
		}
	}
}
