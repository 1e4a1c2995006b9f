// Package handout writes what the client takes home: a printable summary, the
// figures one by one, tables for a spreadsheet, and results for other
// programs. It draws nothing that study/figure does not draw, and computes
// nothing but sums.
package handout

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"time"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
)

// Paper is the size of the sheets.
type Paper int

// The papers.
const (
	A4 Paper = iota
	Letter
)

// Size returns width and height of an upright sheet.
func (p Paper) Size() (w, h vg.Length) {
	if p == Letter {
		return 612, 792
	}
	return 595.28, 841.89
}

// String returns the paper's name.
func (p Paper) String() string {
	if p == Letter {
		return "Letter"
	}
	return "A4"
}

// Input is what a handout is made of.
type Input struct {
	Study  *study.Study   // nil: the one After was computed from
	Before *study.Outcome // without measures; may be nil
	After  *study.Outcome // with the measures that are on; required

	// The same in every operating state, the normal one first, which Before and
	// After are; nil when the verdict is to rest on Before and After alone.
	BeforeStates, AfterStates []*study.Outcome

	File    []byte // the study file as it is on disk, for its digest; nil: as Save would write it
	Version string // of the program, as printed; may be empty
}

// Options are the choices that do not change the content.
type Options struct {
	Paper Paper
	Date  time.Time // date of the document; zero: now
}

func (in *Input) study() *study.Study {
	switch {
	case in.Study != nil:
		return in.Study
	case in.After != nil:
		return in.After.Study
	case in.Before != nil:
		return in.Before.Study
	}
	return nil
}

// Report says what was written.
type Report struct {
	Dir   string   // the folder
	Files []string // in it, with slashes, in the order of its CONTENTS.txt
}

// Write makes the handout of in and puts it into the folder dir, which is made
// when it is not there: handout.pdf, each figure as SVG, PNG and PDF with
// captions, results.json, and tables for a spreadsheet. Everything but the
// date depends on in alone. It returns an error that names the folder or the
// file when one cannot be written; the files that are there stay whole.
func Write(ctx context.Context, dir string, in Input, opt Options) (*Report, error) {
	list, err := files(ctx, in, opt)
	if err != nil {
		return nil, err
	}
	if err := store(dir, list); err != nil {
		return nil, err
	}
	r := &Report{Dir: dir}
	for _, f := range list {
		r.Files = append(r.Files, f.name)
	}
	r.Files = append(r.Files, contentsName)
	return r, nil
}

// verdict returns the sentences over all operating states, against before as
// far as it was computed.
func (in *Input) verdict() []study.Sentence {
	if len(in.AfterStates) == 0 {
		return study.Verdict(in.Before, in.After)
	}
	return study.VerdictOver(in.BeforeStates, in.AfterStates)
}

// printedVerdict leaves before out where nothing is compared with it.
func (in *Input) printedVerdict() []study.Sentence {
	if in.compared() != nil {
		return in.verdict()
	}
	alone := *in
	alone.Before, alone.BeforeStates = nil, nil
	return alone.verdict()
}

// digest returns the sha256 of the study file in hexadecimal.
func (in *Input) digest() (string, error) {
	raw := in.File
	if raw == nil {
		var err error
		if raw, err = in.study().Bytes(); err != nil {
			return "", fmt.Errorf("the study cannot be written as a file: %w", err)
		}
	}
	sum := sha256.Sum256(raw)
	return hex.EncodeToString(sum[:]), nil
}

// files makes every file of the handout.
func files(ctx context.Context, in Input, opt Options) ([]file, error) {
	if in.After == nil {
		return nil, fmt.Errorf("the handout needs an evaluated study")
	}
	if opt.Date.IsZero() {
		opt.Date = time.Now()
	}
	doc, err := NewResults(in)
	if err != nil {
		return nil, err
	}
	set, err := figures(ctx, &in, in.compared())
	if err != nil {
		return nil, err
	}
	pdf, err := printed(ctx, in, doc, set, opt)
	if err != nil {
		return nil, err
	}
	var results bytes.Buffer
	if _, err := doc.WriteTo(&results); err != nil {
		return nil, err
	}
	list := []file{{"handout.pdf", pdf}, {"results.json", results.Bytes()}}
	pictures, err := figureFiles(ctx, set, opt.Date)
	if err != nil {
		return nil, err
	}
	tables, err := tableFiles(doc)
	if err != nil {
		return nil, err
	}
	return append(append(list, tables...), pictures...), nil
}

// compared returns the outcome that After is compared with, nil when there is
// nothing to compare.
func (in *Input) compared() *study.Outcome {
	if in.Before == in.After || len(in.After.On) == 0 {
		return nil
	}
	return in.Before
}

// tableFiles returns the workbook and the same tables as CSV.
func tableFiles(doc *Results) ([]file, error) {
	list := sheets(doc)
	book, err := workbook(list)
	if err != nil {
		return nil, err
	}
	out := []file{{"tables.xlsx", book}}
	for _, s := range list {
		raw, err := s.csv()
		if err != nil {
			return nil, fmt.Errorf("table %s: %w", s.name, err)
		}
		out = append(out, file{"tables/" + s.name + ".csv", raw})
	}
	return out, nil
}
