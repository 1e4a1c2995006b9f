// Package figure draws every figure of a study once, on gonum/plot's canvases:
// the window hands it a raster, paper a PDF or SVG, files a picture.
//
// A Figure is made from outcomes and drawn as often as wanted; drawing returns
// the places that answer to the pointer. All lengths are in points.
package figure

import (
	"image/color"
	"strings"
	"sync"
	"unicode"

	xfont "golang.org/x/image/font"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/assets"
)

// Figure is one figure with what is written beneath it.
type Figure struct {
	Key     string   // stable file name: "spectrum-PCC"
	Title   string   // one line
	Caption string   // what is seen, in sentences
	Size    vg.Point // preferred width and height on paper
	Draw    func(c draw.Canvas, st *Style) []Hot
}

// Hot is a place in a drawn figure, in the coordinates of its canvas.
type Hot struct {
	Rect vg.Rectangle
	ID   string // what it stands for, such as an item's name
	Role string // "value", "bus", "item", "measure", "switch", "place"
	Text string // read-out: lines, each of cells parted by tabs
}

// Style is the look of a figure: colours, four sizes of one type family, line
// widths.
type Style struct {
	assets.Palette
	Small, Body, Head, Title vg.Length // type sizes
	Thin, Line, Bold         vg.Length // line widths
	faces                    *faces
}

// faces are the type family, loaded once, and the widths of texts that were
// measured: figures are redrawn at each flip with mostly the same words.
type faces struct {
	cache *font.Cache
	plain text.Plain

	mu     sync.Mutex
	widths map[measured]vg.Length
}

type measured struct {
	size  vg.Length
	bold  bool
	words string
}

// mostWidths bounds the memory for measured texts.
const mostWidths = 4096

var shared = sync.OnceValue(func() *faces {
	cache := font.NewCache(liberation.Collection())
	return &faces{cache: cache, plain: text.Plain{Fonts: cache}, widths: map[measured]vg.Length{}}
})

func (f *faces) width(ts draw.TextStyle, words string) vg.Length {
	key := measured{ts.Font.Size, ts.Font.Weight == xfont.WeightBold, words}
	f.mu.Lock()
	defer f.mu.Unlock()
	w, ok := f.widths[key]
	if !ok {
		if len(f.widths) >= mostWidths {
			clear(f.widths)
		}
		for _, piece := range pieces(words) {
			w += ts.Width(piece)
		}
		f.widths[key] = w
	}
	return w
}

func style(p assets.Palette) *Style {
	return &Style{Palette: p, Small: 7.5, Body: 8.5, Head: 10, Title: 12, Thin: 0.4, Line: 0.9, Bold: 1.6, faces: shared()}
}

// pieces parts a bare number between two figures 1: the family sets this one
// pair of figures closer than all others, so that numbers would not align, and
// the label 11 reads as one figure at small sizes. Words stay whole.
func pieces(words string) []string {
	i := strings.Index(words, "11")
	if i < 0 || strings.ContainsFunc(words, unicode.IsLetter) {
		return []string{words}
	}
	return append([]string{words[:i+1]}, pieces(words[i+1:])...)
}

var (
	lightStyle = sync.OnceValue(func() *Style { return style(assets.Light) })
	darkStyle  = sync.OnceValue(func() *Style { return style(assets.Dark) })
	printStyle = sync.OnceValue(func() *Style {
		p := assets.Light
		p.Ground, p.Surface = color.NRGBA{255, 255, 255, 255}, color.NRGBA{255, 255, 255, 255}
		return style(p)
	})
)

// Light, Dark and Print return the shared styles of the window by day, of the
// window in a dim room, and of paper.
func Light() *Style { return lightStyle() }

// Dark is Light's twin.
func Dark() *Style { return darkStyle() }

// Print is the style of paper: the light palette on white.
func Print() *Style { return printStyle() }

// Scaled returns the style with all type and lines larger by a factor, as for
// a meeting.
func (st *Style) Scaled(factor float64) *Style {
	out, k := *st, vg.Length(factor)
	for _, v := range []*vg.Length{&out.Small, &out.Body, &out.Head, &out.Title, &out.Thin, &out.Line, &out.Bold} {
		*v *= k
	}
	return &out
}

func (st *Style) text(size vg.Length, ink color.Color, bold, italic bool) draw.TextStyle {
	f := font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}
	if bold {
		f.Weight = xfont.WeightBold
	}
	if italic {
		f.Style = xfont.StyleItalic
	}
	return draw.TextStyle{Color: ink, Font: f, Handler: st.faces.plain}
}
