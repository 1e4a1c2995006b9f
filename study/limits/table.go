package limits

import (
	"encoding/json"
	"fmt"
	"math"
	"slices"
	"sort"
	"strconv"
	"strings"
)

type rawMessage = json.RawMessage

// table reads the keys of one object of a limit file, remembers which it has
// seen, and reports what is wrong by place and key.
type table struct {
	r     *reader
	where string
	keys  map[string]rawMessage
	seen  map[string]bool
}

func (r *reader) table(where string, keys map[string]rawMessage) *table {
	return &table{r, where, keys, map[string]bool{}}
}

func (t *table) has(key string) bool {
	_, ok := t.keys[key]
	return ok
}

// into decodes a key into v; absent keys leave it alone.
func (t *table) into(key string, v any, want string) {
	t.seen[key] = true
	raw, ok := t.keys[key]
	if !ok {
		return
	}
	if err := json.Unmarshal(raw, v); err != nil {
		t.r.fail(t.where, key, "write "+want, "is %s", shortened(raw))
	}
}

func shortened(raw rawMessage) string {
	s := string(raw)
	if len(s) > 40 {
		s = s[:40] + "..."
	}
	return s
}

func (t *table) text(key string) string {
	var s string
	t.into(key, &s, "text in quotation marks")
	return strings.TrimSpace(s)
}

func (t *table) flag(key string) bool {
	var b bool
	t.into(key, &b, "true or false")
	return b
}

// number returns a number that must be there, above low and at most high.
func (t *table) number(key string, low, high float64) float64 {
	if !t.has(key) {
		t.seen[key] = true
		t.r.fail(t.where, key, "add it", "is missing")
		return 0
	}
	v, ok := t.float(key)
	if ok && !(v > low && v <= high) {
		t.r.fail(t.where, key, fmt.Sprintf("give a value above %g and up to %g", low, high), "is %g", v)
	}
	return v
}

// numberOr returns a number from low to high, or otherwise when it is absent.
func (t *table) numberOr(key string, otherwise, low, high float64) float64 {
	if !t.has(key) {
		t.seen[key] = true
		return otherwise
	}
	v, ok := t.float(key)
	if ok && !(v >= low && v <= high) {
		t.r.fail(t.where, key, fmt.Sprintf("give a value from %g to %g", low, high), "is %g", v)
	}
	return v
}

func (t *table) float(key string) (float64, bool) {
	before := len(t.r.problems)
	v := math.NaN()
	t.into(key, &v, "a number without a unit")
	if math.IsNaN(v) && len(t.r.problems) == before { // null
		t.r.fail(t.where, key, "write a number without a unit", "is empty")
	}
	return v, len(t.r.problems) == before
}

// word returns one of the choices, or otherwise when the key is absent.
func (t *table) word(key, otherwise string, choices ...string) string {
	s := t.text(key)
	if s == "" {
		s = otherwise
	}
	if !slices.Contains(choices, s) {
		t.r.fail(t.where, key, "write "+strings.Join(choices, " or "), "is %q", s)
	}
	return s
}

// mark returns the mark of a block: "given" in a user's file that says none.
func (t *table) mark() Mark {
	otherwise := ""
	if t.r.own {
		otherwise = string(Given)
	}
	t.word("confidence", "high", "high", "medium", "low")
	return Mark(t.word("mark", otherwise, string(Found), string(Memory), string(Derived), string(Given)))
}

// orders reads "5" or "17-49", or the bare number 5. It returns 0, 0 after a
// problem.
func (t *table) orders() (from, to int) {
	const key = "orders"
	t.seen[key] = true
	raw, ok := t.keys[key]
	if !ok {
		t.r.fail(t.where, key, `add it, as "5" or "17-49"`, "is missing")
		return 0, 0
	}
	text := strings.Trim(string(raw), `" `)
	first, last, isRange := strings.Cut(text, "-")
	from, err := strconv.Atoi(strings.TrimSpace(first))
	to = from
	if err == nil && isRange {
		to, err = strconv.Atoi(strings.TrimSpace(last))
	}
	if err != nil {
		t.r.fail(t.where, key, `write one order as "5" or a range as "17-49"`, "is %s", shortened(raw))
		return 0, 0
	}
	if from < 2 || to > maxOrder || to < from {
		t.r.fail(t.where, key, fmt.Sprintf("give orders from 2 to %d, the lower first", maxOrder), "is %s", text)
		return 0, 0
	}
	return from, to
}

// sub returns the object at a key.
func (t *table) sub(key string) (*table, bool) {
	var m map[string]rawMessage
	t.into(key, &m, "an object in braces")
	if m == nil {
		return nil, false
	}
	where := key
	if t.where != "file" {
		where = t.where + ", " + key
	}
	return t.r.table(where, m), true
}

// list returns the objects of the list at a key.
func (t *table) list(key string) []map[string]rawMessage {
	var l []map[string]rawMessage
	t.into(key, &l, "a list of objects")
	return l
}

// done reports every key that nothing has asked for.
func (t *table) done() {
	var unknown []string
	for key := range t.keys {
		if !t.seen[key] {
			unknown = append(unknown, key)
		}
	}
	sort.Strings(unknown)
	for _, key := range unknown {
		t.r.fail(t.where, key, "take it out, or correct its spelling", "is not a key of this part")
	}
}
