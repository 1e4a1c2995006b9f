package widgets

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A paragraph is text without padding that wraps at its width. Its least height
// follows its width, so a column can stack paragraphs exactly.
type paragraph struct {
	widget.BaseWidget

	text  string
	size  fyne.ThemeSizeName
	color fyne.ThemeColorName
	style fyne.TextStyle
	most  int // most lines, 0 for any; the last one ends in dots when cut

	lines []string
	width float32 // for which lines was made
	made  paragraphKey
}

// A paragraphKey is all that a line break depends on.
type paragraphKey struct {
	text  string
	size  float32
	style fyne.TextStyle
	width float32
	most  int
}

func newParagraph(size fyne.ThemeSizeName, color fyne.ThemeColorName) *paragraph {
	p := &paragraph{size: size, color: color}
	p.ExtendBaseWidget(p)
	return p
}

// set changes the text.
func (p *paragraph) set(text string) {
	if p.text == text {
		return
	}
	p.text = text
	p.Refresh()
}

// wrap breaks the text for a width and returns the lines and a line's height.
func (p *paragraph) wrap(width float32) ([]string, float32) {
	size := sizeOf(p, p.size)
	key := paragraphKey{p.text, size, p.style, width, p.most}
	if key != p.made {
		p.lines = wrapText(p.text, width, size, p.style, p.most)
		p.made = key
	}
	return p.lines, lineHeight(size, p.style)
}

// heightFor returns the height the text needs at a width.
func (p *paragraph) heightFor(width float32) float32 {
	if p.text == "" {
		return 0
	}
	lines, height := p.wrap(width)
	return float32(len(lines)) * height
}

// Resize breaks the text anew when the width changed.
func (p *paragraph) Resize(s fyne.Size) {
	if s.Width != p.width {
		p.width = s.Width
		p.BaseWidget.Resize(s)
		p.Refresh()
		return
	}
	p.BaseWidget.Resize(s)
}

// MinSize is the height at the present width; any width will do.
func (p *paragraph) MinSize() fyne.Size {
	p.ExtendBaseWidget(p)
	if p.width == 0 {
		return fyne.NewSize(0, lineHeight(sizeOf(p, p.size), p.style))
	}
	return fyne.NewSize(0, p.heightFor(p.width))
}

// CreateRenderer implements fyne.Widget.
func (p *paragraph) CreateRenderer() fyne.WidgetRenderer {
	p.ExtendBaseWidget(p)
	return &paragraphRenderer{p: p}
}

type paragraphRenderer struct {
	p     *paragraph
	texts []fyne.CanvasObject
}

func (r *paragraphRenderer) Layout(size fyne.Size) {
	p := r.p
	lines, height := p.wrap(size.Width)
	if p.text == "" {
		lines = nil
	}
	th := theme.CurrentForWidget(p)
	color := th.Color(p.color, fyne.CurrentApp().Settings().ThemeVariant())
	textSize := th.Size(p.size)
	for len(r.texts) < len(lines) {
		r.texts = append(r.texts, canvas.NewText("", color))
	}
	for i, o := range r.texts {
		t := o.(*canvas.Text)
		if i >= len(lines) {
			t.Hide()
			continue
		}
		t.Show()
		t.Text, t.Color, t.TextSize, t.TextStyle = lines[i], color, textSize, p.style
		t.Move(fyne.NewPos(0, float32(i)*height))
		t.Resize(fyne.NewSize(size.Width, height))
		t.Refresh()
	}
}

func (r *paragraphRenderer) MinSize() fyne.Size { return r.p.MinSize() }

func (r *paragraphRenderer) Refresh() { r.Layout(r.p.Size()) }

func (r *paragraphRenderer) Objects() []fyne.CanvasObject { return r.texts }

func (r *paragraphRenderer) Destroy() {}

// lineHeight is the height of a line of text.
func lineHeight(size float32, style fyne.TextStyle) float32 {
	return fyne.MeasureText("Mg", size, style).Height
}

// wrapText breaks text where breakable allows, and inside a word that is too wide by itself.
// Line feeds are kept. With most above zero the last line allowed ends in dots
// when there is more.
func wrapText(text string, width, size float32, style fyne.TextStyle, most int) []string {
	var lines []string
	measure := func(s string) float32 { return fyne.MeasureText(s, size, style).Width }
	for _, part := range strings.Split(text, "\n") {
		line := ""
		for _, word := range breakable(part) {
			next := word
			if line != "" {
				next = line + " " + word
			}
			if measure(next) <= width || width <= 0 {
				line = next
				continue
			}
			if line != "" {
				lines = append(lines, line)
			}
			line = word
			for measure(line) > width {
				head := fitting(line, width, measure)
				if head == line {
					break
				}
				lines = append(lines, head)
				line = line[len(head):]
			}
		}
		lines = append(lines, line)
	}
	if most > 0 && len(lines) > most {
		lines = lines[:most]
		lines[most-1] = ellipsis(lines[most-1]+" ...", width, size, style)
	}
	return lines
}

// breakable splits a line where it may be broken: at blanks, but not before a
// per-cent sign, nor at a blank that is marked as not to be broken.
func breakable(line string) []string {
	var words []string
	for _, word := range strings.FieldsFunc(line, func(r rune) bool { return r == ' ' || r == '\t' }) {
		if n := len(words); n > 0 && strings.HasPrefix(word, "%") {
			words[n-1] += " " + word
			continue
		}
		words = append(words, word)
	}
	return words
}

// fitting returns the longest head of a word that fits, one letter at least.
func fitting(word string, width float32, measure func(string) float32) string {
	runes := []rune(word)
	low, high := 1, len(runes)
	for low < high {
		mid := (low + high + 1) / 2
		if measure(string(runes[:mid])) <= width {
			low = mid
		} else {
			high = mid - 1
		}
	}
	return string(runes[:low])
}

// ellipsis cuts a line that is too wide and ends it in dots.
func ellipsis(line string, width, size float32, style fyne.TextStyle) string {
	measure := func(s string) float32 { return fyne.MeasureText(s, size, style).Width }
	if measure(line) <= width {
		return line
	}
	const dots = "..."
	head := fitting(line, width-measure(dots), measure)
	return strings.TrimRight(head, " .") + dots
}
