// Package testdata holds the demonstration study, whose site and numbers are
// invented.
package testdata

import _ "embed"

// Demo is the demonstration study file.
//
//go:embed demo.study.json
var Demo []byte
