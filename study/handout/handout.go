// Package handout writes what the client takes home: a printable summary, the
// figures one by one, tables for a spreadsheet, and results for other
// programs. It draws nothing that study/figure does not draw, and computes
// nothing but sums.
package handout

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
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

// digest returns the sha256 of the study file in hexadecimal.
func (in *Input) digest() (string, error) {
	raw := in.File
	if raw == nil {
		var err error
		if raw, err = json.MarshalIndent(in.study(), "", "  "); err != nil {
			return "", fmt.Errorf("the study cannot be written as a file: %w", err)
		}
		raw = append(raw, '\n')
	}
	sum := sha256.Sum256(raw)
	return hex.EncodeToString(sum[:]), nil
}
