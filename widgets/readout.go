package widgets

import (
	"image/color"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A readout is a small box of text near the pointer: lines of cells parted by
// tabs, the first cell to the left and the others to the right.
type readout struct {
	widget.BaseWidget
	text string
}

func newReadout() *readout {
	r := &readout{}
	r.ExtendBaseWidget(r)
	r.Hide()
	return r
}

func (r *readout) set(text string) {
	if r.text != text {
		r.text = text
		r.Refresh()
	}
}

// near puts the box beside a point, inside a panel as far as it goes.
func (r *readout) near(at fyne.Position, panel fyne.Size) {
	size := r.MinSize()
	x, y := at.X+2*Step, at.Y-size.Height-Step
	if x+size.Width > panel.Width {
		x = at.X - 2*Step - size.Width
	}
	if y < 0 {
		y = at.Y + 2*Step
	}
	x = max(min(x, panel.Width-size.Width), 0)
	y = max(min(y, panel.Height-size.Height), 0)
	r.Resize(size)
	r.Move(fyne.NewPos(x, y))
}

// CreateRenderer implements fyne.Widget.
func (r *readout) CreateRenderer() fyne.WidgetRenderer {
	r.ExtendBaseWidget(r)
	return &readoutRenderer{r: r, box: canvas.NewRectangle(color.Transparent)}
}

type readoutRenderer struct {
	r     *readout
	box   *canvas.Rectangle
	cells []*canvas.Text
	spots []fyne.Position
	size  fyne.Size
	made  readoutKey
}

type readoutKey struct {
	text string
	size float32
	ink  color.NRGBA
}

// build makes the cells and measures the box.
func (r *readoutRenderer) build() {
	palette := paletteOf(r.r)
	size := sizeOf(r.r, theme.SizeNameText)
	key := readoutKey{r.r.text, size, palette.Ink}
	if key == r.made {
		return
	}
	r.made = key
	r.box.FillColor, r.box.StrokeColor, r.box.StrokeWidth, r.box.CornerRadius = palette.Surface, palette.Muted, 1, 2
	r.cells, r.spots = nil, nil

	lines := strings.Split(r.r.text, "\n")
	var widths []float32
	for _, line := range lines {
		cells := strings.Split(line, "\t")
		if len(cells) == 1 {
			continue // a heading spans the columns
		}
		for i, cell := range cells {
			if i == len(widths) {
				widths = append(widths, 0)
			}
			widths[i] = max(widths[i], fyne.MeasureText(cell, size, fyne.TextStyle{}).Width)
		}
	}
	height := lineHeight(size, fyne.TextStyle{})
	wide := float32(0)
	for _, w := range widths {
		wide += w + 2*Step
	}
	wide = max(wide-2*Step, 0)
	for y, line := range lines {
		cells := strings.Split(line, "\t")
		style := fyne.TextStyle{Bold: y == 0 && len(cells) == 1 && len(lines) > 1}
		x := float32(0)
		for i, cell := range cells {
			t := &canvas.Text{Text: cell, Color: palette.Ink, TextSize: size, TextStyle: style}
			w := fyne.MeasureText(cell, size, style).Width
			at := x
			if i > 0 {
				at += widths[i] - w
			}
			t.Resize(fyne.NewSize(w, height))
			r.cells = append(r.cells, t)
			r.spots = append(r.spots, fyne.NewPos(Step+at, Step/2+float32(y)*height))
			wide = max(wide, at+w)
			if len(cells) > 1 {
				x += widths[i] + 2*Step
			}
		}
	}
	r.size = fyne.NewSize(wide+2*Step, float32(len(lines))*height+Step)
}

func (r *readoutRenderer) Layout(size fyne.Size) {
	r.build()
	r.box.Resize(size)
	for i, t := range r.cells {
		t.Move(r.spots[i])
	}
}

func (r *readoutRenderer) MinSize() fyne.Size {
	r.build()
	return r.size
}

func (r *readoutRenderer) Refresh() {
	r.Layout(r.r.Size())
	r.box.Refresh()
	for _, t := range r.cells {
		t.Refresh()
	}
}

func (r *readoutRenderer) Objects() []fyne.CanvasObject {
	objects := []fyne.CanvasObject{r.box}
	for _, t := range r.cells {
		objects = append(objects, t)
	}
	return objects
}

func (r *readoutRenderer) Destroy() {}
