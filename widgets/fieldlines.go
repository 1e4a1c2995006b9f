package widgets

import "fmt"

// newFieldLines returns a lines editor for a field of a sheet.
func newFieldLines(row *fieldRow) *LinesEditor {
	e := NewLinesEditor(row.field.Columns...)
	e.Check = func(rows [][]string) []string {
		if row.sheet.CheckRows == nil {
			return nil
		}
		return row.sheet.CheckRows(row.field.Key, rows)
	}
	e.OnChanged = func(rows [][]string) { row.used(JoinRows(rows)) }
	e.OnFocus = row.gained
	e.OnSize = row.sheet.relayout
	e.onEscape = row.escape
	return e
}

// setText shows the text form of rows, unless it is what stands there.
func (e *LinesEditor) setText(text string) {
	if JoinRows(e.Rows()) != text {
		e.SetRows(SplitRows(text))
	}
}

// problem sums the problems of the rows up.
func (e *LinesEditor) problem() (problem, remedy string) {
	e.check()
	n := 0
	for i, p := range e.problems {
		if p == "" {
			continue
		}
		n++
		if problem == "" {
			problem = fmt.Sprintf("row %d: %s", i+1, p)
		}
	}
	if n > 1 {
		remedy = fmt.Sprintf("%d rows have a problem", n)
	}
	return problem, remedy
}
