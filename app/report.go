package main

import (
	"fmt"
	"os"
	"strings"
	"time"

	"quietbus/study"
)

// A Report is what the window says of itself, for whoever drives it from
// outside: the true-window test, and demonstrations by script. With
// QUIETBUS_STATE=FILE in the environment it is written there after each
// picture. Places are pixels in the window.
type Report struct {
	Title    string            `json:"title"`
	Path     string            `json:"path"`
	Unsaved  bool              `json:"unsaved"`
	Pictures int               `json:"pictures"` // shown so far
	On       []string          `json:"on"`
	Verdict  []string          `json:"verdict"`
	Error    string            `json:"error,omitempty"` // why there is no verdict
	Dialog   string            `json:"dialog,omitempty"`
	Switches map[string][2]int `json:"switches"`
}

// verdictTexts returns the verdict sentences as plain text.
func verdictTexts(before, after *study.Outcome) []string {
	var texts []string
	for _, s := range study.Verdict(before, after) {
		texts = append(texts, strings.TrimSpace(s.Text+" "+s.Before))
	}
	return texts
}

// reporting tells whether anybody wants reports.
func reporting() bool { return os.Getenv("QUIETBUS_STATE") != "" }

// write puts the report where the environment asks for it.
func (r *Report) write() {
	path := os.Getenv("QUIETBUS_STATE")
	if path == "" {
		return
	}
	if err := writeJSON(path, r); err != nil {
		fmt.Fprintln(os.Stderr, "quietbus:", err)
	}
}

// timing prints how long things took when QUIETBUS_TIMING is set.
func timing(what string, parts ...any) {
	if os.Getenv("QUIETBUS_TIMING") == "" {
		return
	}
	var b strings.Builder
	for i := 0; i+1 < len(parts); i += 2 {
		d := parts[i+1].(time.Duration)
		fmt.Fprintf(&b, "  %s %.2f ms", parts[i], float64(d.Microseconds())/1000)
	}
	fmt.Fprintf(os.Stderr, "timing %s:%s\n", what, b.String())
}
