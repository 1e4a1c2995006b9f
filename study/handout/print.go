package handout

import (
	"bytes"
	"context"
	"fmt"
	"time"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
)

// printer sets the summary from the outcomes and the results document.
type printer struct {
	*book
	study         *study.Study
	before, after *study.Outcome   // before is nil when there is nothing to compare
	sentences     []study.Sentence // the verdict over all operating states
	doc           *Results
	figures       *figureSet
}

// printed returns the summary as a PDF.
func printed(ctx context.Context, in Input, doc *Results, set *figureSet, opt Options) ([]byte, error) {
	s := in.study()
	p := &printer{
		book:      newBook(newCanvas(s.Title.Study, s.Title.Author, opt.Date), opt.Paper),
		study:     s,
		before:    in.compared(),
		after:     in.After,
		sentences: in.printedVerdict(),
		doc:       doc,
		figures:   set,
	}
	p.open(false)
	for _, part := range []func(){
		p.front, p.againstLimits, p.operatingStates, p.busTable, p.evidence, p.measures, p.assumptions, p.method, p.cautions,
	} {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		part()
	}
	if p.float != nil {
		p.open(false)
	}
	p.finish(s.Title.Study, revision(s), p.footer(opt.Date))
	var b bytes.Buffer
	if _, err := p.WriteTo(&b); err != nil {
		return nil, err
	}
	return b.Bytes(), nil
}

func revision(s *study.Study) string {
	if s.Title.Revision == "" {
		return s.Title.Date
	}
	if s.Title.Date == "" {
		return "revision " + s.Title.Revision
	}
	return "revision " + s.Title.Revision + ", " + s.Title.Date
}

func (p *printer) footer(date time.Time) string {
	program := p.doc.Program.Name
	if p.doc.Program.Version != "" {
		program += " " + p.doc.Program.Version
	}
	text := fmt.Sprintf("study file %s   printed %s by %s", shortDigest(p.doc.Study.SHA256), date.Format("2 January 2006"), program)
	if p.study.Title.Invented {
		text = "invented data   " + text
	}
	return text
}

func shortDigest(hex string) string {
	return hex[:min(12, len(hex))]
}

// stated returns what the columns for the state with measures are called.
func (p *printer) stated() string {
	if p.before == nil {
		return "Value"
	}
	return "After"
}

// note writes muted small text.
func (p *printer) note(text string) {
	p.skip(3)
	p.paragraph(span{p.muted, text})
}

// item writes a paragraph with a dash before it.
func (p *printer) item(s style, text string) {
	const indent = vg.Length(10)
	lines := p.wrap(p.width()-indent, []span{{s, text}})
	for i, l := range lines {
		p.need(l.height)
		p.y -= l.height
		if i == 0 {
			p.text(s, marginLeft, p.y+l.height*0.27, "–")
		}
		p.set(l, marginLeft+indent, p.y+l.height*0.27)
	}
	p.y -= 1.5
}
