package handout

import (
	"image/color"
	"strings"
	"unicode"

	xfont "golang.org/x/image/font"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/image/math/fixed"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/font/liberation"
	"gonum.org/v1/plot/vg"
)

// The four sizes of type in the handout.
const (
	sizeTitle   = vg.Length(20)
	sizeHeading = vg.Length(12.5)
	sizeBody    = vg.Length(9.5)
	sizeSmall   = vg.Length(7.8)
)

// leading is the distance of two baselines over the size of the type.
const leading = 1.34

// cut is a member of the type family.
type cut int

const (
	regular cut = iota
	bold
	italic
	boldItalic
)

// style is how a piece of text looks.
type style struct {
	cut  cut
	size vg.Length
	ink  color.NRGBA
}

func (s style) bold() style {
	s.cut = bold
	return s
}

func (s style) italic() style {
	if s.cut == bold || s.cut == boldItalic {
		s.cut = boldItalic
	} else {
		s.cut = italic
	}
	return s
}

func (s style) in(ink color.NRGBA) style {
	s.ink = ink
	return s
}

// line is the height of a line of the style.
func (s style) line() vg.Length { return s.size * leading }

// fonts is the type family with the widths measured so far.
type fonts struct {
	faces  [4]font.Face
	widths map[measured]vg.Length
}

type measured struct {
	cut  cut
	text string
}

func newFonts() *fonts {
	cache := font.NewCache(liberation.Collection())
	f := &fonts{widths: map[measured]vg.Length{}}
	for i := range f.faces {
		want := font.Font{Typeface: "Liberation", Variant: "Sans"}
		if cut(i) == bold || cut(i) == boldItalic {
			want.Weight = xfont.WeightBold
		}
		if cut(i) == italic || cut(i) == boldItalic {
			want.Style = xfont.StyleItalic
		}
		f.faces[i] = cache.Lookup(want, 1)
	}
	return f
}

func (f *fonts) face(s style) font.Face {
	face := f.faces[s.cut]
	face.Font.Size = s.size
	return face
}

// width returns how wide text stands in style s.
func (f *fonts) width(s style, text string) vg.Length {
	key := measured{s.cut, text}
	w, ok := f.widths[key]
	if !ok {
		face := f.faces[s.cut]
		w = face.Width(legible(face, text))
		f.widths[key] = w
	}
	return w * s.size
}

func fixedEm(em sfnt.Units) fixed.Int26_6 { return fixed.Int26_6(em) }

// basic returns text without what the PDF library cannot encode: controls
// become spaces, broken bytes and letters beyond the basic plane question
// marks.
func basic(text string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case unicode.IsControl(r):
			return ' '
		case r == unicode.ReplacementChar || r > 0xffff:
			return '?'
		}
		return r
	}, text)
}

// legible returns text with what the font cannot show replaced: letters by a
// question mark, controls and line ends by a space.
func legible(f font.Face, text string) string {
	ok := true
	var buf sfnt.Buffer
	for _, r := range text {
		if r < 0x20 || r > 0x7e {
			ok = false
			break
		}
	}
	if ok {
		return text
	}
	return strings.Map(func(r rune) rune {
		if g, err := f.Face.GlyphIndex(&buf, r); err != nil || g == 0 {
			return '?'
		}
		return r
	}, basic(text))
}
