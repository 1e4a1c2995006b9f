package widgets

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
	"gonum.org/v1/plot/vg/draw"
)

// A Measure is what a card shows of a mitigation measure.
type Measure struct {
	ID       string // handed back by callbacks
	Name     string
	Kind     string // such as "single-tuned filter"
	Place    string // where it stands
	Facts    string // such as "C 412 uF, L 0.63 mH"
	Cost     string
	Worth    string // what it buys
	Conflict string // why it cannot be on now; empty when it can
	On       bool

	// Mark draws the measure's geometric mark into a square, the same as in the
	// figures, with the theme's ink set; nil for none.
	Mark func(c draw.Canvas)
}

// A MeasureCard shows a measure with its switch.
type MeasureCard struct {
	widget.BaseWidget

	OnChanged func(on bool)
	OnEdit    func()
	OnTapped  func() // the card itself, apart from switch and button
	OnHover   func(inside bool)

	measure Measure
	compact bool // name, switch, one line and the button only

	mark                                    *drawing
	sw                                      *Switch
	edit                                    *quietButton
	name, kind, facts, worth, cost, trouble *paragraph
}

// CardWidth is the width of a card at type scale 1.
const CardWidth float32 = 288

// NewMeasureCard returns a card.
func NewMeasureCard(m Measure) *MeasureCard {
	c := &MeasureCard{
		name:    newParagraph(theme.SizeNameText, theme.ColorNameForeground),
		kind:    newParagraph(theme.SizeNameCaptionText, theme.ColorNamePlaceHolder),
		facts:   newParagraph(theme.SizeNameCaptionText, theme.ColorNameForeground),
		worth:   newParagraph(theme.SizeNameCaptionText, theme.ColorNameForeground),
		cost:    newParagraph(theme.SizeNameCaptionText, theme.ColorNamePlaceHolder),
		trouble: newParagraph(theme.SizeNameCaptionText, theme.ColorNameError),
	}
	c.name.style.Bold = true
	c.name.most, c.kind.most, c.facts.most, c.cost.most, c.worth.most, c.trouble.most = 1, 1, 1, 1, 2, 2
	c.mark = newDrawing(fyne.NewSquareSize(20), func(cv draw.Canvas) {
		if c.measure.Mark != nil {
			cv.SetColor(paletteOf(c).Ink)
			cv.SetLineWidth(Points(1.5))
			c.measure.Mark(cv)
		}
	})
	c.sw = NewSwitch(false, func(on bool) {
		c.measure.On = on
		c.Refresh()
		if c.OnChanged != nil {
			c.OnChanged(on)
		}
	})
	c.edit = newQuietButton("Edit", func() {
		if c.OnEdit != nil {
			c.OnEdit()
		}
	})
	c.edit.framed = true
	c.ExtendBaseWidget(c)
	c.take(m)
	return c
}

// Measure returns what the card shows.
func (c *MeasureCard) Measure() Measure { return c.measure }

// Switch returns the card's switch, for its place on the screen.
func (c *MeasureCard) Switch() *Switch { return c.sw }

// SetMeasure changes what the card shows, without telling OnChanged.
func (c *MeasureCard) SetMeasure(m Measure) {
	c.take(m)
	c.Refresh()
}

func (c *MeasureCard) take(m Measure) {
	c.measure = m
	c.name.set(m.Name)
	kind := m.Kind
	if m.Place != "" {
		if kind != "" {
			kind += ", "
		}
		kind += m.Place
	}
	c.kind.set(kind)
	c.facts.set(m.Facts)
	c.worth.set(m.Worth)
	c.cost.set(m.Cost)
	c.trouble.set(m.Conflict)
	c.sw.SetOn(m.On)
}

// Tapped implements fyne.Tappable.
func (c *MeasureCard) Tapped(*fyne.PointEvent) {
	if c.OnTapped != nil {
		c.OnTapped()
	}
}

// MouseIn implements desktop.Hoverable.
func (c *MeasureCard) MouseIn(*desktop.MouseEvent) {
	if c.OnHover != nil {
		c.OnHover(true)
	}
}

// MouseMoved implements desktop.Hoverable.
func (c *MeasureCard) MouseMoved(*desktop.MouseEvent) {}

// MouseOut implements desktop.Hoverable.
func (c *MeasureCard) MouseOut() {
	if c.OnHover != nil {
		c.OnHover(false)
	}
}

// CreateRenderer implements fyne.Widget.
func (c *MeasureCard) CreateRenderer() fyne.WidgetRenderer {
	c.ExtendBaseWidget(c)
	r := &measureCardRenderer{c: c, back: canvas.NewRectangle(color.Transparent)}
	r.Refresh()
	return r
}

type measureCardRenderer struct {
	c    *MeasureCard
	back *canvas.Rectangle
}

func (r *measureCardRenderer) MinSize() fyne.Size { return cardSize(r.c, r.c.compact) }

// cardSize is the size of every card as shown beside a widget: name and switch;
// kind, facts, two lines of worth or trouble; foot. A compact card has name and
// switch, and a foot with one of the lines.
func cardSize(w fyne.CanvasObject, compact bool) fyne.Size {
	k := max(typeScaleOf(w), 1)
	foot := lineHeight(sizeOf(w, theme.SizeNameText), fyne.TextStyle{}) + Step
	height := Step/2 + switchHeight*k + foot + Step
	if !compact {
		height += Step + 4*lineHeight(sizeOf(w, theme.SizeNameCaptionText), fyne.TextStyle{})
	}
	return fyne.NewSize(CardWidth*k, height)
}

func (r *measureCardRenderer) Layout(size fyne.Size) {
	c := r.c
	r.back.Resize(size)
	const pad = Step * 1.5
	inner := size.Width - 2*pad
	caption := lineHeight(sizeOf(c, theme.SizeNameCaptionText), fyne.TextStyle{})

	top := Step
	if c.compact {
		top = Step / 2
	}
	sw := c.sw.MinSize()
	c.sw.Resize(sw)
	c.sw.Move(fyne.NewPos(size.Width-Step-sw.Width, top))
	side := fyne.Size{}
	x := float32(pad)
	if c.measure.Mark != nil {
		side = c.mark.MinSize()
		c.mark.Show()
		x += side.Width + Step
	} else {
		c.mark.Hide()
	}
	c.mark.Resize(side)
	c.mark.Move(fyne.NewPos(pad, top+(sw.Height-side.Height)/2))
	name := lineHeight(sizeOf(c, theme.SizeNameText), fyne.TextStyle{Bold: true})
	c.name.Move(fyne.NewPos(x, top+(sw.Height-name)/2))
	c.name.Resize(fyne.NewSize(size.Width-Step-sw.Width-Step/2-x, name))

	// The foot: the button, and to its left the cost, or on a compact card what
	// matters most.
	edit := c.edit.MinSize()
	edit.Height = max(edit.Height-Step, Target)
	foot := size.Height - Step - edit.Height
	if c.compact {
		foot = size.Height - Step/2 - edit.Height
	}
	c.edit.Resize(edit)
	c.edit.Move(fyne.NewPos(size.Width-Step-edit.Width, foot))
	room := inner - edit.Width
	if c.OnEdit == nil {
		room = inner
	}

	y := top + sw.Height
	row := func(p *paragraph, lines int) {
		p.most = lines
		p.Move(fyne.NewPos(pad, y))
		p.Resize(fyne.NewSize(inner, float32(lines)*caption))
		y += float32(lines) * caption
	}
	last := c.worth
	if c.measure.Conflict != "" {
		last = c.trouble
	}
	show(c.worth, last == c.worth)
	show(c.trouble, last == c.trouble)
	for _, p := range []*paragraph{c.kind, c.facts, c.cost} {
		show(p, !c.compact)
	}
	under := c.cost
	if c.compact {
		if last.text == "" {
			last.Hide()
			last = c.kind
		}
		last.Show()
		under = last
		under.most = 1
	} else {
		row(c.kind, 1)
		row(c.facts, 1)
		row(last, 2)
	}
	under.Move(fyne.NewPos(pad, foot+(edit.Height-caption)/2))
	under.Resize(fyne.NewSize(max(room-Step/2, 0), caption))
}

func (r *measureCardRenderer) Refresh() {
	c := r.c
	p := paletteOf(c)
	r.back.FillColor, r.back.StrokeColor, r.back.CornerRadius = p.Surface, p.Grid, 2
	r.back.StrokeWidth = 1
	if c.measure.On { // a firm edge besides the switch
		r.back.StrokeColor, r.back.StrokeWidth = p.After, 2
	}
	if c.OnEdit == nil {
		c.edit.Hide()
	} else {
		c.edit.Show()
	}
	r.Layout(c.Size())
	r.back.Refresh()
	for _, o := range r.Objects()[1:] {
		o.Refresh()
	}
}

func (r *measureCardRenderer) Objects() []fyne.CanvasObject {
	c := r.c
	return []fyne.CanvasObject{r.back, c.mark, c.name, c.sw, c.kind, c.facts, c.worth, c.trouble, c.cost, c.edit}
}

func (r *measureCardRenderer) Destroy() {}
