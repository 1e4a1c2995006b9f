package widgets

import (
	"fmt"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// A fieldRow is one field of a sheet: label and unit, the control, the origin
// of the value, and under it what is wrong or, with the focus, the help.
type fieldRow struct {
	widget.BaseWidget

	sheet   *Sheet
	field   SheetField
	text    string
	problem string
	remedy  string
	pending bool // the text was typed and does not pass
	active  bool
	setting bool // a control is being set, not used

	label, trouble, help, source *paragraph
	input                        fyne.CanvasObject
	origin                       *quietButton
	note                         *fieldEntry
}

func newFieldRow(s *Sheet, f SheetField) *fieldRow {
	r := &fieldRow{sheet: s,
		label:   newParagraph(theme.SizeNameText, theme.ColorNameForeground),
		trouble: newParagraph(theme.SizeNameCaptionText, theme.ColorNameError),
		help:    newParagraph(theme.SizeNameCaptionText, theme.ColorNamePlaceHolder),
		source:  newParagraph(theme.SizeNameCaptionText, theme.ColorNamePlaceHolder),
	}
	r.trouble.style.Bold = true
	r.origin = newQuietButton("", r.chooseOrigin)
	r.origin.chevron, r.origin.framed, r.origin.left = true, true, true
	r.origin.onFocus, r.origin.onEscape = r.gained, r.escape
	r.note = newFieldEntry(r, func(text string) {
		r.field.Note = text
		if s.OnOrigin != nil {
			s.OnOrigin(r.field.Key, r.field.Origin, text)
		}
	})
	r.field = f
	r.input = r.control()
	r.ExtendBaseWidget(r)
	r.text = f.Text
	r.take(f)
	return r
}

// take shows a field as it is now. A text that was typed and does not pass
// stays.
func (r *fieldRow) take(f SheetField) {
	kept := r.pending && r.text != f.Text
	r.field = f
	if kept {
		r.field.Error, r.field.Remedy = "", ""
	} else {
		r.pending = false
		r.text = f.Text
		r.problem, r.remedy = f.Error, f.Remedy
		r.put()
	}
	label := f.Label
	if f.Unit != "" {
		label += ", " + f.Unit
	}
	r.label.text = label
	help := f.Help
	if f.Typical != "" {
		help = strings.TrimSpace(help + " Typical: " + f.Typical)
		if f.Unit != "" {
			help += " " + f.Unit
		}
		help += "."
	}
	if f.Default != "" {
		help = strings.TrimSpace(help + " Empty means: " + f.Default + ".")
	}
	r.help.text = help
	r.showSource()
	r.Refresh()
}

// control makes the input for the field's kind.
func (r *fieldRow) control() fyne.CanvasObject {
	switch r.field.Kind {
	case FieldChoice, FieldReference:
		return newFieldSelect(r)
	case FieldBool:
		return newFieldSwitch(r)
	case FieldMulti:
		return newFieldSet(r)
	case FieldLines:
		return newFieldLines(r)
	}
	return newFieldEntry(r, r.enterRaw)
}

// put shows the text in the control.
func (r *fieldRow) put() {
	r.setting = true
	defer func() { r.setting = false }()
	switch in := r.input.(type) {
	case *fieldEntry:
		if in.Text != r.text {
			in.SetText(r.text)
		}
		in.SetPlaceHolder(r.field.Default)
	case *fieldSelect:
		in.put()
	case *Switch:
		in.SetOn(r.text == "true")
	case *fieldSet:
		in.put()
	case *LinesEditor:
		in.setText(r.text)
	}
}

// enter sets a text as if it was typed.
func (r *fieldRow) enter(text string) {
	r.text = text
	r.put()
	r.used(text)
}

// enterRaw follows typing into an entry.
func (r *fieldRow) enterRaw(text string) {
	if r.field.Kind == FieldNumber {
		text = PointNumber(withoutUnit(text, r.field.Unit))
	}
	r.used(text)
}

// withoutUnit takes the field's own unit off the end of a number.
func withoutUnit(text, unit string) string {
	t := strings.TrimSpace(text)
	if n := len(t) - len(unit); unit != "" && n > 0 && strings.EqualFold(t[n:], unit) {
		return t[:n]
	}
	return text
}

// used follows the control: it checks and tells.
func (r *fieldRow) used(text string) {
	if r.setting {
		return
	}
	r.text = text
	r.field.Error, r.field.Remedy = "", ""
	r.check()
	r.pending = r.problem != ""
	r.Refresh()
	r.sheet.changed(r)
}

// check finds what is wrong with the text.
func (r *fieldRow) check() {
	r.problem, r.remedy = r.field.Error, r.field.Remedy
	if r.problem != "" {
		return
	}
	r.remedy = ""
	text := strings.TrimSpace(r.text)
	switch {
	case text == "" && r.field.Need && r.field.Kind != FieldBool:
		r.problem, r.remedy = "A value is needed", "fill it in"
		if r.field.Typical != "" {
			r.remedy = "typical is " + r.field.Typical + " " + r.field.Unit
		}
	case text != "" && r.field.Kind == FieldNumber && !isNumber(text):
		r.problem, r.remedy = fmt.Sprintf("%q is not a number", text), "type a number such as 12.5"
	}
	if lines, ok := r.input.(*LinesEditor); ok && r.problem == "" {
		r.problem, r.remedy = lines.problem()
	}
	if r.problem == "" && r.sheet.Check != nil {
		r.problem, r.remedy = r.sheet.Check(r.field.Key, r.text)
	}
}

// trouble returns problem and remedy as sentences.
func sentence(problem, remedy string) string {
	end := func(s string) string {
		s = strings.TrimSpace(s)
		if s == "" || strings.HasSuffix(s, ".") {
			return s
		}
		return s + "."
	}
	first := func(s string) string {
		if s == "" {
			return s
		}
		return strings.ToUpper(s[:1]) + s[1:]
	}
	return strings.TrimSpace(end(first(problem)) + " " + end(first(remedy)))
}

// focusable returns what takes the cursor.
func (r *fieldRow) focusable() fyne.Focusable {
	switch in := r.input.(type) {
	case *LinesEditor:
		return in.rows[0].cells[0]
	case *fieldSet:
		return in.first()
	case fyne.Focusable:
		return in
	}
	return nil
}

func (r *fieldRow) gained() { r.sheet.activate(r) }

// escape leaves the sheet.
func (r *fieldRow) escape() {
	if r.sheet.OnCancel != nil {
		r.sheet.OnCancel()
	}
}

// widestOrigin is the width of the longest origin, so that fields line up.
func (r *fieldRow) widestOrigin() float32 {
	size := sizeOf(r, theme.SizeNameText)
	width := float32(0)
	for _, o := range []string{OriginGiven, OriginMeasured, OriginAssumed, ""} {
		width = max(width, fyne.MeasureText(originWord(o), size, fyne.TextStyle{}).Width)
	}
	return width + 3*Step + 10*typeScaleOf(r)
}

// chooseOrigin opens the choice of origins.
func (r *fieldRow) chooseOrigin() {
	c := fyne.CurrentApp().Driver().CanvasForObject(r)
	if c == nil {
		return
	}
	var items []*fyne.MenuItem
	for _, o := range []string{OriginGiven, OriginMeasured, OriginAssumed, ""} {
		item := fyne.NewMenuItem(originWord(o), func() { r.setOrigin(o) })
		item.Checked = o == r.field.Origin
		items = append(items, item)
	}
	at := fyne.CurrentApp().Driver().AbsolutePositionForObject(r.origin)
	widget.ShowPopUpMenuAtPosition(fyne.NewMenu("", items...), c, at.AddXY(0, r.origin.Size().Height))
}

func (r *fieldRow) setOrigin(origin string) {
	r.field.Origin = origin
	r.showSource()
	if r.sheet.OnOrigin != nil {
		r.sheet.OnOrigin(r.field.Key, origin, r.field.Note)
	}
	r.Refresh()
	r.sheet.relayout()
}

func originWord(origin string) string {
	if origin == "" {
		return "unstated"
	}
	return origin
}

// showSource brings everything that tells the origin up to date; assumed values
// stand in italics.
func (r *fieldRow) showSource() {
	f := r.field
	italic := fyne.TextStyle{Italic: f.Origin == OriginAssumed}
	r.origin.set(originWord(f.Origin), italic)
	r.source.text = ""
	if f.Sourced {
		r.source.text = f.Note
	}
	r.source.style = italic
	r.setting = true
	if r.note.Text != f.Note {
		r.note.SetText(f.Note)
	}
	r.setting = false
	hint := "Which letter, nameplate or record?"
	if f.Origin == OriginAssumed {
		hint = "Why this value?"
	}
	r.note.SetPlaceHolder(hint)
	if e, ok := r.input.(*fieldEntry); ok && e.TextStyle != italic {
		e.TextStyle = italic
		e.Refresh()
	}
}

// CreateRenderer implements fyne.Widget.
func (r *fieldRow) CreateRenderer() fyne.WidgetRenderer {
	r.ExtendBaseWidget(r)
	return &fieldRowRenderer{r}
}

// Resize implements fyne.CanvasObject.
func (r *fieldRow) Resize(s fyne.Size) { r.BaseWidget.Resize(s) }

// MinSize implements fyne.CanvasObject: the height at the present width.
func (r *fieldRow) MinSize() fyne.Size {
	r.ExtendBaseWidget(r)
	width := r.Size().Width
	if width == 0 {
		width = 40 * Step
	}
	return fyne.NewSize(20*Step, r.lay(width, false))
}

// lay places the parts for a width and returns the height they take.
func (r *fieldRow) lay(width float32, move bool) float32 {
	k := max(typeScaleOf(r), 1)
	put := func(o fyne.CanvasObject, x, y, w, h float32) {
		if move {
			o.Move(fyne.NewPos(x, y))
			o.Resize(fyne.NewSize(w, h))
		}
	}
	labelWide := float32(0) // label beside the control where there is room
	if width >= 360*k && r.field.Kind != FieldLines {
		labelWide = min(width*0.38, 200*k)
	}
	originWide := float32(0)
	if r.field.Sourced {
		originWide = r.widestOrigin()
	}
	x, y := float32(0), float32(0)
	controlWide := width
	line := lineHeight(sizeOf(r, theme.SizeNameText), fyne.TextStyle{})
	input := r.input.MinSize().Height
	if r.field.Kind == FieldBool {
		// The switch stands before its label.
		sw := r.input.MinSize()
		room := width - sw.Width - Step
		height := max(sw.Height, r.label.heightFor(room))
		put(r.input, 0, (height-sw.Height)/2, sw.Width, sw.Height)
		put(r.label, sw.Width+Step, (height-r.label.heightFor(room))/2, room, r.label.heightFor(room))
		y = height
	} else {
		if labelWide > 0 {
			room := labelWide - Step
			label := r.label.heightFor(room)
			put(r.label, 0, max((min(input, 36*k)-line)/2, 0), room, label)
			x, controlWide = labelWide, width-labelWide
			y = max(0, label-input)
		} else {
			label := r.label.heightFor(width)
			put(r.label, 0, 0, width, label)
			y = label + Step/2
		}
		wide := controlWide
		if originWide > 0 {
			wide -= originWide + Step/2
			put(r.origin, x+wide+Step/2, y, originWide, min(input, r.origin.MinSize().Height))
		}
		if e, ok := r.input.(*LinesEditor); ok {
			input = e.heightFor(wide)
		}
		put(r.input, x, y, wide, input)
		y += input
	}
	below := y
	under := func(p *paragraph, show bool) {
		if !show || p.text == "" {
			if move {
				p.Hide()
			}
			return
		}
		height := p.heightFor(controlWide)
		if move {
			p.Show()
		}
		put(p, x, y+2, controlWide, height)
		y += 2 + height
	}
	under(r.trouble, r.trouble.text != "")
	under(r.help, r.active)
	noting := r.active && r.field.Sourced && r.field.Origin != ""
	under(r.source, !noting)
	if noting {
		height := r.note.MinSize().Height
		put(r.note, x, y+Step/2, controlWide, height)
		y += Step/2 + height
	}
	if move {
		show(r.note, noting)
		show(r.origin, originWide > 0)
	}
	// One caption line is always there, so a short help moves nothing.
	caption := lineHeight(sizeOf(r, theme.SizeNameCaptionText), fyne.TextStyle{}) + 2
	return max(y, below+caption)
}

func show(o fyne.CanvasObject, yes bool) {
	if yes {
		o.Show()
	} else {
		o.Hide()
	}
}

type fieldRowRenderer struct{ r *fieldRow }

func (n *fieldRowRenderer) Layout(size fyne.Size) { n.r.lay(size.Width, true) }

func (n *fieldRowRenderer) MinSize() fyne.Size { return n.r.MinSize() }

func (n *fieldRowRenderer) Refresh() {
	r := n.r
	r.trouble.text = sentence(r.problem, r.remedy)
	r.lay(r.Size().Width, true)
	for _, o := range n.Objects() {
		if o != r.input {
			o.Refresh()
		}
	}
}

func (n *fieldRowRenderer) Objects() []fyne.CanvasObject {
	r := n.r
	return []fyne.CanvasObject{r.label, r.input, r.origin, r.trouble, r.help, r.source, r.note}
}

func (n *fieldRowRenderer) Destroy() {}
