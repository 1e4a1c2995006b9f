// Package testdata holds studies whose sites and numbers are invented.
package testdata

import _ "embed"

// Demo is the demonstration study file.
//
//go:embed demo.study.json
var Demo []byte

// Thirty is a study of 30 buses for benchmarks.
//
//go:embed thirty.study.json
var Thirty []byte
