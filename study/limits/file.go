package limits

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
)

// maxFile is the largest limit file that is read, bytes.
const maxFile = 1 << 20

// ParseSet reads a user's own limit set, as typed from a utility's letter. It
// is a small JSON document:
//
//	{
//	  "format": 1,
//	  "id": "letter-2026", "title": "Letter of 3 March", "document": "...", "edition": "...", "about": "...",
//	  "voltage": {
//	    "of": "fundamental",              or "nominal"
//	    "classes": [{
//	      "aboveKV": 1, "toKV": 36,       absent: any voltage
//	      "totalPercent": 4,              THD; absent: not limited
//	      "rows": [
//	        {"orders": "5", "percent": 3},
//	        {"orders": "17-49", "kind": "odd non-triplen", "formula": "1.9*(17/h)-0.2"}
//	      ]
//	    }]
//	  },
//	  "current": {
//	    "of": "demand",                   or "fundamental"
//	    "classes": [{"fromRatio": 20, "toRatio": 50, "totalPercent": 8, "rows": [...]}]
//	  }
//	}
//
// Kinds of order are all (the default), odd, even, odd triplen and odd
// non-triplen. A formula is a*(n/h)+b in the order h. Its rows bear the mark
// "given" unless they say another.
//
// Every problem is reported, each a *ParseError that names row and column.
func ParseSet(r io.Reader) (*Set, error) {
	text, err := io.ReadAll(io.LimitReader(r, maxFile+1))
	if err != nil {
		return nil, fmt.Errorf("reading a limit file: %w", err)
	}
	if len(text) > maxFile {
		return nil, &ParseError{Where: "file", Problem: "is larger than 1 MB", Remedy: "a limit set is a small file; check that it is the right one"}
	}
	return parse(text, true)
}

// ParseError is one problem of a limit file.
type ParseError struct {
	Where   string // "voltage, class 1, row 3"
	Column  string // key in that row, empty for the row as a whole
	Problem string
	Remedy  string
}

func (e *ParseError) Error() string {
	where := e.Where
	if e.Column != "" {
		where += ", column " + e.Column
	}
	return "limit file: " + where + ": " + e.Problem + "; " + e.Remedy
}

// reader gathers the problems of one file.
type reader struct {
	own      bool // a user's file
	problems []error
}

func (r *reader) fail(where, column, remedy, problem string, args ...any) {
	r.problems = append(r.problems, &ParseError{where, column, fmt.Sprintf(problem, args...), remedy})
}

func parse(text []byte, own bool) (*Set, error) {
	r := &reader{own: own}
	top, err := object(text)
	if err != nil {
		return nil, err
	}
	t := r.table("file", top)
	s := &Set{ID: t.text("id"), Title: t.text("title"), Document: t.text("document"), Edition: t.text("edition"), About: t.text("about")}
	if v := t.number("format", 0, math.Inf(1)); v != 1 {
		r.fail("file", "format", `write "format": 1`, "is not a format that this program reads")
	}
	r.identify(s)
	if part, ok := t.sub("voltage"); ok {
		s.volts = r.section(s, "voltage", part, ofFundamental, ofNominal)
	}
	if part, ok := t.sub("current"); ok {
		s.amperes = r.section(s, "current", part, ofDemand, ofFundamental)
	}
	if part, ok := t.sub("equipment"); ok {
		s.appliance = r.appliance(s, part)
	}
	if s.volts == nil && s.amperes == nil && s.appliance == nil {
		r.fail("file", "", `add a "voltage" or a "current" part`, "limits nothing")
	}
	for i, p := range t.list("percentiles") {
		s.Percentiles = append(s.Percentiles, r.percentile(fmt.Sprintf("percentiles, row %d", i+1), p))
	}
	for i, n := range t.list("notches") {
		s.Notches = append(s.Notches, r.notch(fmt.Sprintf("notches, row %d", i+1), n))
	}
	t.done()
	if len(r.problems) > 0 {
		return nil, errors.Join(r.problems...)
	}
	return s, nil
}

// object decodes text as one JSON object and nothing after it.
func object(text []byte) (map[string]rawMessage, error) {
	var top map[string]rawMessage
	err := json.Unmarshal(text, &top)
	var syntax *json.SyntaxError
	switch {
	case errors.As(err, &syntax):
		before := string(text[:min(int(syntax.Offset), len(text))])
		line := strings.Count(before, "\n") + 1
		return nil, &ParseError{Where: fmt.Sprintf("line %d", line), Problem: "is not JSON: " + syntax.Error(), Remedy: "correct the file there, or write it again"}
	case err != nil || top == nil:
		return nil, &ParseError{Where: "file", Problem: "is not a JSON object", Remedy: "begin it with { and the keys format, id and title"}
	}
	return top, nil
}

var idPattern = regexp.MustCompile(`^[a-z0-9][a-z0-9.-]*$`)

func (r *reader) identify(s *Set) {
	if !idPattern.MatchString(s.ID) {
		r.fail("file", "id", "write a short word of small letters, digits, points and hyphens", "%q is no identifier", s.ID)
	}
	if s.Title == "" {
		r.fail("file", "title", "say in a few words where the limits come from", "is empty")
	}
	if r.own && slices.Contains(published, s.ID) {
		r.fail("file", "id", "choose another word", "%q is the identifier of a published set", s.ID)
	}
}

func (r *reader) section(s *Set, quantity string, t *table, otherwise, other base) *section {
	part := &section{of: base(t.word("of", string(otherwise), string(otherwise), string(other)))}
	totalTo := int(t.numberOr("totalToOrder", 50, 2, maxOrder))
	bands := r.bands(quantity, t.list("bands"))
	even := r.even(quantity, t.list("evenOrders"))
	if d, ok := t.sub("direct"); ok {
		part.direct = &directRule{d.text("rule"), d.mark()}
		d.done()
	}
	for i, a := range t.list("lowOrder") {
		part.lowOrder = append(part.lowOrder, r.allowance(fmt.Sprintf("%s, lowOrder row %d", quantity, i+1), a))
	}
	for i, c := range t.list("classes") {
		where := fmt.Sprintf("%s, class %d", quantity, i+1)
		part.classes = append(part.classes, r.class(s, part, where, r.table(where, c), totalTo, bands, even))
	}
	if len(part.classes) == 0 {
		r.fail(quantity, "classes", "add one class with rows", "is empty")
	}
	t.done()
	return part
}

// band is a run of orders that share one limit of a class.
type band struct {
	from, to int
	words    string
}

func (r *reader) bands(quantity string, list []map[string]rawMessage) []band {
	var out []band
	for i, m := range list {
		t := r.table(fmt.Sprintf("%s, bands row %d", quantity, i+1), m)
		from, to := t.orders()
		out = append(out, band{from, to, t.text("words")})
		t.done()
	}
	return out
}

// evenRule gives even orders a share of their band's limit.
type evenRule struct {
	from, to int
	share    float64
	mark     Mark
}

func (r *reader) even(quantity string, list []map[string]rawMessage) []evenRule {
	var out []evenRule
	for i, m := range list {
		t := r.table(fmt.Sprintf("%s, evenOrders row %d", quantity, i+1), m)
		from, to := t.orders()
		out = append(out, evenRule{from, to, t.number("percent", 0, 1000) / 100, t.mark()})
		t.done()
	}
	return out
}

func (r *reader) allowance(where string, m map[string]rawMessage) allowance {
	t := r.table(where, m)
	a := allowance{share: t.number("percent", 0, 100) / 100, multiplier: t.number("multiplier", 0, 100), rule: t.text("rule"), mark: t.mark()}
	t.into("orders", &a.orders, "a list of orders such as [5, 7]")
	t.done()
	return a
}

func (r *reader) percentile(where string, m map[string]rawMessage) Percentile {
	t := r.table(where, m)
	p := Percentile{Quantity: t.word("quantity", "", "voltage", "current"), Statistic: t.text("statistic"), Multiplier: t.number("multiplier", 0, 100), Rule: t.text("rule"), Mark: t.mark()}
	t.done()
	return p
}

func (r *reader) notch(where string, m map[string]rawMessage) Notch {
	t := r.table(where, m)
	n := Notch{System: t.text("system"), DepthPercent: t.number("depthPercent", 0, 100), AreaVus: t.number("areaVus", 0, 1e9), AtV: t.number("atV", 0, 1e6), Rule: t.text("rule"), Mark: t.mark()}
	t.done()
	return n
}

// formulaPattern is a*(n/h)+b.
var formulaPattern = regexp.MustCompile(`^([0-9.]+)\*\(([0-9.]+)/h\)([+-][0-9.]+)?$`)

// formula returns the value of a*(n/h)+b as a function of h.
func formula(text string) (func(h int) float64, bool) {
	m := formulaPattern.FindStringSubmatch(strings.ReplaceAll(text, " ", ""))
	if m == nil {
		return nil, false
	}
	var v [3]float64
	for i, word := range m[1:] {
		if word == "" {
			continue
		}
		f, err := strconv.ParseFloat(word, 64)
		if err != nil {
			return nil, false
		}
		v[i] = f
	}
	return func(h int) float64 { return v[0]*(v[1]/float64(h)) + v[2] }, true
}
