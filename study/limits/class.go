package limits

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// maxOrder is the highest order that a limit set may speak of.
const maxOrder = 100

// class lays one class out by order, with the words of each rule made once, so
// that an assessment only looks values up.
func (r *reader) class(s *Set, part *section, where string, t *table, totalTo int, bands []band, even []evenRule) class {
	c := class{
		aboveV: 1000 * t.numberOr("aboveKV", 0, 0, 1e4), fromV: 1000 * t.numberOr("fromKV", 0, 0, 1e4), toV: 1000 * t.numberOr("toKV", math.Inf(1), 0, 1e4),
		fromRatio: t.numberOr("fromRatio", 0, 0, 1e9), toRatio: t.numberOr("toRatio", math.Inf(1), 0, 1e9), toRatioIncluded: t.flag("toRatioIncluded"),
		total: t.numberOr("totalPercent", 0, 0, 1000), totalTo: totalTo, totalMark: t.mark(),
	}
	c.fullName = c.words()
	name := s.Title
	if tab := t.text("table"); tab != "" {
		name += " " + tab
	}
	if c.fullName != anyVoltage {
		name += ", " + c.fullName
	}
	of := ", " + part.of.words()
	var limits []float64
	t.into("limits", &limits, "a list of numbers, one for each band")
	rows := t.list("rows")
	switch {
	case len(rows) > 0:
		for i, m := range rows {
			r.row(&c, fmt.Sprintf("%s, row %d", where, i+1), m, name, of)
		}
	case len(limits) > 0 && len(limits) == len(bands):
		c.band(bands, limits, even, name, of)
	case len(limits) > 0:
		r.fail(where, "limits", "give one limit for each band", "has %d values for %d bands", len(limits), len(bands))
	case c.total == 0:
		r.fail(where, "", `add "rows" or "totalPercent"`, "limits nothing")
	}
	for i, v := range limits {
		if !(v > 0 && v <= 1000) {
			r.fail(where, "limits", "give a percentage above 0", "value %d is %g", i+1, v)
		}
	}
	if c.total > 0 {
		c.grow(totalTo)
		c.totalRule = name + ", " + part.index() + of
	}
	if c.aboveV >= c.toV || c.fromV > c.toV {
		r.fail(where, "toKV", "give an upper bound above the lower one", "is not above the lower bound")
	}
	if c.fromRatio >= c.toRatio {
		r.fail(where, "toRatio", "give an upper bound above the lower one", "is not above the lower bound")
	}
	t.done()
	return c
}

// grow makes room for orders up to top.
func (c *class) grow(top int) {
	for len(c.limit) <= top {
		c.limit, c.rule, c.mark = append(c.limit, 0), append(c.rule, ""), append(c.mark, "")
	}
}

// row takes one row of limits by order.
func (r *reader) row(c *class, where string, m map[string]rawMessage, name, of string) {
	t := r.table(where, m)
	from, to := t.orders()
	kind := t.word("kind", "all", "all", "odd", "even", "odd triplen", "odd non-triplen")
	mark := c.totalMark
	if t.has("mark") {
		mark = t.mark()
	}
	at := func(int) float64 { return 0 }
	text := t.text("formula")
	switch {
	case text != "" && t.has("percent"):
		r.fail(where, "formula", "state either percent or formula", "stands beside a percent")
	case text != "":
		f, ok := formula(text)
		if !ok {
			r.fail(where, "formula", "write it as 2.27*(17/h)-0.27", "%q is not of the form a*(n/h)+b", text)
			break
		}
		at = f
	default:
		v := t.number("percent", 0, 1000)
		at = func(int) float64 { return v }
	}
	t.done()
	if from == 0 {
		return
	}
	rule := name + ", " + rowWords(kind, from, to, text) + of
	c.grow(to)
	for h := from; h <= to; h++ {
		if !inKind(kind, h) {
			continue
		}
		if c.limit[h] != 0 {
			r.fail(where, "orders", "state each order once", "repeats order %d", h)
			return
		}
		v := at(h)
		if text != "" && !(v > 0) {
			r.fail(where, "formula", "use a formula that stays above 0, or fewer orders", "gives %.3g %% at order %d", v, h)
			return
		}
		c.limit[h], c.rule[h], c.mark[h] = v, rule, mark
	}
}

func inKind(kind string, h int) bool {
	switch kind {
	case "odd":
		return h%2 == 1
	case "even":
		return h%2 == 0
	case "odd triplen":
		return h%6 == 3
	case "odd non-triplen":
		return h%2 == 1 && h%3 != 0
	}
	return true
}

func rowWords(kind string, from, to int, formula string) string {
	words := map[string]string{"all": "every order", "odd": "odd orders", "even": "even orders", "odd triplen": "odd multiples of 3", "odd non-triplen": "odd orders not multiples of 3"}[kind]
	if formula != "" {
		return fmt.Sprintf("%s %d to %d: %s", words, from, to, formula)
	}
	return words
}

// band lays out limits by band, with the rule for even orders.
func (c *class) band(bands []band, limits []float64, even []evenRule, name, of string) {
	for i, b := range bands {
		c.grow(b.to)
		plain := name + ", " + b.words + of
		for h := b.from; h <= b.to; h++ {
			c.limit[h], c.rule[h], c.mark[h] = limits[i], plain, c.totalMark
			if h%2 == 1 {
				continue
			}
			for _, e := range even {
				if h >= e.from && h <= e.to {
					c.limit[h] *= e.share
					c.rule[h] = fmt.Sprintf("%s, %s, even orders %d to %d at %g %% of it%s", name, b.words, e.from, e.to, 100*e.share, of)
					c.mark[h] = weaker(c.totalMark, e.mark)
				}
			}
		}
	}
}

const anyVoltage = "any voltage"

// words names the class: "above 1 to 69 kV, Isc/IL 20<50".
func (c *class) words() string {
	kv := func(v float64) string { return fmt.Sprintf("%g", v/1000) }
	var parts []string
	switch low, open := max(c.aboveV, c.fromV), math.IsInf(c.toV, 1); {
	case open && low == 0:
	case open:
		parts = append(parts, "above "+kv(low)+" kV")
	case low == 0:
		parts = append(parts, "up to "+kv(c.toV)+" kV")
	case c.fromV > 0:
		parts = append(parts, kv(low)+" to "+kv(c.toV)+" kV")
	default:
		parts = append(parts, "above "+kv(low)+" to "+kv(c.toV)+" kV")
	}
	switch open := math.IsInf(c.toRatio, 1); {
	case open && c.fromRatio == 0:
	case open:
		parts = append(parts, fmt.Sprintf("Isc/IL >%g", c.fromRatio))
	case c.fromRatio == 0:
		parts = append(parts, fmt.Sprintf("Isc/IL <%g", c.toRatio))
	default:
		parts = append(parts, fmt.Sprintf("Isc/IL %g<%g", c.fromRatio, c.toRatio))
	}
	if len(parts) == 0 {
		return anyVoltage
	}
	return strings.Join(slices.Compact(parts), ", ")
}
