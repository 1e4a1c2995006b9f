//go:build !headless

package main

import (
	"strconv"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
	"gonum.org/v1/plot/vg/draw"

	"quietbus/study/figure"
	"quietbus/widgets"
)

// combinationsPage is the combination strip with what it comes to in words and
// the sets that it names. Pointing at a mark shows the whole screen as it would
// be with that set; a click adopts it.
type combinationsPage struct {
	w      *Window
	strip  *panel
	small  *panel // beside the measures, in a wide window
	words  *widget.Label
	least  *widget.Button
	gentle *widget.Button
	body   *fyne.Container
	shown  *Explored
	drawn  *figure.Figure
	asked  uint64 // set that is previewed
	peek   bool
}

func newCombinationsPage(w *Window) *combinationsPage {
	p := &combinationsPage{w: w, words: widget.NewLabel("")}
	p.words.Wrapping = fyne.TextWrapWord
	p.words.SizeName = theme.SizeNameCaptionText
	p.strip, p.small = newPanel(p.draw), newPanel(p.draw)
	for _, s := range []*panel{p.strip, p.small} {
		s.picture.OnHover = p.hovered
		s.picture.OnTapped = p.tapped
		s.picture.OnSecondary = func(_ widgets.Hot, at fyne.Position) { w.figureMenu(p.figure(), at) }
		s.picture.OnFault = func(err error) { fyne.LogError("figure", err) }
	}
	p.small.title.Hide() // the row is low
	p.least = widget.NewButton("Adopt least cost", func() { p.adoptNamed(true) })
	p.gentle = widget.NewButton("Adopt least stress", func() { p.adoptNamed(false) })
	buttons := container.NewHBox(p.least, p.gentle, layout.NewSpacer())
	p.body = container.NewBorder(nil, container.NewVBox(p.words, buttons), nil, nil, p.strip.body)
	p.refreshWords()
	return p
}

// known returns what is known of the sets of the study on screen; nil when that
// is of an older study.
func (p *combinationsPage) known() *Explored {
	if p.shown != nil && p.shown.Study == p.w.project.Base() {
		return p.shown
	}
	return nil
}

// show takes newer knowledge.
func (p *combinationsPage) show(x *Explored) {
	p.shown = x
	p.refresh()
}

// figure draws the strip up from what is known.
func (p *combinationsPage) figure() *figure.Figure {
	x := p.known()
	progress := ""
	switch {
	case len(p.w.project.Study().Measures) == 0:
	case x == nil:
		progress = "Working out every set of measures..."
	case x.Err != nil:
		progress = errorText(x.Err)
	case x.Whole == nil:
		progress = count(len(x.Sets), "set") + " so far"
	}
	return figure.Strip(x.Marks(p.w.project.Study().OnMeasures()), progress)
}

func (p *combinationsPage) draw(c draw.Canvas) []widgets.Hot {
	if p.drawn == nil {
		p.drawn = p.figure()
	}
	return hots(p.drawn.Draw(c, p.w.look.style()))
}

// refresh draws what is in view and returns how long the drawing took.
func (p *combinationsPage) refresh() time.Duration {
	p.drawn = nil
	var took time.Duration
	for _, s := range []*panel{p.strip, p.small} {
		if s.body.Visible() {
			took += s.show("Every set of measures, in every operating state")
		}
	}
	p.refreshWords()
	return took
}

func (p *combinationsPage) refreshWords() {
	x := p.known()
	text := x.Words()
	if len(p.w.project.Study().Measures) == 0 {
		text = "No measures yet. Add one at a bus."
	}
	if text != p.words.Text {
		p.words.SetText(text)
	}
	enable(p.least, x != nil && x.Whole != nil && x.Whole.Cheapest >= 0)
	enable(p.gentle, x != nil && x.Whole != nil && x.Whole.Gentlest >= 0)
}

func enable(b *widget.Button, on bool) {
	if on {
		b.Enable()
	} else {
		b.Disable()
	}
}

// hovered shows the screen as it would be with the set under the pointer.
func (p *combinationsPage) hovered(h widgets.Hot) {
	x := p.known()
	mask, ok := maskOf(h)
	switch {
	case ok && x != nil && x.Explorer != nil:
		if p.peek && p.asked == mask {
			return
		}
		p.peek, p.asked = true, mask
		p.w.eval.Submit(Job{Study: x.Study, On: x.Explorer.Names(mask), ScanBus: p.w.sel.Bus, Asked: time.Now()})
		p.w.status.Say("As it would be with " + x.SetName(mask) + ". Click to adopt.")
	case p.peek:
		p.peek = false
		p.w.status.Say("")
		p.w.ask()
	}
}

func (p *combinationsPage) tapped(h widgets.Hot) {
	if mask, ok := maskOf(h); ok {
		p.adopt(mask)
	}
}

func maskOf(h widgets.Hot) (uint64, bool) {
	if h.Role != "set" {
		return 0, false
	}
	mask, err := strconv.ParseUint(h.ID, 10, 64)
	return mask, err == nil
}

// adopt turns the switches to a set, as one named step.
func (p *combinationsPage) adopt(mask uint64) {
	x := p.known()
	if x == nil || x.Explorer == nil {
		return
	}
	p.peek = false
	p.w.project.Switch("Adopt "+x.SetName(mask), x.Explorer.Names(mask))
	p.w.status.Say("Adopted: " + x.SetName(mask) + ". Undo takes it back.")
	p.w.changed()
}

func (p *combinationsPage) adoptNamed(cheapest bool) {
	x := p.known()
	if x == nil || x.Whole == nil {
		return
	}
	i := x.Whole.Gentlest
	if cheapest {
		i = x.Whole.Cheapest
	}
	if i >= 0 {
		p.adopt(x.Sets[i].Mask)
	}
}

// besideLayout sets cards and, where the row is wide, the small strip beside
// them.
type besideLayout struct{}

// A row this wide has room for both.
const wideRow = 1000

func (besideLayout) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	cards, strip := objects[0], objects[1]
	if size.Width < wideRow {
		strip.Hide()
		cards.Resize(size)
		cards.Move(fyne.NewPos(0, 0))
		return
	}
	w := min(max(size.Width*0.42, 420), 700)
	strip.Show()
	cards.Resize(fyne.NewSize(size.Width-w-theme.Padding(), size.Height))
	cards.Move(fyne.NewPos(0, 0))
	strip.Resize(fyne.NewSize(w, size.Height))
	strip.Move(fyne.NewPos(size.Width-w, 0))
}

func (besideLayout) MinSize(objects []fyne.CanvasObject) fyne.Size { return objects[0].MinSize() }
