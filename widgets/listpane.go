package widgets

import (
	"image/color"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A ListItem is one line of a list pane.
type ListItem struct {
	ID      string // handed back by callbacks; unique in the pane
	Name    string
	Detail  string // a few words on it
	Problem string // what is wrong with it, empty when nothing
}

// A ListGroup is one kind of item.
type ListGroup struct {
	Kind  string // handed back by OnAdd
	Title string
	Add   string // what the add button says, such as "Add a bus"; empty for no button
	Items []ListItem
}

// A ListPane lists items by kind, with a button on each kind to add one. With
// the focus, up and down select, enter or a double tap opens, delete removes, insert adds one
// of the kind that is selected.
type ListPane struct {
	widget.BaseWidget

	OnSelected func(id string)
	OnOpened   func(id string)
	OnRemoved  func(id string)
	OnAdd      func(kind string)

	groups   []ListGroup
	lines    []listLine
	selected int // line, -1 for none
	focused  bool
	lastTap  time.Time
	lastLine int
	list     *mutedList
}

// A listLine is a line on the screen: a group's heading or an item.
type listLine struct {
	group int
	item  int // -1 for the heading
}

// NewListPane returns an empty pane.
func NewListPane() *ListPane {
	p := &ListPane{selected: -1}
	p.list = &mutedList{}
	p.list.Length = func() int { return len(p.lines) }
	p.list.CreateItem = func() fyne.CanvasObject { return newListRow(p) }
	p.list.UpdateItem = func(id widget.ListItemID, o fyne.CanvasObject) { o.(*listRow).show(id) }
	p.list.ExtendBaseWidget(p.list)
	p.list.HideSeparators = true
	p.ExtendBaseWidget(p)
	return p
}

// SetGroups shows groups; the selection stays with its item.
func (p *ListPane) SetGroups(groups []ListGroup) {
	id := p.Selected()
	p.groups = make([]ListGroup, len(groups))
	copy(p.groups, groups)
	for i := range p.groups {
		p.groups[i].Items = append([]ListItem(nil), groups[i].Items...) // the caller may change its own
	}
	p.lines = p.lines[:0]
	for g := range groups {
		p.lines = append(p.lines, listLine{g, -1})
		for i := range groups[g].Items {
			p.lines = append(p.lines, listLine{g, i})
		}
	}
	p.selected = p.find(id)
	p.list.Refresh()
}

// Selected returns the ID of the item that is selected, "" for none.
func (p *ListPane) Selected() string {
	if item := p.at(p.selected); item != nil {
		return item.ID
	}
	return ""
}

// Select selects an item and brings it into view, without telling OnSelected.
func (p *ListPane) Select(id string) {
	if id == p.Selected() {
		return
	}
	p.selected = p.find(id)
	p.reveal()
	p.list.Refresh()
}

func (p *ListPane) find(id string) int {
	if id != "" {
		for n := range p.lines {
			if item := p.at(n); item != nil && item.ID == id {
				return n
			}
		}
	}
	return -1
}

// at returns the item on a line, nil for a heading or no line.
func (p *ListPane) at(n int) *ListItem {
	if n < 0 || n >= len(p.lines) || p.lines[n].item < 0 {
		return nil
	}
	return &p.groups[p.lines[n].group].Items[p.lines[n].item]
}

func (p *ListPane) reveal() {
	if p.selected >= 0 {
		p.list.ScrollTo(p.selected)
	}
}

// choose selects a line by hand.
func (p *ListPane) choose(n int) {
	item := p.at(n)
	if item == nil {
		return
	}
	p.selected = n
	p.reveal()
	p.list.Refresh()
	if p.OnSelected != nil {
		p.OnSelected(item.ID)
	}
}

// step selects the next item in a direction.
func (p *ListPane) step(by int) {
	n := p.selected
	if n < 0 && by < 0 {
		n = len(p.lines)
	}
	for n += by; n >= 0 && n < len(p.lines); n += by {
		if p.at(n) != nil {
			p.choose(n)
			return
		}
	}
}

func (p *ListPane) add(kind string) {
	if p.OnAdd != nil {
		p.OnAdd(kind)
	}
}

// FocusGained implements fyne.Focusable.
func (p *ListPane) FocusGained() {
	p.focused = true
	p.Refresh()
}

// FocusLost implements fyne.Focusable.
func (p *ListPane) FocusLost() {
	p.focused = false
	p.Refresh()
}

// TypedRune implements fyne.Focusable.
func (p *ListPane) TypedRune(rune) {}

// TypedKey implements fyne.Focusable.
func (p *ListPane) TypedKey(e *fyne.KeyEvent) {
	item := p.at(p.selected)
	switch e.Name {
	case fyne.KeyUp:
		p.step(-1)
	case fyne.KeyDown:
		p.step(1)
	case fyne.KeyHome:
		p.selected = -1
		p.step(1)
	case fyne.KeyEnd:
		p.selected = -1
		p.step(-1)
	case fyne.KeyReturn, fyne.KeyEnter:
		if item != nil && p.OnOpened != nil {
			p.OnOpened(item.ID)
		}
	case fyne.KeyDelete:
		if item != nil && p.OnRemoved != nil {
			p.OnRemoved(item.ID)
		}
	case fyne.KeyInsert:
		if item != nil {
			p.add(p.groups[p.lines[p.selected].group].Kind)
		}
	}
}

// CreateRenderer implements fyne.Widget.
func (p *ListPane) CreateRenderer() fyne.WidgetRenderer {
	p.ExtendBaseWidget(p)
	return &listPaneRenderer{p: p, focus: canvas.NewRectangle(color.Transparent)}
}

type listPaneRenderer struct {
	p     *ListPane
	focus *canvas.Rectangle
}

func (r *listPaneRenderer) Layout(size fyne.Size) {
	r.p.list.Resize(size)
	r.focus.Resize(size)
}

func (r *listPaneRenderer) MinSize() fyne.Size {
	return fyne.NewSize(24*Step, 4*listRowHeight(r.p))
}

func (r *listPaneRenderer) Refresh() {
	r.focus.StrokeWidth = 0
	if r.p.focused {
		r.focus.StrokeColor, r.focus.StrokeWidth = paletteOf(r.p).Accent, 2
	}
	r.focus.Refresh()
	r.p.list.Refresh()
}

func (r *listPaneRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.p.list, r.focus}
}

func (r *listPaneRenderer) Destroy() {}

// A mutedList leaves focus and selection to the pane around it.
type mutedList struct{ widget.List }

// Enable implements fyne.Disableable.
func (*mutedList) Enable() {}

// Disable implements fyne.Disableable.
func (*mutedList) Disable() {}

// Disabled implements fyne.Disableable: what is disabled takes no focus.
func (*mutedList) Disabled() bool { return true }

// A listRow shows one line.
type listRow struct {
	widget.BaseWidget
	pane *ListPane
	n    int

	hovered               bool
	name, detail, problem *paragraph
	add                   *quietButton
}

func newListRow(pane *ListPane) *listRow {
	w := &listRow{pane: pane,
		name:    newParagraph(theme.SizeNameText, theme.ColorNameForeground),
		detail:  newParagraph(theme.SizeNameCaptionText, theme.ColorNamePlaceHolder),
		problem: newParagraph(theme.SizeNameCaptionText, theme.ColorNameError),
		add:     newQuietButton("", nil),
	}
	w.name.most, w.detail.most, w.problem.most = 1, 1, 1
	w.ExtendBaseWidget(w)
	return w
}

func (w *listRow) show(n int) {
	w.n = n
	if n < 0 || n >= len(w.pane.lines) {
		return
	}
	line := w.pane.lines[n]
	group := w.pane.groups[line.group]
	if line.item < 0 {
		w.name.style.Bold = true
		w.name.text, w.detail.text, w.problem.text = group.Title, "", ""
		w.add.text = group.Add
		w.add.onTapped = func() { w.pane.add(group.Kind) }
	} else {
		item := group.Items[line.item]
		w.name.style.Bold = false
		w.name.text, w.detail.text, w.problem.text = item.Name, item.Detail, item.Problem
		w.add.text = ""
	}
	w.Refresh()
}

// Tapped implements fyne.Tappable.
func (w *listRow) Tapped(*fyne.PointEvent) {
	if c := fyne.CurrentApp().Driver().CanvasForObject(w.pane); c != nil {
		c.Focus(w.pane)
	}
	// A second tap soon after opens, without holding the first one back.
	now := time.Now()
	again := w.n == w.pane.lastLine && now.Sub(w.pane.lastTap) < DoubleTapTime
	w.pane.lastTap, w.pane.lastLine = now, w.n
	if item := w.pane.at(w.n); again && item != nil && w.pane.OnOpened != nil {
		w.pane.lastTap = time.Time{}
		w.pane.OnOpened(item.ID)
		return
	}
	w.pane.choose(w.n)
}

// MouseIn implements desktop.Hoverable.
func (w *listRow) MouseIn(*desktop.MouseEvent) {
	w.hovered = true
	w.Refresh()
}

// MouseMoved implements desktop.Hoverable.
func (w *listRow) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (w *listRow) MouseOut() {
	w.hovered = false
	w.Refresh()
}

// CreateRenderer implements fyne.Widget.
func (w *listRow) CreateRenderer() fyne.WidgetRenderer {
	w.ExtendBaseWidget(w)
	return &listRowRenderer{w: w, back: canvas.NewRectangle(color.Transparent), bar: canvas.NewRectangle(color.Transparent)}
}

type listRowRenderer struct {
	w         *listRow
	back, bar *canvas.Rectangle
}

func (r *listRowRenderer) Layout(size fyne.Size) {
	w := r.w
	r.back.Resize(size)
	r.bar.Resize(fyne.NewSize(4, size.Height))
	x := 2 * Step
	width := size.Width - x - Step
	if w.name.style.Bold {
		x = Step
		button := w.add.MinSize()
		w.add.Resize(fyne.NewSize(button.Width, size.Height))
		w.add.Move(fyne.NewPos(size.Width-button.Width-Step, 0))
		width = size.Width - x - 2*Step
		if w.add.text != "" {
			width -= button.Width
		}
	}
	under := w.detail
	if w.problem.text != "" {
		under = w.problem
	}
	nameHeight := lineHeight(sizeOf(w, theme.SizeNameText), fyne.TextStyle{})
	underHeight := float32(0)
	if under.text != "" {
		underHeight = lineHeight(sizeOf(w, theme.SizeNameCaptionText), fyne.TextStyle{})
	}
	y := (size.Height - nameHeight - underHeight) / 2
	w.name.Move(fyne.NewPos(x, y))
	w.name.Resize(fyne.NewSize(max(width, 0), nameHeight))
	for _, p := range []*paragraph{w.detail, w.problem} {
		p.Move(fyne.NewPos(x, y+nameHeight))
		p.Resize(fyne.NewSize(max(width, 0), underHeight))
	}
}

func (r *listRowRenderer) MinSize() fyne.Size {
	return fyne.NewSize(16*Step, listRowHeight(r.w))
}

// listRowHeight is the height of every line of a pane.
func listRowHeight(w fyne.CanvasObject) float32 {
	height := lineHeight(sizeOf(w, theme.SizeNameText), fyne.TextStyle{}) + lineHeight(sizeOf(w, theme.SizeNameCaptionText), fyne.TextStyle{})
	return max(height+Step, Target)
}

func (r *listRowRenderer) Refresh() {
	w := r.w
	p := paletteOf(w)
	item := w.pane.at(w.n)
	r.back.FillColor, r.bar.FillColor = color.Transparent, color.Transparent
	switch {
	case item != nil && w.n == w.pane.selected:
		r.back.FillColor, r.bar.FillColor = fade(p.Accent, 0x22), p.Accent
	case item != nil && w.hovered:
		r.back.FillColor = fade(p.Ink, 0x0C)
	}
	show := func(o fyne.CanvasObject, yes bool) {
		if yes {
			o.Show()
		} else {
			o.Hide()
		}
	}
	show(w.add, item == nil && w.add.text != "")
	show(w.problem, w.problem.text != "")
	show(w.detail, w.problem.text == "")
	r.Layout(w.Size())
	for _, o := range r.Objects() {
		o.Refresh()
	}
}

func (r *listRowRenderer) Objects() []fyne.CanvasObject {
	w := r.w
	return []fyne.CanvasObject{r.back, r.bar, w.name, w.detail, w.problem, w.add}
}

func (r *listRowRenderer) Destroy() {}
