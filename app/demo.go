package main

import (
	"bytes"

	"quietbus/study"
	"quietbus/testdata"
)

// demoStudy returns the demonstration that is built into the program.
func demoStudy() (*study.Study, error) { return study.Read(bytes.NewReader(testdata.Demo)) }

// blankStudy returns a study with nothing in it but its frequency.
func blankStudy() *study.Study {
	return &study.Study{Format: study.Format, Title: study.Title{Study: "New study"}, FrequencyHz: 50}
}
