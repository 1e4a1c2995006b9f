package widgets

import (
	"fmt"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A LinesEditor edits rows of a few numbers, such as a spectrum: order, per
// cent, angle. There is always an empty row at the end to type into. Pasting
// several rows or cells into any cell fills from there on; a row that is
// emptied goes away. What is wrong stands beside its row.
type LinesEditor struct {
	widget.BaseWidget

	// Check returns one problem a row, empty when there is none; nil checks
	// only that numbers are numbers and needed cells are filled.
	Check func(rows [][]string) []string
	// OnChanged is told the filled rows.
	OnChanged func(rows [][]string)
	// OnFocus is told when a cell takes the focus.
	OnFocus func()
	// OnSize is told when rows were added or went away.
	OnSize func()

	onEscape func()
	columns  []Column
	rows     []*linesRow
	problems []string
	setting  bool
}

// A linesRow is the cells of one row and what is wrong with it.
type linesRow struct {
	cells   []*linesCell
	trouble *paragraph
}

// NewLinesEditor returns an editor with one empty row.
func NewLinesEditor(columns ...Column) *LinesEditor {
	e := &LinesEditor{columns: columns}
	e.ExtendBaseWidget(e)
	e.SetRows(nil)
	return e
}

// SetRows shows rows, without telling OnChanged.
func (e *LinesEditor) SetRows(rows [][]string) {
	e.setting = true
	for len(e.rows) < len(rows)+1 {
		e.rows = append(e.rows, e.newRow())
	}
	e.rows = e.rows[:len(rows)+1]
	for i, row := range e.rows {
		for j, cell := range row.cells {
			text := ""
			if i < len(rows) && j < len(rows[i]) {
				text = rows[i][j]
			}
			if cell.Text != text {
				cell.SetText(text)
			}
			cell.at = [2]int{i, j}
		}
	}
	e.setting = false
	e.check()
	e.Refresh()
}

// Rows returns the filled rows, numbers with a decimal point.
func (e *LinesEditor) Rows() [][]string {
	var rows [][]string
	for _, row := range e.rows {
		texts, filled := row.texts(e.columns)
		if filled {
			rows = append(rows, texts)
		}
	}
	return rows
}

// Problems returns what is wrong, one text for each of Rows.
func (e *LinesEditor) Problems() []string { return e.problems }

// PasteAt fills cells from a text of rows, starting at a cell.
func (e *LinesEditor) PasteAt(row, column int, text string) {
	pasted := SplitRows(text)
	grid := make([][]string, 0, len(e.rows)+len(pasted))
	for _, r := range e.rows[:len(e.rows)-1] {
		texts, _ := r.texts(e.columns)
		grid = append(grid, texts)
	}
	for i, cells := range pasted {
		for row+i >= len(grid) {
			grid = append(grid, make([]string, len(e.columns)))
		}
		for j, cell := range cells {
			if column+j < len(e.columns) {
				grid[row+i][column+j] = cell
			}
		}
	}
	e.SetRows(grid)
	e.tell()
	if e.OnSize != nil {
		e.OnSize()
	}
}

func (e *LinesEditor) newRow() *linesRow {
	row := &linesRow{trouble: newParagraph(theme.SizeNameCaptionText, theme.ColorNameError)}
	row.trouble.style.Bold = true
	for range e.columns {
		row.cells = append(row.cells, newLinesCell(e))
	}
	return row
}

// texts returns a row's cells with decimal points and whether any is filled.
func (r *linesRow) texts(columns []Column) (texts []string, filled bool) {
	texts = make([]string, len(r.cells))
	for j, cell := range r.cells {
		text := strings.TrimSpace(cell.Text)
		if !columns[j].Text {
			text = PointNumber(text)
		}
		texts[j] = text
		filled = filled || text != ""
	}
	return texts, filled
}

// typed follows a change of one cell.
func (e *LinesEditor) typed(c *linesCell) {
	if e.setting {
		return
	}
	if _, filled := e.rows[len(e.rows)-1].texts(e.columns); filled {
		row := e.newRow()
		for j, cell := range row.cells {
			cell.at = [2]int{len(e.rows), j}
		}
		e.rows = append(e.rows, row)
		if e.OnSize != nil {
			e.OnSize()
		}
	}
	e.check()
	e.Refresh()
	e.tell()
}

func (e *LinesEditor) tell() {
	if e.OnChanged != nil {
		e.OnChanged(e.Rows())
	}
}

// check finds what is wrong with the filled rows.
func (e *LinesEditor) check() {
	rows := e.Rows()
	problems := make([]string, len(rows))
	if e.Check != nil {
		copy(problems, e.Check(rows))
	}
	for i, row := range rows {
		for j, text := range row {
			c := e.columns[j]
			if text == "" {
				if !c.Optional {
					problems[i] = sentence(c.Label+" is missing", "")
					break
				}
				continue
			}
			if !c.Text && !isNumber(text) {
				problems[i] = sentence(fmt.Sprintf("%s: %q is not a number", c.Label, text), "")
				break
			}
		}
	}
	e.problems = problems
	n := 0
	for _, row := range e.rows {
		row.trouble.text = ""
		if _, filled := row.texts(e.columns); filled {
			row.trouble.text = problems[n]
			n++
		}
	}
}

// tidy takes emptied rows out once the cursor has left them.
func (e *LinesEditor) tidy() {
	for _, row := range e.rows[:len(e.rows)-1] {
		if _, filled := row.texts(e.columns); !filled {
			e.SetRows(e.Rows())
			if e.OnSize != nil {
				e.OnSize()
			}
			return
		}
	}
}

// focus moves the cursor to a cell.
func (e *LinesEditor) focus(row, column int) {
	if row < 0 || row >= len(e.rows) || column < 0 || column >= len(e.columns) {
		return
	}
	if c := fyne.CurrentApp().Driver().CanvasForObject(e); c != nil {
		c.Focus(e.rows[row].cells[column])
	}
}

// CreateRenderer implements fyne.Widget.
func (e *LinesEditor) CreateRenderer() fyne.WidgetRenderer {
	e.ExtendBaseWidget(e)
	r := &linesRenderer{e: e}
	for _, c := range e.columns {
		r.heads = append(r.heads, &canvas.Text{Text: headText(c)})
	}
	return r
}

type linesRenderer struct {
	e     *LinesEditor
	heads []*canvas.Text
}

// heightFor returns the height the editor needs at a width.
func (e *LinesEditor) heightFor(width float32) float32 {
	r := &linesRenderer{e: e}
	return r.lay(width, false)
}

// lay places heading and rows and returns the height. Problems stand beside
// their row where there is room, else under it.
func (r *linesRenderer) lay(width float32, move bool) float32 {
	e := r.e
	k := max(typeScaleOf(e), 1)
	caption := sizeOf(e, theme.SizeNameCaptionText)
	n := float32(len(e.columns))
	cell := 96 * k
	for _, c := range e.columns {
		cell = max(cell, fyne.MeasureText(headText(c), caption, fyne.TextStyle{}).Width+Step)
	}
	cell = min(cell, (width-(n-1)*Step/2)/n)
	beside := width - n*(cell+Step/2) - Step/2
	head := lineHeight(caption, fyne.TextStyle{})
	if move {
		for j, h := range r.heads {
			h.TextSize, h.Color = caption, paletteOf(e).Muted
			h.Text = ellipsis(headText(e.columns[j]), cell, caption, fyne.TextStyle{})
			h.Move(fyne.NewPos(float32(j)*(cell+Step/2), 0))
			h.Resize(fyne.NewSize(cell, head))
		}
	}
	y := head + 2
	for _, row := range e.rows {
		height := row.cells[0].MinSize().Height
		if move {
			for j, c := range row.cells {
				c.Move(fyne.NewPos(float32(j)*(cell+Step/2), y))
				c.Resize(fyne.NewSize(cell, height))
			}
		}
		t := row.trouble
		switch {
		case t.text == "":
			if move {
				t.Hide()
			}
		case beside >= 120*k:
			need := t.heightFor(beside)
			if move {
				t.Show()
				t.Move(fyne.NewPos(width-beside, y+max(height-need, 0)/2))
				t.Resize(fyne.NewSize(beside, need))
			}
			height = max(height, need)
		default:
			need := t.heightFor(width)
			if move {
				t.Show()
				t.Move(fyne.NewPos(0, y+height))
				t.Resize(fyne.NewSize(width, need))
			}
			height += need
		}
		y += height + Step/2
	}
	return y
}

func headText(c Column) string {
	if c.Unit != "" {
		return c.Label + ", " + c.Unit
	}
	return c.Label
}

func (r *linesRenderer) Layout(size fyne.Size) { r.lay(size.Width, true) }

func (r *linesRenderer) MinSize() fyne.Size {
	width := r.e.Size().Width
	if width == 0 {
		width = 40 * Step
	}
	return fyne.NewSize(float32(len(r.e.columns))*7*Step, r.lay(width, false))
}

func (r *linesRenderer) Refresh() {
	r.lay(r.e.Size().Width, true)
	for _, h := range r.heads {
		h.Refresh()
	}
	for _, row := range r.e.rows {
		row.trouble.Refresh()
	}
}

func (r *linesRenderer) Objects() []fyne.CanvasObject {
	var objects []fyne.CanvasObject
	for _, h := range r.heads {
		objects = append(objects, h)
	}
	for _, row := range r.e.rows {
		for _, c := range row.cells {
			objects = append(objects, c)
		}
		objects = append(objects, row.trouble)
	}
	return objects
}

func (r *linesRenderer) Destroy() {}

// A linesCell is one cell.
type linesCell struct {
	widget.Entry
	editor *LinesEditor
	at     [2]int // row, column
}

func newLinesCell(e *LinesEditor) *linesCell {
	c := &linesCell{editor: e}
	c.Wrapping = fyne.TextWrapOff
	c.ExtendBaseWidget(c)
	c.OnChanged = func(string) { e.typed(c) }
	return c
}

// TypedShortcut implements fyne.Shortcutable: a paste of more than one cell is
// spread over the grid.
func (c *linesCell) TypedShortcut(s fyne.Shortcut) {
	if paste, ok := s.(*fyne.ShortcutPaste); ok && paste.Clipboard != nil {
		if text := paste.Clipboard.Content(); strings.ContainsAny(strings.TrimSpace(text), "\n\r\t;") {
			c.editor.PasteAt(c.at[0], c.at[1], text)
			return
		}
	}
	c.Entry.TypedShortcut(s)
}

// TypedKey implements fyne.Focusable: up, down and return walk the rows.
func (c *linesCell) TypedKey(k *fyne.KeyEvent) {
	switch k.Name {
	case fyne.KeyUp:
		c.editor.focus(c.at[0]-1, c.at[1])
	case fyne.KeyDown:
		c.editor.focus(c.at[0]+1, c.at[1])
	case fyne.KeyReturn, fyne.KeyEnter:
		c.editor.focus(c.at[0]+1, 0)
	case fyne.KeyEscape:
		if c.editor.onEscape != nil {
			c.editor.onEscape()
		}
	default:
		c.Entry.TypedKey(k)
	}
}

// FocusGained implements fyne.Focusable.
func (c *linesCell) FocusGained() {
	c.Entry.FocusGained()
	if c.editor.OnFocus != nil {
		c.editor.OnFocus()
	}
}

// FocusLost implements fyne.Focusable.
func (c *linesCell) FocusLost() {
	c.Entry.FocusLost()
	c.editor.tidy()
}
