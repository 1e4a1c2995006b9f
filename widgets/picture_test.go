package widgets

import (
	"image/color"
	"math"
	"strings"
	"testing"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/test"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/assets"
)

// board draws three squares side by side, 60 points wide, with a gap of 20.
func board(c draw.Canvas) []Hot {
	var hots []Hot
	for i, id := range []string{"A", "B", "C"} {
		r := vg.Rectangle{Min: vg.Point{X: vg.Length(20 + 80*i), Y: 40}}
		r.Max = r.Min.Add(vg.Point{X: 60, Y: 60})
		c.SetColor(color.NRGBA{0x0b, 0x5a, 0x6b, 0xff})
		c.Fill(vg.Path{{Type: vg.MoveComp, Pos: r.Min}, {Type: vg.LineComp, Pos: vg.Point{X: r.Max.X, Y: r.Min.Y}},
			{Type: vg.LineComp, Pos: r.Max}, {Type: vg.LineComp, Pos: vg.Point{X: r.Min.X, Y: r.Max.Y}}, {Type: vg.CloseComp}})
		hots = append(hots, Hot{Rect: r, ID: id, Role: "bus", Text: "Bus " + id + "\nTHD before\t5.2 %\nTHD after\t1.1 %"})
	}
	// A small place inside the first one.
	return append(hots, Hot{Rect: vg.Rectangle{Min: vg.Point{X: 25, Y: 45}, Max: vg.Point{X: 29, Y: 49}}, ID: "A", Role: "value", Text: "value"})
}

// showBoard shows the squares in a panel of 400 by 200 units: 300 by 150
// points.
func showBoard(t *testing.T, l look, set func(p *Picture)) (*Picture, fyne.Window) {
	t.Helper()
	var p *Picture
	w := stage(t, l, fyne.NewSize(400, 200), func() fyne.CanvasObject {
		p = NewPicture(board)
		if set != nil {
			set(p)
		}
		return p
	})
	w.Canvas().Capture()
	return p, w
}

// middleOf returns where the middle of a square is in the panel.
func middleOf(p *Picture, id string) fyne.Position {
	for _, h := range p.Hots() {
		if h.ID == id && h.Role == "bus" {
			at, size := p.Place(h)
			return at.AddXY(size.Width/2, size.Height/2)
		}
	}
	return fyne.Position{}
}

func TestPictureLooks(t *testing.T) {
	for _, l := range looks {
		panel := 0
		w := stage(t, l, fyne.NewSize(480, 300), func() fyne.CanvasObject {
			plots := fourPanels()
			return NewPicture(func(c draw.Canvas) []Hot {
				plots[panel].BackgroundColor = nil
				plots[panel].Draw(c)
				return []Hot{{Rect: vg.Rectangle{Min: vg.Point{X: 60, Y: 60}, Max: vg.Point{X: 70, Y: 160}}, ID: "5", Role: "value", Text: "Order 5\nbefore\t5.2 %\nafter\t1.1 %"}}
			})
		})
		test.MoveMouse(w.Canvas(), fyne.NewPos(85, 150))
		assertFits(t, l.name, w)
		keep(t, "picture-"+l.name, w.Canvas().Capture())
		_, w = showBoard(t, l, func(p *Picture) { p.Selected = "C" })
		test.FocusNext(w.Canvas())
		w.Canvas().Focused().TypedKey(&fyne.KeyEvent{Name: fyne.KeyRight})
		golden(t, "board-"+l.name, w.Canvas().Capture())
	}
}

// The raster is drawn at the pixels of the screen, once for each refresh.
func TestPictureDrawsOncePerRefresh(t *testing.T) {
	for _, pixels := range []float32{1, 2, 1.25} {
		count := 0
		var size vg.Point
		var p *Picture
		w := stage(t, look{"", false, 1, pixels}, fyne.NewSize(401, 201), func() fyne.CanvasObject {
			p = NewPicture(func(c draw.Canvas) []Hot {
				count++
				size = c.Size()
				return board(c)
			})
			return p
		})
		w.Canvas().Capture()
		if got, want := p.raster.Image().Rect.Dx(), int(math.Ceil(float64(401*pixels))); got != want {
			t.Errorf("at %gx the picture is %d pixels wide, want %d", pixels, got, want)
		}
		if math.Abs(float64(size.X)-401*0.75) > 0.01 || math.Abs(float64(size.Y)-201*0.75) > 0.01 {
			t.Errorf("the canvas is %v points", size)
		}
		count = 0
		for range 5 {
			w.Canvas().Capture()
			test.MoveMouse(w.Canvas(), middleOf(p, "A"))
			test.MoveMouse(w.Canvas(), middleOf(p, "B"))
		}
		if count != 0 {
			t.Errorf("at %gx showing and hovering drew %d times", pixels, count)
		}
		p.Refresh()
		w.Canvas().Capture()
		if count != 1 {
			t.Errorf("at %gx a refresh drew %d times", pixels, count)
		}
		if p.LastDraw() <= 0 || p.LastDraw() > time.Second {
			t.Errorf("the drawing took %v", p.LastDraw())
		}
	}
}

func TestPictureHover(t *testing.T) {
	var hovered []string
	p, w := showBoard(t, plain, func(p *Picture) { p.OnHover = func(h Hot) { hovered = append(hovered, h.ID+h.Role) } })
	test.MoveMouse(w.Canvas(), middleOf(p, "B"))
	box := p.renderer.box
	if !box.Visible() || !strings.HasPrefix(box.text, "Bus B") {
		t.Fatalf("read-out %q, visible %v", box.text, box.Visible())
	}
	if at, size := box.Position(), box.Size(); at.X < 0 || at.Y < 0 || at.X+size.Width > 400 || at.Y+size.Height > 200 {
		t.Errorf("the read-out leaves the panel: %v, %v", at, size)
	}
	if p.Cursor() != desktop.DefaultCursor {
		t.Error("a place that cannot be tapped invites a tap")
	}
	p.OnTapped = func(Hot) {}
	if p.Cursor() != desktop.PointerCursor {
		t.Error("a place that can be tapped does not say so")
	}
	// The small place wins where both are, and is hit from a few units off.
	for _, h := range p.Hots() {
		if h.Role == "value" {
			at, _ := p.Place(h)
			test.MoveMouse(w.Canvas(), at.AddXY(2, 2))
		}
	}
	if h, _ := p.Hover(); h.Role != "value" {
		t.Errorf("hover %v", h)
	}
	test.MoveMouse(w.Canvas(), fyne.NewPos(395, 5))
	if box.Visible() {
		t.Error("the read-out stays")
	}
	if got := strings.Join(hovered, " "); got != "Bbus Avalue " {
		t.Errorf("told %q", got)
	}
	// A new drawing without the place takes the read-out away.
	test.MoveMouse(w.Canvas(), middleOf(p, "C"))
	p.Draw = func(draw.Canvas) []Hot { return nil }
	p.Refresh()
	if box.Visible() {
		t.Error("the read-out of a place that is gone stays")
	}
}

func TestPictureTaps(t *testing.T) {
	var told []string
	clock := time.Unix(1000, 0)
	p, w := showBoard(t, plain, func(p *Picture) {
		p.OnTapped = func(h Hot) { told = append(told, "tap "+h.ID) }
		p.OnDoubleTapped = func(h Hot) { told = append(told, "double "+h.ID) }
		p.OnSecondary = func(h Hot, at fyne.Position) { told = append(told, "menu "+h.ID) }
		p.now = func() time.Time { return clock }
	})
	test.TapCanvas(w.Canvas(), middleOf(p, "A"))
	if w.Canvas().Focused() != fyne.Focusable(p) {
		t.Error("a tap does not focus the picture")
	}
	clock = clock.Add(DoubleTapTime / 2)
	test.TapCanvas(w.Canvas(), middleOf(p, "A"))
	clock = clock.Add(DoubleTapTime / 2)
	test.TapCanvas(w.Canvas(), middleOf(p, "A")) // a third is a single one again
	clock = clock.Add(DoubleTapTime / 2)
	test.TapCanvas(w.Canvas(), middleOf(p, "B")) // another place is no double tap
	clock = clock.Add(2 * DoubleTapTime)
	test.TapCanvas(w.Canvas(), middleOf(p, "B"))
	test.TapCanvas(w.Canvas(), fyne.NewPos(395, 5))
	test.TapSecondaryAt(p, middleOf(p, "C"))
	want := "tap A, double A, tap A, tap B, tap B, tap , menu C"
	if got := strings.Join(told, ", "); got != want {
		t.Errorf("told %q, want %q", got, want)
	}
}

func TestPictureKeyboard(t *testing.T) {
	var told []string
	p, w := showBoard(t, plain, func(p *Picture) {
		p.OnTapped = func(h Hot) { told = append(told, h.ID) }
		p.OnSecondary = func(h Hot, at fyne.Position) { told = append(told, "menu "+h.ID) }
		p.OnCopy = func() { told = append(told, "copy") }
	})
	test.FocusNext(w.Canvas())
	if !p.renderer.focus.Visible() {
		t.Error("the focus is not seen")
	}
	key := func(names ...fyne.KeyName) {
		for _, n := range names {
			p.TypedKey(&fyne.KeyEvent{Name: n})
		}
	}
	key(fyne.KeyRight, fyne.KeySpace, fyne.KeyRight, fyne.KeyReturn, fyne.KeyRight, fyne.KeySpace, fyne.KeyRight, fyne.KeySpace)
	if !p.renderer.box.Visible() {
		t.Error("no read-out for the place reached by keyboard")
	}
	key(fyne.KeyLeft, desktop.KeyMenu, fyne.KeyHome, fyne.KeySpace, fyne.KeyEscape, fyne.KeySpace)
	p.TypedShortcut(&fyne.ShortcutCopy{})
	p.OnKey = func(h Hot, e *fyne.KeyEvent) { told = append(told, string(e.Name)+h.ID) }
	key(fyne.KeyEscape, fyne.KeyRight, fyne.KeyDelete)
	if got := strings.Join(told, " "); got != "A B C C menu B A copy Escape DeleteA" {
		t.Errorf("told %q", got)
	}
}

func TestPictureZoomAndPan(t *testing.T) {
	p, w := showBoard(t, plain, func(p *Picture) { p.Zoomable, p.Natural = true, vg.Point{X: 300, Y: 150} })
	if p.Zoom() != 1 {
		t.Fatalf("zoom %g", p.Zoom())
	}
	at := middleOf(p, "B")
	p.ZoomBy(2, at)
	if now := middleOf(p, "B"); now.Subtract(at).X > 0.5 || at.Subtract(now).X > 0.5 {
		t.Errorf("zooming moved the point under the pointer from %v to %v", at, now)
	}
	test.Drag(w.Canvas(), fyne.NewPos(200, 20), 30, 10)
	if now := middleOf(p, "B"); math.Abs(float64(now.X-at.X-30)) > 0.5 || math.Abs(float64(now.Y-at.Y-10)) > 0.5 {
		t.Errorf("dragging by (30, 10) moved %v to %v", at, now)
	}
	zoom := p.Zoom()
	test.Scroll(w.Canvas(), fyne.NewPos(100, 100), 0, 10)
	if p.Zoom() <= zoom {
		t.Error("the wheel does not zoom")
	}
	for range 200 {
		test.Scroll(w.Canvas(), fyne.NewPos(100, 100), 0, 100)
	}
	if p.Zoom() > greatestZoom {
		t.Errorf("zoom %g", p.Zoom())
	}
	// The keyboard brings a place out of view back.
	test.FocusNext(w.Canvas())
	p.TypedRune('0')
	p.TypedRune('+')
	p.PanBy(-1000, 0)
	p.TypedKey(&fyne.KeyEvent{Name: fyne.KeyRight})
	if m := middleOf(p, "A"); m.X < 0 || m.X > 400 {
		t.Errorf("the place reached is at %v", m)
	}
	p.Fit()
	if p.Zoom() != 1 {
		t.Errorf("fitted at %g", p.Zoom())
	}
	// A drawing larger than the panel is fitted, and again when it grows.
	p.Natural = vg.Point{X: 600, Y: 600}
	p.Refresh()
	if math.Abs(p.Zoom()-0.25) > 1e-6 {
		t.Errorf("fitted at %g, want 150/600", p.Zoom())
	}
	w.Resize(fyne.NewSize(800, 400))
	if math.Abs(p.Zoom()-0.5) > 1e-6 {
		t.Errorf("fitted at %g in a larger window", p.Zoom())
	}
}

func TestPictureDrag(t *testing.T) {
	var id string
	var dx, dy vg.Length
	ended := 0
	p, w := showBoard(t, plain, func(p *Picture) {
		p.CanDrag = func(h Hot) bool { return h.ID != "C" }
		p.OnDragged = func(h Hot, x, y vg.Length) { id, dx, dy = h.ID, dx+x, dy+y }
		p.OnDragEnd = func(Hot) { ended++ }
	})
	m := middleOf(p, "B")
	test.Drag(w.Canvas(), m.AddXY(8, 4), 8, 4)
	if id != "B" || math.Abs(float64(dx-6)) > 1e-3 || math.Abs(float64(dy+3)) > 1e-3 || ended != 1 {
		t.Errorf("dragged %q by (%g, %g), ended %d", id, dx, dy, ended)
	}
	id = ""
	test.Drag(w.Canvas(), middleOf(p, "C").AddXY(8, 4), 8, 4)
	if id != "" || ended != 1 {
		t.Errorf("dragged %q, which may not be", id)
	}
}

// A page of plain pictures scrolls when the wheel is turned over them.
func TestPictureLetsThePageScroll(t *testing.T) {
	var s *container.Scroll
	w := stage(t, plain, fyne.NewSize(300, 100), func() fyne.CanvasObject {
		p := NewPicture(board)
		p.Least = fyne.NewSize(200, 400)
		s = container.NewVScroll(p)
		return s
	})
	test.Scroll(w.Canvas(), fyne.NewPos(100, 50), 0, -30)
	if s.Offset.Y != 30 {
		t.Errorf("the page scrolled by %g", s.Offset.Y)
	}
}

func TestPictureCapture(t *testing.T) {
	p, _ := showBoard(t, plain, nil)
	m := p.Capture(3)
	if m.Rect.Dx() != 1200 || m.Rect.Dy() != 600 {
		t.Fatalf("captured %v", m.Rect)
	}
	at := middleOf(p, "A")
	if got := m.RGBAAt(int(at.X*3), int(at.Y*3)); got != (color.RGBA{0x0b, 0x5a, 0x6b, 0xff}) {
		t.Errorf("the middle of A is %v", got)
	}
	if got, g := m.RGBAAt(2, 2), assets.Light.Ground; got != (color.RGBA{g.R, g.G, g.B, g.A}) {
		t.Errorf("the ground is %v", got)
	}
}

func TestPictureFault(t *testing.T) {
	var told error
	p, w := showBoard(t, plain, func(p *Picture) {
		p.OnFault = func(err error) { told = err }
		p.Draw = func(c draw.Canvas) []Hot {
			c.Push()
			panic("values are not finite")
		}
	})
	if told == nil || !strings.Contains(told.Error(), "not finite") {
		t.Errorf("told %v", told)
	}
	assertFits(t, "fault", w)
	found := false
	for _, s := range shownTexts(p, p.Size()) {
		found = found || strings.Contains(s.text, "cannot be drawn")
	}
	if !found {
		t.Error("nothing says that the picture cannot be drawn")
	}
	p.Draw = board
	p.Refresh()
	if len(p.Hots()) != 4 || p.renderer.fault.text != "" {
		t.Error("the fault stays after a good drawing")
	}
}

func BenchmarkPictureHover(b *testing.B) {
	test.NewTempApp(b)
	p := NewPicture(board)
	w := test.NewTempWindow(b, p)
	w.Resize(fyne.NewSize(400, 200))
	a, c := middleOf(p, "A"), middleOf(p, "C")
	b.ResetTimer()
	for i := range b.N {
		p.MouseMoved(&desktop.MouseEvent{PointEvent: fyne.PointEvent{Position: []fyne.Position{a, c}[i%2]}})
	}
}
