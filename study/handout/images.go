package handout

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"runtime"
	"slices"
	"strings"
	"sync"
	"time"
	"unicode"

	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"

	"quietbus/study/figure"
)

// pictureDPI is the resolution of the PNG files.
const pictureDPI = 200

// figureFiles returns each figure as SVG, PNG and PDF, and the captions. The
// figures are drawn on all processors; none depends on another.
func figureFiles(ctx context.Context, set *figureSet, date time.Time) ([]file, error) {
	list := set.all()
	stems := fileStems(list)
	out := make([]file, 3*len(list))
	errs := make([]error, len(list))
	var group sync.WaitGroup
	turns := make(chan struct{}, runtime.GOMAXPROCS(0))
	for i, f := range list {
		turns <- struct{}{}
		group.Go(func() {
			defer func() { <-turns }()
			errs[i] = ctx.Err()
			if errs[i] == nil {
				errs[i] = draws(f.Figure, date, "figures/"+stems[i], out[3*i:3*i+3])
			}
		})
	}
	group.Wait()
	if err := errors.Join(errs...); err != nil {
		return nil, err
	}
	return append(out, captions(list, stems)...), nil
}

// fileStems makes a file name that every system takes from each figure's key:
// small letters, digits and hyphens, each name once.
func fileStems(list []drawn) []string {
	stems := make([]string, len(list))
	for i, f := range list {
		stem := strings.Trim(strings.Map(func(r rune) rune {
			switch r = unicode.ToLower(r); {
			case r >= 'a' && r <= 'z' || r >= '0' && r <= '9':
				return r
			}
			return '-'
		}, f.Key), "-")
		if stem == "" {
			stem = "figure"
		}
		stems[i] = stem[:min(len(stem), 80)]
		for n := 2; slices.Contains(stems[:i], stems[i]); n++ {
			stems[i] = fmt.Sprintf("%s-%d", stem[:min(len(stem), 80)], n)
		}
	}
	return stems
}

// FigureForms are the endings of the files that a figure can be written as.
var FigureForms = []string{".svg", ".png", ".pdf"}

// EncodeFigure draws a figure as on paper, at its own size, in the form that a
// file name's ending asks for; the date goes into a PDF.
func EncodeFigure(f *figure.Figure, ext string, date time.Time) ([]byte, error) {
	st := figure.Print()
	switch strings.ToLower(ext) {
	case ".svg":
		return asSVG(f, st)
	case ".png":
		return asPNG(f, st)
	case ".pdf":
		return asPDF(f, st, date)
	}
	return nil, fmt.Errorf("a figure is saved as %s: give the file name one of these endings", strings.Join(FigureForms, ", "))
}

// draws draws one figure in every form.
func draws(f *figure.Figure, date time.Time, name string, out []file) (err error) {
	for i, ext := range FigureForms {
		out[i].name = name + ext
		if out[i].data, err = EncodeFigure(f, ext, date); err != nil {
			return err
		}
	}
	return nil
}

// captions lists title and caption of each figure, to read and for a program.
func captions(list []drawn, stems []string) []file {
	var text bytes.Buffer
	table := &sheet{columns: []string{"Figure", "Title", "Caption"}}
	for i, f := range list {
		fmt.Fprintf(&text, "%s\n  %s\n  %s\n\n", stems[i], f.Title, strings.ReplaceAll(f.Caption, "\n", "\n  "))
		table.add(stems[i], f.Title, f.Caption)
	}
	raw, err := table.csv()
	if err != nil { // only a failing writer can make one, and it writes to memory
		raw = nil
	}
	return []file{{"figures/captions.txt", text.Bytes()}, {"figures/captions.csv", raw}}
}

// asSVG returns the figure as an SVG. Its text stays text; the font has the
// widths of common sans-serif faces, which stand in where it is missing.
func asSVG(f *figure.Figure, st *figure.Style) ([]byte, error) {
	w, h := f.Size.X, f.Size.Y
	c := vgsvg.New(w, h)
	f.Draw(draw.NewCanvas(c, w, h), st)
	var b bytes.Buffer
	if _, err := c.WriteTo(&b); err != nil {
		return nil, fmt.Errorf("figure %s as SVG: %w", f.Key, err)
	}
	return bytes.ReplaceAll(b.Bytes(), []byte("font-family:Liberation Sans;"),
		[]byte("font-family:'Liberation Sans',Arial,Helvetica,sans-serif;")), nil
}

// asPNG returns the figure as a picture.
func asPNG(f *figure.Figure, st *figure.Style) ([]byte, error) {
	c := vgimg.NewWith(vgimg.UseWH(f.Size.X, f.Size.Y), vgimg.UseDPI(pictureDPI))
	f.Draw(draw.New(c), st)
	raw, err := encodePNG(c.Image())
	if err != nil {
		return nil, fmt.Errorf("figure %s as PNG: %w", f.Key, err)
	}
	return raw, nil
}

// asPDF returns the figure as a page of its own size.
func asPDF(f *figure.Figure, st *figure.Style, date time.Time) ([]byte, error) {
	c := newCanvas(f.Title, "", date)
	c.page(f.Size.X, f.Size.Y)
	f.Draw(draw.NewCanvas(c, f.Size.X, f.Size.Y), st)
	var b bytes.Buffer
	if _, err := c.WriteTo(&b); err != nil {
		return nil, fmt.Errorf("figure %s as PDF: %w", f.Key, err)
	}
	return b.Bytes(), nil
}

// part returns the piece of the book's page between two corners as a canvas.
func (b *book) part(x0, y0, x1, y1 vg.Length) draw.Canvas {
	return draw.Canvas{Canvas: b.canvas, Rectangle: vg.Rectangle{Min: vg.Point{X: x0, Y: y0}, Max: vg.Point{X: x1, Y: y1}}}
}
