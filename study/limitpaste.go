package study

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"
)

// LimitColumn says what a column of a pasted table of limits holds.
type LimitColumn string

// The columns that a pasted table may have beside its order.
const (
	VoltageColumn        LimitColumn = "voltage"        // per cent
	CurrentPercentColumn LimitColumn = "currentPercent" // per cent of IL
	CurrentAmpereColumn  LimitColumn = "currentA"       // A
	OtherColumn          LimitColumn = "other"          // left out
)

// PasteLimits reads a table of limits as copied from a letter or a spreadsheet:
// an order in the first column, limits in the next; columns separated by tabs,
// semicolons, commas or blanks; decimal point or comma; ranges such as 17-25;
// THD and TDD as rows. A heading line says what the columns are; without one
// they are as given.
//
// Nothing is dropped: a cell that holds words or nothing becomes a row without
// a limit, and a line whose order cannot be read goes to NotReadable with the
// reason, so that the assessment lists both as not assessed. A text without any
// limit is a *FieldError.
func PasteLimits(text string, columns ...LimitColumn) (*LimitSet, error) {
	p := &limitPaste{columns: columns, seen: map[int]bool{}}
	if len(columns) == 0 {
		p.columns = []LimitColumn{VoltageColumn}
	}
	lines := strings.Split(strings.NewReplacer("\r\n", "\n", "\r", "\n", "\u00a0", " ").Replace(text), "\n")
	p.separator = separatorOf(lines)
	first := true
	for _, line := range lines {
		if strings.TrimSpace(line) == "" {
			continue
		}
		cells := p.split(line)
		if heading, ok := headingOf(cells); first && ok {
			p.columns = heading
		} else {
			p.line(line, cells)
		}
		first = false
	}
	set := &p.set
	if len(set.Rows) == 0 && len(set.NotReadable) == 0 && set.THDPercent == 0 && set.TDDPercent == 0 {
		return nil, &FieldError{Item: "pasted table", Field: "rows", Problem: "holds no limit", Remedy: "copy the order and the limit of each row, one row a line"}
	}
	return set, nil
}

type limitPaste struct {
	set       LimitSet
	columns   []LimitColumn
	separator string
	seen      map[int]bool
}

// separatorOf chooses what separates the columns of the whole table: a comma
// only when nothing else does, since it may be a decimal comma.
func separatorOf(lines []string) string {
	all := strings.Join(lines, "\n")
	switch {
	case strings.Contains(all, "\t"):
		return "\t"
	case strings.Contains(all, ";"):
		return ";"
	}
	for _, line := range lines {
		if f := strings.Fields(line); len(f) >= 2 && !strings.HasSuffix(f[0], ",") && firstOrder.MatchString(f[0]) {
			return " "
		}
	}
	return ","
}

var firstOrder = regexp.MustCompile(`^(?i)[h=]*\d+(st|nd|rd|th)?$`)

func (p *limitPaste) split(line string) []string {
	var cells []string
	if p.separator == " " {
		cells = strings.Fields(line)
	} else {
		cells = strings.Split(line, p.separator)
	}
	for i := range cells {
		cells[i] = strings.TrimSpace(cells[i])
	}
	return cells
}

// headingOf reads a heading: its first cell names no order, and at least one
// other cell says what its column is.
func headingOf(cells []string) ([]LimitColumn, bool) {
	if len(cells) < 2 || strings.ContainsAny(cells[0], "0123456789") || totalWord(cells[0]) != "" {
		return nil, false
	}
	var columns []LimitColumn
	known := false
	for _, cell := range cells[1:] {
		c := columnOf(cell)
		known = known || c != OtherColumn
		columns = append(columns, c)
	}
	return columns, known
}

func columnOf(cell string) LimitColumn {
	w := strings.ToLower(cell)
	has := func(words ...string) bool {
		for _, x := range words {
			if strings.Contains(w, x) {
				return true
			}
		}
		return false
	}
	ampere := regexp.MustCompile(`(^|[^a-z])(a|amps?|amperes?)($|[^a-z])`).MatchString(w)
	current := has("current", "il", "i_l") || regexp.MustCompile(`(^|[^a-z])i_?h?($|[^a-z])`).MatchString(w)
	switch {
	case current && ampere && !has("%"), ampere && !has("%", "volt"):
		return CurrentAmpereColumn
	case current:
		return CurrentPercentColumn
	case has("volt") || regexp.MustCompile(`(^|[^a-z])[uv](h|n)?($|[^a-z])`).MatchString(w):
		return VoltageColumn
	case has("limit", "level", "%", "per cent", "percent"):
		return VoltageColumn
	}
	return OtherColumn
}

// line takes one row of the table.
func (p *limitPaste) line(text string, cells []string) {
	refuse := func(reason string, args ...any) {
		p.set.NotReadable = append(p.set.NotReadable, SaidLine{Line: strings.Join(strings.Fields(text), " "), Reason: fmt.Sprintf(reason, args...)})
	}
	if word := totalWord(cells[0]); word != "" {
		p.total(word, cells, refuse)
		return
	}
	from, to, err := ordersOf(cells[0])
	if err != nil {
		refuse("%v", err)
		return
	}
	if p.separator == "," && len(cells) > 1+len(p.columns) {
		refuse("it has more columns than are known; a comma may stand for a decimal point here, so separate the columns by a semicolon or a tab")
		return
	}
	var value [3]*float64
	says := ""
	for i, c := range p.columns {
		k := map[LimitColumn]int{VoltageColumn: 0, CurrentPercentColumn: 1, CurrentAmpereColumn: 2, OtherColumn: 3}[c]
		if k > 2 || i+1 >= len(cells) || blank(cells[i+1]) {
			continue
		}
		v, ok := limitNumber(cells[i+1])
		if !ok || v > [3]float64{100, 1000, 1e6}[k] {
			says = strings.TrimPrefix(says+"; "+cells[i+1], "; ")
			continue
		}
		value[k] = &v
	}
	for h := from; h <= to; h++ {
		if p.seen[h] {
			refuse("order %d stands twice; the first row counts", h)
			continue
		}
		p.seen[h] = true
		row := LimitLine{Order: h, Says: says}
		for k, at := range []**float64{&row.VoltagePercent, &row.CurrentPercent, &row.CurrentA} {
			if value[k] != nil {
				v := *value[k]
				*at = &v
			}
		}
		p.set.Rows = append(p.set.Rows, row)
	}
}

// total takes a row of THD or TDD.
func (p *limitPaste) total(word string, cells []string, refuse func(string, ...any)) {
	took, bad := false, ""
	for i, c := range p.columns {
		if i+1 >= len(cells) || blank(cells[i+1]) || c == OtherColumn {
			continue
		}
		v, ok := limitNumber(cells[i+1])
		switch {
		case !ok:
			bad = fmt.Sprintf("%q is no number", cells[i+1])
		case v > 100:
			bad = fmt.Sprintf("%q is more than 100 %%", cells[i+1])
		case word == "TDD" || c == CurrentPercentColumn:
			p.set.TDDPercent, took = v, true
		case c == CurrentAmpereColumn:
			bad = "a total in amperes is not known here"
		default:
			p.set.THDPercent, took = v, true
		}
	}
	switch {
	case bad != "":
		refuse("%s", bad)
	case !took:
		refuse("no limit of the total stands in it")
	}
}

func totalWord(cell string) string {
	w := strings.ToUpper(strings.TrimSpace(cell))
	switch {
	case strings.HasPrefix(w, "TDD"):
		return "TDD"
	case strings.HasPrefix(w, "THD"), strings.HasPrefix(w, "TOTAL"):
		return "THD"
	}
	return ""
}

var ordersPattern = regexp.MustCompile(`^(?i)(?:order|harmonic|h|n)?\s*=?\s*(\d+)\s*(?:st|nd|rd|th)?(?:\s*(?:-|–|to|\.\.\.?|…)\s*(\d+)\s*(?:st|nd|rd|th)?)?\s*$`)

// ordersOf reads "5", "h=5", "5th", "17-25" or "17 to 25".
func ordersOf(cell string) (from, to int, err error) {
	m := ordersPattern.FindStringSubmatch(strings.TrimSpace(cell))
	if m == nil {
		return 0, 0, fmt.Errorf("%q names no order", cell)
	}
	from, _ = strconv.Atoi(m[1])
	if to = from; m[2] != "" {
		to, _ = strconv.Atoi(m[2])
	}
	if from < 2 || to > 100 || to < from {
		return 0, 0, fmt.Errorf("%q is no order from 2 to 100", cell)
	}
	return from, to, nil
}

// limitNumber reads a limit: a number above zero, with or without a per cent
// sign, a unit or a comparison before it.
func limitNumber(cell string) (float64, bool) {
	w := strings.TrimLeft(strings.TrimSpace(cell), "<≤= ")
	for _, unit := range []string{"%", "A"} {
		w = strings.TrimSpace(strings.TrimSuffix(w, unit))
	}
	v, err := ParseNumber(w)
	return v, err == nil && v > 0
}

// blank reports whether a cell holds nothing, or a dash for nothing.
func blank(cell string) bool { return strings.Trim(cell, "-–— .") == "" }
