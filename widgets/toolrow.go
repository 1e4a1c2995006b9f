package widgets

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/widget"
)

// A Tool is one button of a tool row.
type Tool struct {
	Label    string
	Icon     fyne.Resource // may be nil
	Hint     string        // one sentence for the status line, with the shortcut if any
	Disabled bool
	Gap      bool // a wider gap before it
	OnTapped func()
}

// A ToolRow is a row of buttons. What does not fit is under "More" at its end,
// so nothing is cut off in a narrow window or with large type.
type ToolRow struct {
	widget.BaseWidget

	// OnHint is told the hint of the tool under the pointer, "" when it leaves.
	OnHint func(hint string)

	tools   []Tool
	buttons []*toolButton
	more    *toolButton
	shown   int
}

// NewToolRow returns a row.
func NewToolRow(tools ...Tool) *ToolRow {
	t := &ToolRow{}
	t.more = newToolButton(t, Tool{Label: "More", OnTapped: t.menu})
	t.more.chevron = true
	t.ExtendBaseWidget(t)
	t.SetTools(tools)
	return t
}

// SetTools changes the row.
func (t *ToolRow) SetTools(tools []Tool) {
	t.tools = append([]Tool(nil), tools...)
	for len(t.buttons) < len(tools) {
		t.buttons = append(t.buttons, newToolButton(t, Tool{}))
	}
	t.buttons = t.buttons[:len(tools)]
	for i, tool := range tools {
		t.buttons[i].set(tool)
	}
	t.Refresh()
}

// Button returns the button of a label, for a menu to open under it: the one
// that says "More" when the tool is behind it, nil when there is no such tool.
func (t *ToolRow) Button(label string) fyne.CanvasObject {
	for i, tool := range t.tools {
		if tool.Label == label {
			if i >= t.shown {
				return t.more.quietButton
			}
			return t.buttons[i].quietButton
		}
	}
	return nil
}

// menu shows the tools that do not fit.
func (t *ToolRow) menu() {
	c := fyne.CurrentApp().Driver().CanvasForObject(t)
	if c == nil {
		return
	}
	var items []*fyne.MenuItem
	for _, tool := range t.tools[t.shown:] {
		item := fyne.NewMenuItem(tool.Label, tool.OnTapped)
		item.Icon, item.Disabled = tool.Icon, tool.Disabled
		items = append(items, item)
	}
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(t.more.quietButton)
	widget.ShowPopUpMenuAtPosition(fyne.NewMenu("", items...), c, at.AddXY(0, t.more.Size().Height))
}

// CreateRenderer implements fyne.Widget.
func (t *ToolRow) CreateRenderer() fyne.WidgetRenderer {
	t.ExtendBaseWidget(t)
	return &toolRowRenderer{t}
}

type toolRowRenderer struct{ t *ToolRow }

func (r *toolRowRenderer) Layout(size fyne.Size) {
	t := r.t
	gap := func(i int) float32 {
		if i == 0 {
			return 0
		}
		if t.tools[i].Gap {
			return 3 * Step
		}
		return Step / 2
	}
	total := float32(0)
	for i, b := range t.buttons {
		total += gap(i) + b.MinSize().Width
	}
	room := size.Width
	more := t.more.MinSize()
	if total > room {
		room -= more.Width + Step/2
	}
	x := float32(0)
	t.shown = 0
	for i, b := range t.buttons {
		m := b.MinSize()
		if x+gap(i)+m.Width > room || t.shown < i {
			b.Hide()
			continue
		}
		x += gap(i)
		b.Resize(fyne.NewSize(m.Width, size.Height))
		b.Move(fyne.NewPos(x, 0))
		b.Show()
		x += m.Width
		t.shown = i + 1
	}
	if t.shown == len(t.buttons) {
		t.more.Hide()
		return
	}
	t.more.Resize(fyne.NewSize(more.Width, size.Height))
	t.more.Move(fyne.NewPos(min(x+Step/2, max(size.Width-more.Width, 0)), 0))
	t.more.Show()
}

func (r *toolRowRenderer) MinSize() fyne.Size {
	m := r.t.more.MinSize()
	return fyne.NewSize(m.Width, max(m.Height, Target))
}

func (r *toolRowRenderer) Refresh() {
	r.Layout(r.t.Size())
	for _, o := range r.Objects() {
		o.Refresh()
	}
}

func (r *toolRowRenderer) Objects() []fyne.CanvasObject {
	objects := make([]fyne.CanvasObject, 0, len(r.t.buttons)+1)
	for _, b := range r.t.buttons {
		objects = append(objects, b.quietButton)
	}
	return append(objects, r.t.more.quietButton)
}

func (r *toolRowRenderer) Destroy() {}

// newToolButton returns a button that tells its hint.
func newToolButton(row *ToolRow, tool Tool) *toolButton {
	b := &toolButton{row: row, quietButton: newQuietButton("", nil)}
	b.onHover = func(inside bool) {
		if inside {
			b.tell(b.hint)
		} else {
			b.tell("")
		}
	}
	b.onFocus = func() { b.tell(b.hint) }
	b.set(tool)
	return b
}

// A toolButton is a button with its hint.
type toolButton struct {
	*quietButton
	row  *ToolRow
	hint string
}

func (b *toolButton) set(tool Tool) {
	b.hint, b.text, b.icon, b.onTapped = tool.Hint, tool.Label, tool.Icon, tool.OnTapped
	if tool.Disabled {
		b.Disable()
	} else {
		b.Enable()
	}
	b.Refresh()
}

func (b *toolButton) tell(hint string) {
	if b.row.OnHint != nil && b.hint != "" {
		b.row.OnHint(hint)
	}
}
