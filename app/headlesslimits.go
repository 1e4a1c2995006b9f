package main

import (
	"fmt"
	"io"

	"quietbus/study"
)

// checkLimits validates a file of limits and says what is in it. What cannot be
// assessed is listed, since it will never count as met.
func checkLimits(path string, stdout io.Writer) error {
	x, err := study.OpenLimitSet(path)
	if err != nil {
		return err
	}
	fmt.Fprintf(stdout, "The limits are valid: %s, %s.\n", x.Name, count(len(x.Rows), "order"))
	if from := x.Source(); from != "" {
		fmt.Fprintf(stdout, "Document: %s\n", from)
	}
	for _, gap := range x.Gaps() {
		fmt.Fprintf(stdout, "Not assessed: %s\n", gap)
	}
	return nil
}
