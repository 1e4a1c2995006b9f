package widgets

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/widget"
)

// A MeasureRow is the strip of measure cards; it scrolls sideways. In a low
// window, or with large type, the cards are compact.
type MeasureRow struct {
	widget.BaseWidget

	OnChanged func(id string, on bool)
	OnEdit    func(id string)
	OnTapped  func(id string)
	OnHover   func(id string, inside bool)
	OnAdd     func()

	cards  []*MeasureCard
	empty  *EmptyState
	add    *quietButton
	strip  *fyne.Container
	scroll *container.Scroll
}

// NewMeasureRow returns an empty strip.
func NewMeasureRow() *MeasureRow {
	m := &MeasureRow{}
	added := func() {
		if m.OnAdd != nil {
			m.OnAdd()
		}
	}
	m.empty = NewEmptyState("No measures yet. Add one at a bus.", "Add a measure", added)
	m.add = newQuietButton("Add a measure", added)
	m.add.framed = true
	m.strip = container.New(shelf{gap: Step})
	m.scroll = container.NewHScroll(m.strip)
	m.ExtendBaseWidget(m)
	m.fill()
	return m
}

// SetMeasures shows measures in order. Cards of measures that stay are kept, so
// focus and scrolling stay where they are.
func (m *MeasureRow) SetMeasures(measures []Measure) {
	old := make(map[string]*MeasureCard, len(m.cards))
	for _, c := range m.cards {
		old[c.measure.ID] = c
	}
	same := len(measures) == len(m.cards)
	cards := make([]*MeasureCard, len(measures))
	for i, v := range measures {
		c := old[v.ID]
		if c == nil {
			c = m.card(v)
			same = false
		} else {
			delete(old, v.ID)
			c.SetMeasure(v)
		}
		same = same && i < len(m.cards) && m.cards[i] == c
		cards[i] = c
	}
	m.cards = cards
	if !same {
		m.fill()
		m.Refresh()
	}
}

// Card returns the card of a measure, nil when there is none.
func (m *MeasureRow) Card(id string) *MeasureCard {
	for _, c := range m.cards {
		if c.measure.ID == id {
			return c
		}
	}
	return nil
}

func (m *MeasureRow) card(v Measure) *MeasureCard {
	c := NewMeasureCard(v)
	id := v.ID
	c.OnChanged = func(on bool) {
		if m.OnChanged != nil {
			m.OnChanged(id, on)
		}
	}
	c.OnEdit = func() {
		if m.OnEdit != nil {
			m.OnEdit(id)
		}
	}
	c.OnTapped = func() {
		if m.OnTapped != nil {
			m.OnTapped(id)
		}
	}
	c.sw.onFocus = func() { m.reveal(c) }
	c.edit.onFocus = c.sw.onFocus
	c.OnHover = func(inside bool) {
		if m.OnHover != nil {
			m.OnHover(id, inside)
		}
	}
	return c
}

// reveal scrolls so that a card is in view.
func (m *MeasureRow) reveal(c *MeasureCard) {
	left, right := c.Position().X, c.Position().X+c.Size().Width
	x, view := m.scroll.Offset.X, m.scroll.Size().Width
	if right+Step > x+view {
		x = right + Step - view
	}
	if x = max(min(x, left-Step), 0); x != m.scroll.Offset.X {
		m.scroll.ScrollToOffset(fyne.NewPos(x, 0))
	}
}

func (m *MeasureRow) fill() {
	m.strip.Objects = nil
	for _, c := range m.cards {
		m.strip.Objects = append(m.strip.Objects, c)
	}
	m.strip.Objects = append(m.strip.Objects, m.add)
	if len(m.cards) == 0 {
		m.scroll.Hide()
		m.empty.Show()
	} else {
		m.empty.Hide()
		m.scroll.Show()
	}
	m.strip.Refresh()
	m.scroll.Refresh()
}

// compact tells whether full cards would take too much of the window's height,
// and sets the cards so.
func (m *MeasureRow) compact() bool {
	compact := false
	if c := fyne.CurrentApp().Driver().CanvasForObject(m); c != nil && c.Size().Height > 0 {
		compact = cardSize(m, false).Height > c.Size().Height*0.2
	}
	for _, card := range m.cards {
		card.compact = compact
	}
	return compact
}

// CreateRenderer implements fyne.Widget.
func (m *MeasureRow) CreateRenderer() fyne.WidgetRenderer {
	m.ExtendBaseWidget(m)
	return &measureRowRenderer{m}
}

type measureRowRenderer struct{ m *MeasureRow }

func (r *measureRowRenderer) Layout(size fyne.Size) {
	r.m.compact()
	r.m.scroll.Resize(size)
	r.m.scroll.Refresh()
	r.m.empty.Resize(size)
}

// MinSize is the height of a card in any case, so the first card does not push
// the rest of the window.
func (r *measureRowRenderer) MinSize() fyne.Size {
	return fyne.NewSize(CardWidth/2, max(cardSize(r.m, r.m.compact()).Height, r.m.empty.MinSize().Height)+Step)
}

func (r *measureRowRenderer) Refresh() {
	for _, c := range r.m.cards {
		c.Refresh()
	}
	r.m.empty.Refresh()
	r.m.strip.Refresh()
	r.m.scroll.Refresh()
}

func (r *measureRowRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.m.scroll, r.m.empty}
}

func (r *measureRowRenderer) Destroy() {}

// A shelf lays objects side by side at their least width with a gap at both
// ends, cards at full height,
// others centred.
type shelf struct{ gap float32 }

func (s shelf) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	x := s.gap
	for _, o := range objects {
		m := o.MinSize()
		height, y := m.Height, float32(0)
		if _, card := o.(*MeasureCard); !card {
			y = max(size.Height-height, 0) / 2
		}
		o.Resize(fyne.NewSize(m.Width, height))
		o.Move(fyne.NewPos(x, y))
		x += m.Width + s.gap
	}
}

func (s shelf) MinSize(objects []fyne.CanvasObject) fyne.Size {
	size := fyne.NewSize(s.gap, 0)
	for _, o := range objects {
		m := o.MinSize()
		size.Width += m.Width + s.gap
		size.Height = max(size.Height, m.Height)
	}
	return size
}
