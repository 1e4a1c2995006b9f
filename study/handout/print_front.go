package handout

import (
	"image/color"
	"math"
	"strings"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
)

// front writes the title block, the verdicts and the single-line.
func (p *printer) front() {
	t := p.study.Title
	p.y += 10
	p.y -= sizeSmall * leading
	p.text(p.muted, marginLeft, p.y, "Harmonic study: summary")
	title := style{bold, sizeTitle, p.palette.Ink}
	for _, l := range first(4, p.wrap(p.width(), []span{{title, t.Study}})) {
		p.y -= sizeTitle * 1.2
		p.set(l, marginLeft, p.y)
	}
	p.y -= 9
	p.titleBlock()
	if t.Invented {
		p.banner("Invented data.", " The site, its equipment and every number of this study were made up for demonstration.")
	}
	p.verdicts()
	p.choice()
	if strings.TrimSpace(t.Remarks) != "" {
		p.subsection("Remarks", 20)
		p.paragraph(span{p.body, t.Remarks})
	}
	p.skip(4)
	p.note("Prepared as an aid for a licensed engineer, who checks and signs it. Local codes and the network operator's rules come first. Cautions stand at the end.")
	p.singleLine()
}

// titleBlock writes who, where and when in two columns of pairs.
func (p *printer) titleBlock() {
	t := p.study.Title
	pairs := [][2]string{
		{"Client", t.Client}, {"Site", t.Site}, {"Author", t.Author}, {"Revision", t.Revision}, {"Date", t.Date},
		{"System", short(p.study.FrequencyHz) + " Hz, orders to " + short(float64(p.study.Order()))},
		{"Study file", "sha256 " + shortDigest(p.doc.Study.SHA256)},
	}
	kept := pairs[:0]
	for _, pair := range pairs {
		if pair[1] != "" {
			kept = append(kept, pair)
		}
	}
	const labelWidth = vg.Length(52)
	half := p.width() / 2
	p.rule(marginLeft, marginLeft+p.width(), p.y, 0.7, p.palette.Ink)
	p.y -= 5
	for i := 0; i < len(kept); i += 2 {
		var deepest vg.Length
		for k := i; k < min(i+2, len(kept)); k++ {
			x, y := marginLeft+half*vg.Length(k-i), p.y
			p.text(p.muted, x, y-sizeBody, kept[k][0])
			for _, l := range first(3, p.wrap(half-labelWidth-10, []span{{p.body, kept[k][1]}})) {
				p.set(l, x+labelWidth, y-sizeBody)
				y -= l.height
			}
			deepest = max(deepest, p.y-y)
		}
		p.y -= deepest + 1.5
	}
	p.y -= 4
	p.rule(marginLeft, marginLeft+p.width(), p.y, 0.7, p.palette.Ink)
}

// first returns the first n lines: a title block is no place for an essay.
func first(n int, lines []line) []line { return lines[:min(n, len(lines))] }

// banner writes a notice on a tinted ground.
func (p *printer) banner(head, text string) {
	lines := p.wrap(p.width()-20, []span{{p.body.bold(), head}, {p.body, text}})
	h := p.body.line()*vg.Length(len(lines)) + 10
	p.y -= 8
	p.box(marginLeft, p.y-h, marginLeft+p.width(), p.y, p.palette.Surface)
	p.box(marginLeft, p.y-h, marginLeft+3, p.y, p.palette.Over)
	p.y -= 5
	for _, l := range lines {
		p.y -= l.height
		p.set(l, marginLeft+12, p.y+l.height*0.27)
	}
	p.y -= 5
}

// verdicts writes one sentence for each assessment point, its state as a
// shape and a word before it.
func (p *printer) verdicts() {
	p.section("Verdict", 40)
	const indent = vg.Length(84)
	for _, v := range p.sentences {
		spans := []span{{p.body, v.Text}}
		if v.Before != "" {
			spans = append(spans, span{p.body.in(p.palette.Muted), "\n" + v.Before})
		}
		lines := p.wrap(p.width()-indent, spans)
		p.need(p.body.line() * vg.Length(min(len(lines), 3)))
		first := p.y - p.body.line()*0.73
		p.mark(v.State, marginLeft+5, first+3.2)
		p.text(p.body.bold().in(p.stateInk(v.State)), marginLeft+15, first, stateWord(v.State))
		for _, l := range lines {
			p.need(l.height)
			p.y -= l.height
			p.set(l, marginLeft+indent, p.y+l.height*0.27)
		}
		p.y -= 4
	}
}

func stateWord(s study.State) string {
	switch s {
	case study.Meets:
		return "Meets"
	case study.Fails:
		return "Over"
	case study.Partly:
		return "Partly"
	}
	return "Not assessed"
}

func (p *printer) stateInk(s study.State) color.NRGBA {
	switch s {
	case study.Meets:
		return p.palette.After
	case study.Fails:
		return p.palette.Over
	}
	return p.palette.Ink
}

// mark draws the shape of a state around (x, y): a filled disc with a tick, a
// triangle standing on its base, a half or an empty ring.
func (p *printer) mark(s study.State, x, y vg.Length) {
	const r = vg.Length(4.6)
	at := func(dx, dy vg.Length) vg.Point { return vg.Point{X: x + dx, Y: y + dy} }
	ring := vg.Path{}
	ring.Move(at(r, 0))
	ring.Arc(at(0, 0), r, 0, 2*math.Pi)
	ring.Close()
	p.SetColor(p.stateInk(s))
	switch s {
	case study.Meets:
		p.Fill(ring)
		p.SetColor(color.White)
		p.SetLineWidth(1.3)
		p.Stroke(vg.Path{{Type: vg.MoveComp, Pos: at(-2.2, 0)}, {Type: vg.LineComp, Pos: at(-0.6, -1.9)}, {Type: vg.LineComp, Pos: at(2.4, 1.9)}})
	case study.Fails:
		var tri vg.Path
		tri.Move(at(-r, -r*0.8))
		tri.Line(at(r, -r*0.8))
		tri.Line(at(0, r))
		tri.Close()
		p.Fill(tri)
		p.SetColor(color.White)
		p.SetLineWidth(1.2)
		p.Stroke(vg.Path{{Type: vg.MoveComp, Pos: at(0, 2)}, {Type: vg.LineComp, Pos: at(0, -1)}})
		p.Stroke(vg.Path{{Type: vg.MoveComp, Pos: at(0, -1.9)}, {Type: vg.LineComp, Pos: at(0, -2.9)}})
	default:
		p.SetLineWidth(1)
		p.Stroke(ring)
		if s == study.Partly {
			var half vg.Path
			half.Move(at(0, r))
			half.Arc(at(0, 0), r, math.Pi/2, math.Pi)
			half.Close()
			p.Fill(half)
		}
	}
}

// choice says which measures are on, what they cost, and the study's warnings.
func (p *printer) choice() {
	p.skip(3)
	if len(p.after.On) == 0 {
		p.paragraph(span{p.body, "No measure is on: the values are those of the installation as described."})
	} else {
		text := strings.Join(p.after.On, ", ")
		if cost := p.cost(p.after.On); cost > 0 {
			text += ". Capital cost " + money(cost) + " in the study's own currency"
		}
		p.paragraph(span{p.body.bold(), "Measures on: "}, span{p.body, text + "."})
	}
	warnings := p.after.Warnings
	if len(warnings) > 0 {
		p.subsection("To be noted", 20)
		for _, w := range warnings {
			p.item(p.body, w)
		}
	}
}

// cost sums the capital cost of the named measures.
func (p *printer) cost(names []string) (sum float64) {
	for _, name := range names {
		for i := range p.study.Measures {
			if p.study.Measures[i].Name == name {
				sum += p.study.Measures[i].Cost
			}
		}
	}
	return sum
}
