package widgets

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A quietButton is a button in plain type, for what is used often and should
// not shout: tools, "Edit" on a card, the origin of a value.
type quietButton struct {
	widget.DisableableWidget

	text     string
	icon     fyne.Resource
	style    fyne.TextStyle
	chevron  bool // it opens a menu
	framed   bool // a thin edge, where only the text would not look like a button
	left     bool // text to the left instead of in the middle
	onTapped func()
	onFocus  func()
	onHover  func(inside bool)
	onEscape func()

	hovered, focused bool
}

func newQuietButton(text string, tapped func()) *quietButton {
	b := &quietButton{text: text, onTapped: tapped}
	b.ExtendBaseWidget(b)
	return b
}

func (b *quietButton) set(text string, style fyne.TextStyle) {
	if b.text != text || b.style != style {
		b.text, b.style = text, style
		b.Refresh()
	}
}

// Tapped implements fyne.Tappable.
func (b *quietButton) Tapped(*fyne.PointEvent) {
	if b.onTapped != nil && !b.Disabled() {
		b.onTapped()
	}
}

// MouseIn implements desktop.Hoverable.
func (b *quietButton) MouseIn(*desktop.MouseEvent) { b.hover(true) }

// MouseMoved implements desktop.Hoverable.
func (b *quietButton) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (b *quietButton) MouseOut() { b.hover(false) }

func (b *quietButton) hover(inside bool) {
	b.hovered = inside
	b.Refresh()
	if b.onHover != nil {
		b.onHover(inside)
	}
}

// FocusGained implements fyne.Focusable.
func (b *quietButton) FocusGained() {
	b.focused = true
	b.Refresh()
	if b.onFocus != nil {
		b.onFocus()
	}
}

// FocusLost implements fyne.Focusable.
func (b *quietButton) FocusLost() {
	b.focused = false
	b.Refresh()
}

// TypedRune implements fyne.Focusable.
func (b *quietButton) TypedRune(rune) {}

// TypedKey implements fyne.Focusable.
func (b *quietButton) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeySpace, fyne.KeyReturn, fyne.KeyEnter:
		b.Tapped(nil)
	case fyne.KeyEscape:
		if b.onEscape != nil {
			b.onEscape()
		}
	}
}

// CreateRenderer implements fyne.Widget.
func (b *quietButton) CreateRenderer() fyne.WidgetRenderer {
	b.ExtendBaseWidget(b)
	r := &quietButtonRenderer{b: b, back: canvas.NewRectangle(color.Transparent), text: canvas.NewText("", color.Black),
		icon: canvas.NewImageFromResource(nil), chevron: [2]*canvas.Line{canvas.NewLine(color.Black), canvas.NewLine(color.Black)}}
	r.icon.FillMode = canvas.ImageFillContain
	r.Refresh()
	return r
}

type quietButtonRenderer struct {
	b       *quietButton
	back    *canvas.Rectangle
	text    *canvas.Text
	icon    *canvas.Image
	chevron [2]*canvas.Line
}

// widths of icon, text and chevron, with the gaps that part them.
func (r *quietButtonRenderer) widths() (icon, text, chevron float32) {
	b := r.b
	if b.icon != nil {
		icon = sizeOf(b, theme.SizeNameInlineIcon) * 0.9
		if b.text != "" {
			icon += Step / 2
		}
	}
	text = fyne.MeasureText(b.text, sizeOf(b, theme.SizeNameText), b.style).Width
	if b.chevron {
		chevron = Step/2 + 10*typeScaleOf(b)
	}
	return icon, text, chevron
}

func (r *quietButtonRenderer) MinSize() fyne.Size {
	icon, text, chevron := r.widths()
	height := lineHeight(sizeOf(r.b, theme.SizeNameText), r.b.style) + 2*Step
	return fyne.NewSize(max(icon+text+chevron+2*Step, Target), max(height, Target))
}

func (r *quietButtonRenderer) Layout(size fyne.Size) {
	b := r.b
	r.back.Resize(size)
	icon, text, chevron := r.widths()
	x := (size.Width - icon - text - chevron) / 2
	if b.left {
		x = Step
	}
	height := lineHeight(sizeOf(b, theme.SizeNameText), b.style)
	if b.icon != nil {
		side := sizeOf(b, theme.SizeNameInlineIcon) * 0.9
		r.icon.Resize(fyne.NewSquareSize(side))
		r.icon.Move(fyne.NewPos(x, (size.Height-side)/2))
		x += icon
	}
	r.text.Move(fyne.NewPos(x, (size.Height-height)/2))
	r.text.Resize(fyne.NewSize(text, height))
	k := typeScaleOf(b)
	mid := size.Height / 2
	right := x + text + Step/2
	if b.left {
		right = size.Width - Step - 10*k
	}
	p := func(dx, dy float32) fyne.Position { return fyne.NewPos(right+dx*k, mid+dy*k) }
	r.chevron[0].Position1, r.chevron[0].Position2 = p(1, -2), p(5, 2)
	r.chevron[1].Position1, r.chevron[1].Position2 = p(5, 2), p(9, -2)
}

func (r *quietButtonRenderer) Refresh() {
	b := r.b
	p := paletteOf(b)
	ink := p.Ink
	if b.Disabled() {
		ink = mix(p.Muted, p.Ground, 0.35)
	}
	r.text.Text, r.text.TextSize, r.text.TextStyle, r.text.Color = b.text, sizeOf(b, theme.SizeNameText), b.style, ink
	r.back.FillColor, r.back.StrokeColor, r.back.StrokeWidth, r.back.CornerRadius = color.Transparent, color.Transparent, 0, 2
	if b.framed {
		r.back.StrokeColor, r.back.StrokeWidth = p.Grid, 1
	}
	if b.hovered && !b.Disabled() {
		r.back.FillColor = fade(p.Ink, 0x12)
	}
	if b.focused {
		r.back.StrokeColor, r.back.StrokeWidth = p.Accent, 2
	}
	show(r.icon, b.icon != nil)
	if b.icon != nil {
		name := theme.ColorNameForeground
		if b.Disabled() {
			name = theme.ColorNameDisabled
		}
		r.icon.Resource = theme.NewColoredResource(b.icon, name)
	}
	for _, l := range r.chevron {
		l.StrokeColor, l.StrokeWidth = ink, 1.5
		show(l, b.chevron)
	}
	r.Layout(b.Size())
	for _, o := range r.Objects() {
		o.Refresh()
	}
}

func (r *quietButtonRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.back, r.icon, r.text, r.chevron[0], r.chevron[1]}
}

func (r *quietButtonRenderer) Destroy() {}
