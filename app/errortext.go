package main

import (
	"errors"
	"strings"

	"quietbus/study"
)

// maxErrors is how many mistakes a dialog lists before it counts the rest.
const maxErrors = 12

// errorText words an error for a dialog, each of several on its own line.
func errorText(err error) string {
	var several study.FieldErrors
	if !errors.As(err, &several) {
		return err.Error()
	}
	var lines []string
	for i, e := range several {
		if i == maxErrors {
			lines = append(lines, "and "+count(len(several)-maxErrors, "more mistake"))
			break
		}
		lines = append(lines, e.Error())
	}
	return strings.Join(lines, "\n\n")
}
