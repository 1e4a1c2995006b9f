package widgets

import (
	"fmt"
	"image"
	"image/color"
	"math"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// A Picture is a panel with a drawing. The drawing is made anew on Refresh and
// when the size changes, at the pixels of the screen; the places it names
// (Hots) answer to pointer and keyboard.
//
// Lengths in the drawing are points: Points and Units convert. A panel of 480
// window units is 360 points wide.
//
// With the focus, arrow keys walk from place to place, space or enter taps, the
// menu key is a secondary tap, + - 0 zoom a zoomable picture.
type Picture struct {
	widget.BaseWidget

	// Draw draws the picture on the canvas' rectangle and returns its places. A
	// panic in it is caught and shown as a sentence.
	Draw func(c draw.Canvas) []Hot

	OnTapped       func(h Hot)                   // h is zero when the ground is tapped
	OnDoubleTapped func(h Hot)                   // after OnTapped of the first tap, which is not held back
	OnSecondary    func(h Hot, at fyne.Position) // at is where a menu goes, on the canvas
	CanDrag        func(h Hot) bool              // nil: whatever has OnDragged may be dragged
	OnDragged      func(h Hot, dx, dy vg.Length) // step since the last call, y up, in the drawing's points
	OnDragEnd      func(h Hot)
	OnHover        func(h Hot) // zero when the pointer leaves a place
	OnCopy         func()      // copy shortcut while focused; see Capture
	// OnKey is told keys that the picture has no use for, with the place that is
	// reached or was tapped last; for delete, insert, rename and the like.
	OnKey   func(h Hot, e *fyne.KeyEvent)
	OnFault func(err error)

	// Zoomable lets wheel and drag zoom and pan.
	Zoomable bool
	// Natural is the size of the drawing at zoom 1; zero draws at the panel's
	// own size. The drawing is fitted into the panel until it is zoomed.
	Natural vg.Point
	// Least is the least size of the panel.
	Least fyne.Size
	// Selected is the ID of the place that stays outlined.
	Selected string
	// Ground is the colour behind the drawing; nil is the theme's.
	Ground color.Color

	raster  *Raster
	hots    []Hot
	stale   bool
	wish    pixelWish
	drawnAt fyne.Size
	took    time.Duration
	fault   string

	zoom   float64
	offset vg.Point // of the drawing's origin from the panel's, in points
	moved  bool     // zoomed or panned by the user

	hover    Hot // under the pointer
	current  Hot // reached by keyboard
	pointer  fyne.Position
	focused  bool
	drag     Hot
	dragging bool

	lastTap  time.Time
	lastHot  Hot
	now      func() time.Time
	renderer *pictureRenderer
}

// DoubleTapTime is how soon a second tap on the same place must follow.
const DoubleTapTime = 400 * time.Millisecond

// Bounds of the zoom factor, and how far a small drawing is blown up to fit.
const (
	leastZoom    = 0.1
	greatestZoom = 12
	greatestFit  = 1.6
)

// NewPicture returns a panel that shows what draw draws.
func NewPicture(draw func(c draw.Canvas) []Hot) *Picture {
	p := &Picture{Draw: draw}
	p.ExtendBaseWidget(p)
	return p
}

// Refresh draws the picture anew.
func (p *Picture) Refresh() {
	p.stale = true
	p.BaseWidget.Refresh()
}

// LastDraw returns how long the last drawing took, raster included.
func (p *Picture) LastDraw() time.Duration { return p.took }

// Hots returns the places of the picture as it is now.
func (p *Picture) Hots() []Hot {
	p.ensure()
	return p.hots
}

// Place returns where a place stands in the panel.
func (p *Picture) Place(h Hot) (fyne.Position, fyne.Size) {
	a, b := p.toPanel(h.Rect.Min), p.toPanel(h.Rect.Max)
	return fyne.NewPos(a.X, b.Y), fyne.NewSize(b.X-a.X, a.Y-b.Y)
}

// Hover returns the place under the pointer, or the one reached by keyboard.
func (p *Picture) Hover() (Hot, bool) {
	h := p.shown()
	return h, !h.Zero()
}

// Capture draws the picture as it is seen into an image of its own, at a number
// of pixels a window unit.
func (p *Picture) Capture(scale float64) *image.RGBA {
	size := p.Size()
	w, h := int(math.Ceil(float64(size.Width)*scale)), int(math.Ceil(float64(size.Height)*scale))
	r := NewRaster(w, h, UnitDPI*scale)
	p.drawOn(r)
	return r.Image()
}

// MinSize implements fyne.CanvasObject.
func (p *Picture) MinSize() fyne.Size {
	p.ExtendBaseWidget(p)
	return p.Least.Max(fyne.NewSquareSize(Target))
}

// Resize implements fyne.CanvasObject.
func (p *Picture) Resize(s fyne.Size) {
	if s != p.Size() {
		p.stale = true
	}
	p.BaseWidget.Resize(s)
}

// ensure draws the picture when it is not what it should be, at the pixels of
// the canvas it is on.
func (p *Picture) ensure() {
	size := p.Size()
	if size.Width < 1 || size.Height < 1 {
		return
	}
	if p.raster != nil && !p.stale && p.drawnAt == size {
		return
	}
	w, h := p.wish.w, p.wish.h
	if p.wish.size != size {
		scale := float32(1)
		if p.wish.size.Width > 0 {
			scale = float32(w) / p.wish.size.Width
		} else if c := fyne.CurrentApp().Driver().CanvasForObject(p); c != nil {
			scale = c.Scale()
		}
		w, h = int(math.Round(float64(size.Width*scale))), int(math.Round(float64(size.Height*scale)))
	}
	p.generate(w, h)
}

// A pixelWish is how many pixels the toolkit last asked for, at which size of
// the panel: the next drawing is made at once with as many.
type pixelWish struct {
	w, h int
	size fyne.Size
}

// asked draws for the toolkit.
func (p *Picture) asked(w, h int) image.Image {
	p.wish = pixelWish{w, h, p.Size()}
	return p.generate(w, h)
}

// generate returns the picture at a number of pixels.
func (p *Picture) generate(w, h int) image.Image {
	size := p.Size()
	if p.raster == nil {
		p.raster = &Raster{}
	}
	b := image.Rectangle{}
	if p.raster.img != nil {
		b = p.raster.img.Rect
	}
	if !p.stale && b.Dx() == w && b.Dy() == h && p.drawnAt == size {
		return p.raster.Image()
	}
	start := time.Now()
	dpi := float64(UnitDPI)
	if size.Width > 0 {
		dpi *= float64(w) / float64(size.Width)
	}
	p.raster.Reset(w, h, dpi, p.ground())
	p.hots = p.drawOn(p.raster)
	p.took = time.Since(start)
	p.stale, p.drawnAt = false, size
	p.follow()
	return p.raster.Image()
}

func (p *Picture) ground() color.Color {
	if p.Ground != nil {
		return p.Ground
	}
	return paletteOf(p).Ground
}

// drawOn draws on a raster and returns the places.
func (p *Picture) drawOn(r *Raster) (hots []Hot) {
	p.place()
	r.Reset(r.img.Rect.Dx(), r.img.Rect.Dy(), r.dpi, p.ground())
	p.fault = ""
	if p.Draw == nil {
		return nil
	}
	defer func() {
		if v := recover(); v != nil {
			hots = nil
			r.Reset(r.img.Rect.Dx(), r.img.Rect.Dy(), r.dpi, p.ground())
			p.fault = "This picture cannot be drawn. The numbers behind it are in the tables."
			if p.OnFault != nil {
				p.OnFault(fmt.Errorf("picture: %v", v))
			}
		}
	}()
	size := vg.Point{X: Points(p.Size().Width), Y: Points(p.Size().Height)}
	if p.Natural.X > 0 && p.Natural.Y > 0 {
		size = p.Natural
	}
	if p.offset.X != 0 || p.offset.Y != 0 {
		r.Translate(p.offset)
	}
	if p.zoom != 1 {
		r.Scale(p.zoom, p.zoom)
	}
	return p.Draw(draw.NewCanvas(r, size.X, size.Y))
}

// follow finds the places in hand in a new drawing.
func (p *Picture) follow() {
	find := func(h Hot) Hot {
		if h.Zero() {
			return h
		}
		for _, n := range p.hots {
			if n.same(h) {
				return n
			}
		}
		return Hot{}
	}
	p.hover, p.current = find(p.hover), find(p.current)
}

// shown is the place whose read-out is shown.
func (p *Picture) shown() Hot {
	if !p.hover.Zero() {
		return p.hover
	}
	if p.focused {
		return p.current
	}
	return Hot{}
}

// overlay brings the objects above the picture up to date.
func (p *Picture) overlay() {
	if p.renderer != nil {
		p.renderer.overlay()
	}
}

func (p *Picture) at(pos fyne.Position) Hot {
	p.ensure()
	h, _ := hit(p.hots, p.fromPanel(pos), Points(Target)/vg.Length(p.zoom))
	return h
}

func (p *Picture) setHover(h Hot) {
	changed := h != p.hover
	p.hover = h
	p.overlay()
	if changed && p.OnHover != nil {
		p.OnHover(h)
	}
}

// CreateRenderer implements fyne.Widget.
func (p *Picture) CreateRenderer() fyne.WidgetRenderer {
	p.ExtendBaseWidget(p)
	p.stale = true
	r := &pictureRenderer{p: p, pad: newZoomPad(p), box: newReadout(),
		selected: canvas.NewRectangle(color.Transparent),
		outline:  canvas.NewRectangle(color.Transparent),
		focus:    canvas.NewRectangle(color.Transparent),
		fault:    newParagraph(theme.SizeNameText, theme.ColorNameForeground),
		pulse:    canvas.NewRectangle(color.Transparent),
	}
	r.pulse.Resize(fyne.NewSize(1, 1))
	r.raster = canvas.NewRaster(p.asked)
	r.raster.ScaleMode = canvas.ImageScalePixels
	p.renderer = r
	return r
}

type pictureRenderer struct {
	p                        *Picture
	raster                   *canvas.Raster
	selected, outline, focus *canvas.Rectangle
	box                      *readout
	fault                    *paragraph
	pad                      *zoomPad

	// pulse is always there and never seen. The toolkit does not repaint for an
	// object that was hidden until now, and a refresh of the whole picture would
	// send its pixels again: so this is refreshed instead.
	pulse *canvas.Rectangle
}

func (r *pictureRenderer) Layout(size fyne.Size) {
	r.raster.Resize(size)
	r.pad.Resize(size)
	r.focus.Resize(size)
	r.fault.Resize(fyne.NewSize(max(size.Width-4*Step, 0), size.Height))
	r.fault.Move(fyne.NewPos(2*Step, 2*Step))
	r.overlay()
}

func (r *pictureRenderer) MinSize() fyne.Size { return r.p.MinSize() }

func (r *pictureRenderer) Refresh() {
	r.raster.Refresh()
	r.overlay()
}

func (r *pictureRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.raster, r.selected, r.outline, r.fault, r.box, r.focus, r.pad, r.pulse}
}

func (r *pictureRenderer) Destroy() { r.p.renderer = nil }

// overlay places outlines and read-out.
func (r *pictureRenderer) overlay() {
	p := r.p
	p.ensure()
	defer r.pulse.Refresh()
	r.pad.wheel = p.Zoomable
	if p.Zoomable || p.OnDragged != nil {
		r.pad.Show()
	} else {
		r.pad.Hide()
	}
	palette := paletteOf(p)
	r.fault.set(p.fault)

	frame := func(o *canvas.Rectangle, h Hot, ok bool, width float32) {
		if !ok {
			o.Hide()
			return
		}
		pos, size := p.Place(h)
		const room = 3
		o.StrokeColor, o.StrokeWidth, o.CornerRadius = palette.Accent, width, 2
		o.Move(pos.SubtractXY(room, room))
		o.Resize(size.AddWidthHeight(2*room, 2*room))
		o.Show()
		o.Refresh()
	}
	shown := p.shown()
	frame(r.outline, shown, !shown.Zero(), 1.5)
	var selected Hot
	if p.Selected != "" {
		for _, h := range p.hots {
			if h.ID == p.Selected && h.Role != "value" && h.Role != "switch" {
				selected = h
				break
			}
		}
	}
	frame(r.selected, selected, !selected.Zero(), 3)

	if p.focused {
		r.focus.StrokeColor, r.focus.StrokeWidth = palette.Accent, 2
		r.focus.Show()
		r.focus.Refresh()
	} else {
		r.focus.Hide()
	}

	if shown.Text == "" || p.dragging {
		r.box.Hide()
		return
	}
	at := p.pointer
	if p.hover.Zero() {
		pos, size := p.Place(shown)
		at = fyne.NewPos(pos.X+size.Width, pos.Y)
	}
	r.box.set(shown.Text)
	r.box.near(at, p.Size())
	r.box.Show()
}
