package limits

import (
	"fmt"
	"math"
)

// appliance reads the equipment part of a limit file.
func (r *reader) appliance(s *Set, t *table) *appliance {
	a := &appliance{of: t.word("of", "ampere", "ampere", "fundamental", "watt", "reference"), factor: t.numberOr("factor", 1, 0, 1000),
		balanced: t.flag("balanced"), condition: t.text("condition"), toA: math.Inf(1), lineV: [2]float64{0, math.Inf(1)}}
	if scope, ok := t.sub("scope"); ok {
		a.aboveA, a.toA = scope.numberOr("aboveA", 0, 0, 1e6), scope.numberOr("toA", math.Inf(1), 0, 1e6)
		a.lineV = [2]float64{scope.numberOr("fromV", 0, 0, 1e6), scope.numberOr("toV", math.Inf(1), 0, 1e6)}
		a.phaseV = [2]float64{scope.numberOr("phaseFromV", 0, 0, 1e6), scope.numberOr("phaseToV", 0, 0, 1e6)}
		scope.mark()
		scope.done()
	}
	a.currentFor = fmt.Sprintf("up to %g A", a.toA)
	if a.aboveA > 0 {
		a.currentFor = fmt.Sprintf("above %g to %g A", a.aboveA, a.toA)
	}
	if power, ok := t.sub("power"); ok {
		a.watt, a.powerMark = [2]float64{power.numberOr("fromW", 0, 0, 1e9), power.numberOr("toW", 0, 0, 1e9)}, power.mark()
		power.done()
	}
	for i, m := range t.list("classes") {
		where := fmt.Sprintf("equipment, class %d", i+1)
		a.classes = append(a.classes, r.applianceClass(s, a.of, where, r.table(where, m)))
	}
	if len(a.classes) == 0 {
		r.fail("equipment", "classes", "add one class with rows", "is empty")
	}
	t.done()
	return a
}

func (r *reader) applianceClass(s *Set, of, where string, t *table) applianceClass {
	c := applianceClass{name: s.Document, fromRsce: t.numberOr("fromRsce", 0, 0, 1e6), thc: t.numberOr("thcPercent", 0, 0, 1e6), pwhc: t.numberOr("pwhcPercent", 0, 0, 1e6), totalMark: t.mark()}
	if tab := t.text("table"); tab != "" {
		c.name += " " + tab
	}
	for i, m := range t.list("rows") {
		r.applianceRow(&c, of, fmt.Sprintf("%s, row %d", where, i+1), m)
	}
	var capped applianceClass
	for i, m := range t.list("capRows") {
		r.applianceRow(&capped, of, fmt.Sprintf("%s, cap row %d", where, i+1), m)
	}
	c.cap = capped.limit
	if len(c.limit) == 0 {
		r.fail(where, "rows", "add rows", "is empty")
	}
	t.done()
	return c
}

func (r *reader) applianceRow(c *applianceClass, of, where string, m map[string]rawMessage) {
	t := r.table(where, m)
	from, to := t.orders()
	kind := t.word("kind", "all", "all", "odd", "even", "odd triplen", "odd non-triplen")
	mark := c.totalMark
	if t.has("mark") {
		mark = t.mark()
	}
	at := func(int) float64 { return 0 }
	text := t.text("formula")
	if text == "" {
		v := t.number("limit", 0, 1e6)
		at = func(int) float64 { return v }
	} else if f, ok := formula(text); ok {
		at = f
	} else {
		r.fail(where, "formula", "write it as 0.15*(15/h)", "%q is not of the form a*(n/h)+b", text)
	}
	scaled := t.flag("timesPowerFactor")
	t.done()
	if from == 0 {
		return
	}
	for len(c.limit) <= to {
		c.limit, c.rule, c.mark, c.timesPF = append(c.limit, 0), append(c.rule, ""), append(c.mark, ""), append(c.timesPF, false)
	}
	words := ""
	if from != to || text != "" {
		words = ", " + rowWords(kind, from, to, text)
	} else {
		words = fmt.Sprintf(", order %d", from)
	}
	if of == "fundamental" {
		words += ", of the fundamental"
	}
	for h := from; h <= to; h++ {
		if !inKind(kind, h) {
			continue
		}
		if c.limit[h] != 0 {
			r.fail(where, "orders", "state each order once", "repeats order %d", h)
			return
		}
		c.limit[h], c.rule[h], c.mark[h], c.timesPF[h] = at(h), c.name+words, mark, scaled
	}
}
