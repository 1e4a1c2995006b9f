package widgets

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"
)

// A Switch is a large on/off switch. On is told by place, fill and a tick; off
// by place, a hollow knob and an open track, so that it is read without colour.
type Switch struct {
	widget.DisableableWidget

	On        bool
	OnChanged func(on bool)

	hovered, focused bool
	onFocus          func()
	onEscape         func()
}

// switchHeight is the height of a switch at type scale 1, with room for its
// focus ring.
const switchHeight float32 = 32

// NewSwitch returns a switch.
func NewSwitch(on bool, changed func(on bool)) *Switch {
	s := &Switch{On: on, OnChanged: changed}
	s.ExtendBaseWidget(s)
	return s
}

// SetOn sets the switch without telling OnChanged.
func (s *Switch) SetOn(on bool) {
	if s.On != on {
		s.On = on
		s.Refresh()
	}
}

func (s *Switch) flip() {
	if s.Disabled() {
		return
	}
	s.On = !s.On
	s.Refresh()
	if s.OnChanged != nil {
		s.OnChanged(s.On)
	}
}

// Tapped implements fyne.Tappable.
func (s *Switch) Tapped(*fyne.PointEvent) {
	if c := fyne.CurrentApp().Driver().CanvasForObject(s); c != nil && !s.Disabled() {
		c.Focus(s)
	}
	s.flip()
}

// MouseIn implements desktop.Hoverable.
func (s *Switch) MouseIn(*desktop.MouseEvent) {
	s.hovered = true
	s.Refresh()
}

// MouseMoved implements desktop.Hoverable.
func (s *Switch) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (s *Switch) MouseOut() {
	s.hovered = false
	s.Refresh()
}

// Cursor implements desktop.Cursorable.
func (s *Switch) Cursor() desktop.Cursor {
	if s.Disabled() {
		return desktop.DefaultCursor
	}
	return desktop.PointerCursor
}

// FocusGained implements fyne.Focusable.
func (s *Switch) FocusGained() {
	s.focused = true
	s.Refresh()
	if s.onFocus != nil {
		s.onFocus()
	}
}

// FocusLost implements fyne.Focusable.
func (s *Switch) FocusLost() {
	s.focused = false
	s.Refresh()
}

// TypedRune implements fyne.Focusable.
func (s *Switch) TypedRune(r rune) {
	if r == ' ' {
		s.flip()
	}
}

// TypedKey implements fyne.Focusable.
func (s *Switch) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeyReturn, fyne.KeyEnter:
		s.flip()
	case fyne.KeyEscape:
		if s.onEscape != nil {
			s.onEscape()
		}
	}
}

// MinSize implements fyne.CanvasObject.
func (s *Switch) MinSize() fyne.Size {
	s.ExtendBaseWidget(s)
	k := max(typeScaleOf(s), 1)
	return fyne.NewSize(56*k, switchHeight*k)
}

// CreateRenderer implements fyne.Widget.
func (s *Switch) CreateRenderer() fyne.WidgetRenderer {
	s.ExtendBaseWidget(s)
	r := &switchRenderer{s: s,
		focus: canvas.NewRectangle(color.Transparent),
		track: canvas.NewRectangle(color.Transparent),
		knob:  canvas.NewCircle(color.Transparent),
		tick:  [2]*canvas.Line{canvas.NewLine(color.Black), canvas.NewLine(color.Black)},
	}
	r.Refresh()
	return r
}

type switchRenderer struct {
	s            *Switch
	focus, track *canvas.Rectangle
	knob         *canvas.Circle
	tick         [2]*canvas.Line
}

func (r *switchRenderer) Layout(size fyne.Size) {
	want := r.s.MinSize()
	k := want.Height / 32
	x, y := (size.Width-want.Width)/2, (size.Height-want.Height)/2
	r.focus.Move(fyne.NewPos(x, y))
	r.focus.Resize(want)
	r.focus.CornerRadius = 16 * k
	r.track.Move(fyne.NewPos(x+4*k, y+4*k))
	r.track.Resize(fyne.NewSize(48*k, 24*k))
	r.track.CornerRadius = 12 * k
	at := fyne.NewPos(x+8*k, y+8*k)
	if r.s.On {
		at.X = x + 32*k
	}
	r.knob.Move(at)
	r.knob.Resize(fyne.NewSize(16*k, 16*k))
	// The tick stands in the free half of the track.
	p := func(dx, dy float32) fyne.Position { return fyne.NewPos(x+dx*k, y+dy*k) }
	r.tick[0].Position1, r.tick[0].Position2 = p(14, 16), p(18, 20)
	r.tick[1].Position1, r.tick[1].Position2 = p(18, 20), p(25, 12)
	for _, l := range r.tick {
		l.StrokeWidth = 2 * k
	}
}

func (r *switchRenderer) MinSize() fyne.Size { return r.s.MinSize() }

func (r *switchRenderer) Refresh() {
	p := paletteOf(r.s)
	edge, fill := p.Muted, color.NRGBA{}
	knob, ring := color.NRGBA{}, p.Muted
	if r.s.hovered && !r.s.Disabled() {
		fill = fade(p.Ink, 0x12)
	}
	if r.s.On {
		edge, fill, knob, ring = p.After, p.After, p.Ground, p.Ground
	}
	if r.s.Disabled() {
		edge = mix(edge, p.Ground, 0.6)
		if r.s.On {
			fill = edge
		}
		ring = mix(ring, p.Ground, 0.4)
	}
	r.track.FillColor, r.track.StrokeColor, r.track.StrokeWidth = fill, edge, 2
	r.knob.FillColor, r.knob.StrokeColor, r.knob.StrokeWidth = knob, ring, 2
	for _, l := range r.tick {
		l.StrokeColor = p.Ground
		if r.s.On {
			l.Show()
		} else {
			l.Hide()
		}
	}
	r.focus.StrokeColor, r.focus.StrokeWidth = p.Accent, 2
	if r.s.focused {
		r.focus.Show()
	} else {
		r.focus.Hide()
	}
	r.Layout(r.s.Size())
	for _, o := range r.Objects() {
		o.Refresh()
	}
}

func (r *switchRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.focus, r.track, r.knob, r.tick[0], r.tick[1]}
}

func (r *switchRenderer) Destroy() {}

var _ fyne.Focusable = (*Switch)(nil)
