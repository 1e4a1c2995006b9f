package widgets

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
	"gonum.org/v1/plot/vg/draw"
)

// A Verdict is one sentence of the verdict line.
type Verdict struct {
	State  State
	Text   string // the finding, set large
	Before string // how it was before, set smaller after it; may be empty
}

// A VerdictLine says in plain sentences whether the limits are met, each with a
// mark and a word for its state. A sentence can be tapped, and reached and
// opened by keyboard.
//
// Many sentences scroll rather than push the rest of the window away. The
// height is kept when a flip makes a sentence shorter, so that what is
// below does not jump; a new width, type size or number of sentences starts
// over.
type VerdictLine struct {
	widget.BaseWidget

	OnTapped func(i int)

	verdicts []Verdict
	note     string
	rows     []*verdictRow
	scroll   *container.Scroll
	kept     float32
	keptFor  verdictKey
}

// A verdictKey is what the kept height belongs to.
type verdictKey struct {
	width, size float32
	rows        int
}

// NewVerdictLine returns an empty verdict line.
func NewVerdictLine(tapped func(i int)) *VerdictLine {
	v := &VerdictLine{OnTapped: tapped}
	v.ExtendBaseWidget(v)
	return v
}

// SetVerdicts shows sentences.
func (v *VerdictLine) SetVerdicts(verdicts []Verdict) {
	v.verdicts = append([]Verdict(nil), verdicts...)
	v.note = ""
	v.Refresh()
}

// SetNote shows one sentence that is no verdict, such as why there is none.
func (v *VerdictLine) SetNote(text string) {
	v.verdicts = nil
	v.note = text
	v.Refresh()
}

// Verdicts returns the sentences shown.
func (v *VerdictLine) Verdicts() []Verdict { return v.verdicts }

// CreateRenderer implements fyne.Widget.
func (v *VerdictLine) CreateRenderer() fyne.WidgetRenderer {
	v.ExtendBaseWidget(v)
	r := &verdictLineRenderer{v: v}
	r.stack = container.New(verdictStack{r})
	r.scroll = container.NewVScroll(r.stack)
	v.scroll = r.scroll
	r.rebuild()
	return r
}

type verdictLineRenderer struct {
	v      *VerdictLine
	stack  *fyne.Container
	scroll *container.Scroll
}

func (r *verdictLineRenderer) rebuild() {
	v := r.v
	n := max(len(v.verdicts), 1)
	for len(v.rows) < n {
		v.rows = append(v.rows, newVerdictRow(v, len(v.rows)))
	}
	v.rows = v.rows[:n]
	r.stack.Objects = r.stack.Objects[:0]
	for i, row := range v.rows {
		if i < len(v.verdicts) {
			row.set(v.verdicts[i], false)
		} else {
			row.set(Verdict{Text: v.note}, true)
		}
		r.stack.Objects = append(r.stack.Objects, row)
	}
}

// height is what the sentences need at a width.
func (r *verdictLineRenderer) height(width float32) float32 {
	total := float32(0)
	for _, row := range r.v.rows {
		total += row.heightFor(width)
	}
	return total
}

// most is the share of the window that sentences may take before they scroll.
func (r *verdictLineRenderer) most() float32 {
	if c := fyne.CurrentApp().Driver().CanvasForObject(r.v); c != nil && c.Size().Height > 0 {
		return c.Size().Height * 0.28
	}
	return 30 * Step
}

func (r *verdictLineRenderer) Layout(size fyne.Size) { r.scroll.Resize(size) }

func (r *verdictLineRenderer) MinSize() fyne.Size {
	v := r.v
	width := v.Size().Width
	if width == 0 {
		width = 160 * Step // not laid out yet: think of a window
	}
	key := verdictKey{width, sizeOf(v, theme.SizeNameSubHeadingText), len(v.rows)}
	if key != v.keptFor {
		v.kept, v.keptFor = 0, key
	}
	v.kept = max(v.kept, r.height(width))
	return fyne.NewSize(20*Step, min(v.kept, r.most()))
}

func (r *verdictLineRenderer) Refresh() {
	r.rebuild()
	r.stack.Refresh()
	r.scroll.Refresh()
}

func (r *verdictLineRenderer) Objects() []fyne.CanvasObject { return []fyne.CanvasObject{r.scroll} }

func (r *verdictLineRenderer) Destroy() {}

// A verdictStack lays the rows of a verdict line out.
type verdictStack struct{ r *verdictLineRenderer }

func (s verdictStack) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	y := float32(0)
	for _, o := range objects {
		height := o.(*verdictRow).heightFor(size.Width)
		o.Move(fyne.NewPos(0, y))
		o.Resize(fyne.NewSize(size.Width, height))
		y += height
	}
}

func (s verdictStack) MinSize([]fyne.CanvasObject) fyne.Size {
	width := s.r.scroll.Size().Width
	if width == 0 {
		width = 160 * Step
	}
	return fyne.NewSize(20*Step, s.r.height(width))
}

// A verdictRow is one sentence with its mark.
type verdictRow struct {
	widget.BaseWidget
	line    *VerdictLine
	index   int
	verdict Verdict
	note    bool

	mark             *drawing
	word             *canvas.Text
	text, before     *paragraph
	hovered, focused bool
}

func newVerdictRow(line *VerdictLine, index int) *verdictRow {
	w := &verdictRow{line: line, index: index,
		word:   canvas.NewText("", color.Black),
		text:   newParagraph(theme.SizeNameSubHeadingText, theme.ColorNameForeground),
		before: newParagraph(theme.SizeNameText, theme.ColorNamePlaceHolder),
	}
	w.mark = newDrawing(fyne.NewSquareSize(20), func(c draw.Canvas) {
		p := paletteOf(w)
		DrawState(c, w.verdict.State, p.After, p.Over, p.Muted, p.Ground)
	})
	w.ExtendBaseWidget(w)
	return w
}

func (w *verdictRow) set(v Verdict, note bool) {
	w.verdict, w.note = v, note
	w.text.set(v.Text)
	w.before.set(v.Before)
}

// lead is the room that mark and word take, the same on every row.
func (w *verdictRow) lead() float32 {
	size := sizeOf(w, theme.SizeNameText)
	widest := float32(0)
	for _, v := range w.line.verdicts {
		widest = max(widest, fyne.MeasureText(v.State.Word(), size, fyne.TextStyle{Bold: true}).Width)
	}
	if w.note {
		return Step
	}
	return Step + w.mark.MinSize().Width + Step + widest + 2*Step
}

func (w *verdictRow) heightFor(width float32) float32 {
	inner := max(width-w.lead()-Step, 8*Step)
	height := w.text.heightFor(inner)
	if _, beside := w.beside(inner); !beside {
		height += w.before.heightFor(inner)
	}
	return max(height, w.mark.MinSize().Height, Target) + Step
}

// beside tells whether the words on before fit on the line of the finding, in
// small type if need be, and how far the finding reaches.
func (w *verdictRow) beside(inner float32) (float32, bool) {
	reach := fyne.MeasureText(w.text.text, sizeOf(w, w.text.size), w.text.style).Width + 2*Step
	for _, size := range []fyne.ThemeSizeName{theme.SizeNameText, theme.SizeNameCaptionText} {
		w.before.size = size
		if reach+fyne.MeasureText(w.before.text, sizeOf(w, size), w.before.style).Width+1 <= inner {
			return reach, true
		}
	}
	w.before.size = theme.SizeNameText
	return reach, false
}

// Tapped implements fyne.Tappable.
func (w *verdictRow) Tapped(*fyne.PointEvent) {
	if w.line.OnTapped != nil && !w.note {
		w.line.OnTapped(w.index)
	}
}

// Enable implements fyne.Disableable.
func (w *verdictRow) Enable() {}

// Disable implements fyne.Disableable.
func (w *verdictRow) Disable() {}

// Disabled implements fyne.Disableable: a note takes no focus.
func (w *verdictRow) Disabled() bool { return w.note }

// MouseIn implements desktop.Hoverable.
func (w *verdictRow) MouseIn(*desktop.MouseEvent) {
	w.hovered = true
	w.Refresh()
}

// MouseMoved implements desktop.Hoverable.
func (w *verdictRow) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (w *verdictRow) MouseOut() {
	w.hovered = false
	w.Refresh()
}

// Cursor implements desktop.Cursorable.
func (w *verdictRow) Cursor() desktop.Cursor {
	if w.line.OnTapped != nil && !w.note {
		return desktop.PointerCursor
	}
	return desktop.DefaultCursor
}

// FocusGained implements fyne.Focusable.
func (w *verdictRow) FocusGained() {
	w.focused = true
	w.Refresh()
	if s := w.line.scroll; s != nil {
		top, bottom := w.Position().Y, w.Position().Y+w.Size().Height
		if top < s.Offset.Y || bottom > s.Offset.Y+s.Size().Height {
			s.ScrollToOffset(fyne.NewPos(0, top))
		}
	}
}

// FocusLost implements fyne.Focusable.
func (w *verdictRow) FocusLost() {
	w.focused = false
	w.Refresh()
}

// TypedRune implements fyne.Focusable.
func (w *verdictRow) TypedRune(rune) {}

// TypedKey implements fyne.Focusable.
func (w *verdictRow) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeySpace, fyne.KeyReturn, fyne.KeyEnter:
		w.Tapped(nil)
	}
}

// CreateRenderer implements fyne.Widget.
func (w *verdictRow) CreateRenderer() fyne.WidgetRenderer {
	w.ExtendBaseWidget(w)
	r := &verdictRowRenderer{w: w, back: canvas.NewRectangle(color.Transparent)}
	r.Refresh()
	return r
}

type verdictRowRenderer struct {
	w    *verdictRow
	back *canvas.Rectangle
}

func (r *verdictRowRenderer) Layout(size fyne.Size) {
	w := r.w
	r.back.Resize(size)
	lead := w.lead()
	inner := max(size.Width-lead-Step, 8*Step)
	line := lineHeight(sizeOf(w, theme.SizeNameSubHeadingText), fyne.TextStyle{})
	top := Step / 2
	side := w.mark.MinSize()
	w.mark.Resize(side)
	w.mark.Move(fyne.NewPos(Step, top+(line-side.Height)/2))
	word := w.word.MinSize()
	w.word.Resize(word)
	w.word.Move(fyne.NewPos(2*Step+side.Width, top+(line-word.Height)/2))
	height := w.text.heightFor(inner)
	w.text.Move(fyne.NewPos(lead, top))
	w.text.Resize(fyne.NewSize(inner, height))
	if reach, beside := w.beside(inner); beside {
		small := lineHeight(sizeOf(w, w.before.size), fyne.TextStyle{})
		w.before.Move(fyne.NewPos(lead+reach, top+(line-small)*0.8)) // on one baseline
		w.before.Resize(fyne.NewSize(inner-reach, small))
		return
	}
	w.before.Move(fyne.NewPos(lead, top+height))
	w.before.Resize(fyne.NewSize(inner, w.before.heightFor(inner)))
}

func (r *verdictRowRenderer) MinSize() fyne.Size {
	return fyne.NewSize(20*Step, r.w.heightFor(r.w.Size().Width))
}

func (r *verdictRowRenderer) Refresh() {
	w := r.w
	p := paletteOf(w)
	w.word.Text, w.word.Color = w.verdict.State.Word(), p.Muted
	w.word.TextSize, w.word.TextStyle = sizeOf(w, theme.SizeNameText), fyne.TextStyle{Bold: true}
	switch w.verdict.State {
	case Meets:
		w.word.Color = p.After
	case Fails:
		w.word.Color = p.Over
	}
	if w.note {
		w.word.Hide()
		w.mark.Hide()
	} else {
		w.word.Show()
		w.mark.Show()
	}
	r.back.FillColor, r.back.StrokeColor, r.back.StrokeWidth = color.Transparent, color.Transparent, 0
	if w.hovered && w.line.OnTapped != nil && !w.note {
		r.back.FillColor = fade(p.Ink, 0x0C)
	}
	if w.focused {
		r.back.StrokeColor, r.back.StrokeWidth = p.Accent, 2
	}
	r.Layout(w.Size())
	r.back.Refresh()
	w.word.Refresh()
	w.mark.Refresh()
	w.text.Refresh()
	w.before.Refresh()
}

func (r *verdictRowRenderer) Objects() []fyne.CanvasObject {
	w := r.w
	return []fyne.CanvasObject{r.back, w.mark, w.word, w.text, w.before}
}

func (r *verdictRowRenderer) Destroy() {}
