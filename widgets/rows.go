package widgets

import (
	"math"
	"strconv"
	"strings"
	"unicode"
)

// SplitRows takes text from a spreadsheet or a list apart: a row a line, cells
// parted by tabs, else semicolons, else commas that do not stand between
// digits as a decimal comma can, else blanks. Numbers come out with a decimal
// point. Empty lines are dropped, and so is a first line without any digit.
func SplitRows(text string) [][]string {
	text = strings.ReplaceAll(strings.ReplaceAll(text, "\r\n", "\n"), "\r", "\n")
	var rows [][]string
	for _, line := range strings.Split(text, "\n") {
		if strings.TrimSpace(line) == "" {
			continue
		}
		cells := splitCells(line)
		for i, cell := range cells {
			cells[i] = PointNumber(cell)
		}
		rows = append(rows, cells)
	}
	if len(rows) > 0 && !strings.ContainsFunc(strings.Join(rows[0], ""), unicode.IsDigit) {
		rows = rows[1:]
	}
	return rows
}

func splitCells(line string) []string {
	switch {
	case strings.Contains(line, "\t"):
		return strings.Split(strings.TrimRight(line, "\t"), "\t")
	case strings.Contains(line, ";"):
		return strings.Split(line, ";")
	case strings.Contains(line, ", ") || strings.Contains(line, " ,"):
		return strings.Split(strings.ReplaceAll(line, " ,", ", "), ", ")
	}
	if fields := strings.Fields(line); len(fields) > 1 {
		return fields
	}
	// "5,20.1,180" has points for decimals and "5,20,180" more commas than one
	// number can have; a lone comma is a decimal one.
	if strings.Contains(line, ".") || strings.Count(line, ",") > 1 {
		return strings.Split(line, ",")
	}
	return []string{line}
}

// PointNumber returns a number typed with a decimal comma, or with blanks or
// points between thousands, in the form with a decimal point. Text that is not
// a number comes back trimmed and otherwise as it was.
func PointNumber(text string) string {
	t := strings.TrimSpace(text)
	plain := strings.NewReplacer("\u00a0", "", "\u202f", "", " ", "", "\u2212", "-", "\u2013", "-").Replace(t)
	comma, point := strings.LastIndex(plain, ","), strings.LastIndex(plain, ".")
	switch {
	case comma >= 0 && point > comma: // 1,234.5
		plain = strings.ReplaceAll(plain, ",", "")
	case comma >= 0 && point >= 0: // 1.234,5
		plain = strings.ReplaceAll(plain, ".", "")
		plain = strings.Replace(plain, ",", ".", 1)
	case comma >= 0 && strings.Count(plain, ",") == 1:
		plain = strings.Replace(plain, ",", ".", 1)
	}
	if isNumber(plain) {
		return plain
	}
	return t
}

// isNumber tells whether a text is a finite decimal number.
func isNumber(text string) bool {
	if strings.ContainsAny(text, "xXnNpP_") { // hexadecimal, NaN, infinity
		return false
	}
	v, err := strconv.ParseFloat(text, 64)
	return err == nil && !math.IsInf(v, 0)
}

// JoinRows is the text form of rows: cells parted by tabs, a row a line.
func JoinRows(rows [][]string) string {
	lines := make([]string, len(rows))
	for i, row := range rows {
		lines[i] = strings.Join(row, "\t")
	}
	return strings.Join(lines, "\n")
}
