package study

import (
	"errors"
	"fmt"
	"strings"

	"quietbus/study/filter"
	"quietbus/study/grid"
)

// FieldError says what is wrong with one field of one item, and what to do.
type FieldError struct {
	Item    string // name of the item, or its place such as "loads[3]"
	Field   string // key of the field in the study file
	Problem string // what is wrong
	Remedy  string // what to do
}

func (e *FieldError) Error() string {
	text := e.Item
	if e.Field != "" {
		text += ", " + e.Field
	}
	text += ": " + e.Problem
	if e.Remedy != "" {
		text += "; " + e.Remedy
	}
	return text
}

// FieldErrors is every problem found in a study.
type FieldErrors []*FieldError

func (e FieldErrors) Error() string {
	words := make([]string, len(e))
	for i, f := range e {
		words[i] = f.Error()
	}
	return strings.Join(words, "\n")
}

// Unwrap gives errors.As access to each.
func (e FieldErrors) Unwrap() []error {
	list := make([]error, len(e))
	for i, f := range e {
		list[i] = f
	}
	return list
}

// asFieldError turns an error of the network or filter packages about an item
// into a FieldError.
func asFieldError(item string, err error) error {
	var element *grid.ElementError
	if errors.As(err, &element) {
		return &FieldError{Item: element.Element, Field: element.Field, Problem: element.Problem, Remedy: "correct the value"}
	}
	var part *filter.Error
	if errors.As(err, &part) {
		return &FieldError{Item: item, Field: part.Field, Problem: part.Problem, Remedy: "correct the value"}
	}
	return fmt.Errorf("%w", err)
}
