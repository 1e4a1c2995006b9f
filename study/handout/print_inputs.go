package handout

import (
	"encoding/json"
	"fmt"
	"strings"

	"quietbus/study"
)

// assumptions lists the inputs by origin: assumed ones first, because the
// result rests on them; those without an origin are counted and listed.
func (p *printer) assumptions() {
	p.section("Assumptions and inputs", 60)
	by := map[string][]InputValue{}
	for _, v := range p.doc.Provenance {
		if v.Origin != unstated || quantity(v) {
			by[v.Origin] = append(by[v.Origin], v)
		}
	}
	text := "No value is marked as assumed."
	if n := len(by[string(study.Assumed)]); n > 0 {
		text = fmt.Sprintf("%s assumed. The result holds only as far as they do; confirm them first.", counted(n, "value is", "values are"))
	}
	p.paragraph(span{p.body, text})
	p.skip(3)
	p.originTable(by)
	p.unusual()
	p.unstatedInputs(by[unstated])
	p.defaults()
}

// quantity reports whether a value is a number or a list of numbers, which
// somebody must have read somewhere, rather than a name or a choice.
func quantity(v InputValue) bool {
	if v.Field == "cost" {
		return false
	}
	switch x := v.Value.(type) {
	case Num:
		return true
	case json.RawMessage:
		return strings.Contains(string(x), "{")
	}
	return false
}

// originTable lists the values with an origin, assumed ones first and in
// italics.
func (p *printer) originTable(by map[string][]InputValue) {
	t := &table{columns: []column{
		{head: "Item", min: 84}, {head: "Quantity", min: 84}, {head: "Value", align: point}, {head: ""}, {head: "Source or reason", flex: 1, min: 100},
	}}
	for _, origin := range []study.Origin{study.Assumed, study.Measured, study.Given} {
		list := by[string(origin)]
		if len(list) == 0 {
			continue
		}
		t.group(strings.ToUpper(string(origin[:1])) + string(origin[1:]))
		last := ""
		for _, v := range list {
			cells := plain(v.Item, v.Label, valueText(v), v.Unit, v.Note)
			if v.Item == last {
				cells[0].text = ""
			}
			last = v.Item
			if origin == study.Assumed {
				cells[2].style = p.small.italic()
			}
			t.add(cells...)
		}
	}
	if len(t.rows) > 0 {
		p.table(t, 0)
	}
}

// valueText returns a value as the study file has it.
func valueText(v InputValue) string {
	switch x := v.Value.(type) {
	case Num:
		return short(float64(x))
	case string:
		return x
	case json.RawMessage:
		var list []json.RawMessage
		if json.Unmarshal(x, &list) == nil {
			return counted(len(list), "entry", "entries")
		}
		return string(x)
	}
	return fmt.Sprint(v.Value)
}

// unusual lists the values that a practitioner would look at twice.
func (p *printer) unusual() {
	list := p.study.Warnings()
	if len(list) == 0 {
		return
	}
	p.subsection("Unusual values", 24)
	for _, w := range list {
		p.item(p.small, w.Error())
	}
}

// unstatedInputs lists what nobody said the origin of, in running text.
func (p *printer) unstatedInputs(list []InputValue) {
	if len(list) == 0 {
		return
	}
	p.subsection(fmt.Sprintf("No origin stated: %s", counted(len(list), "value", "values")), 30)
	for i := 0; i < len(list); {
		names, text, kind := list[i].Item, "", list[i].Kind
		text, i = unstatedText(list, i)
		for i < len(list) && list[i].Kind == kind { // items alike share a line
			next, end := unstatedText(list, i)
			if next != text {
				break
			}
			names += ", " + list[i].Item
			i = end
		}
		p.paragraph(span{p.small.bold(), names + "  "}, span{p.small, text})
		p.y -= 1.5
	}
}

// unstatedText words the values of the item at i, and returns where the next
// item begins.
func unstatedText(list []InputValue, i int) (text string, next int) {
	var values []string
	for next = i; next < len(list) && list[next].Item == list[i].Item; next++ {
		v := list[next].Label + " " + valueText(list[next])
		if list[next].Unit != "" {
			v += " " + list[next].Unit
		}
		values = append(values, v)
	}
	return strings.Join(values, "; "), next
}

// defaults lists the values that are absent and what stood in for them.
func (p *printer) defaults() {
	if len(p.doc.Defaults) == 0 {
		return
	}
	p.subsection("Left at the program's default", 30)
	p.paragraph(span{p.small, "Values that the study leaves out, and what was computed with instead:"})
	p.skip(2)
	for i := 0; i < len(p.doc.Defaults); {
		first := i
		var values []string
		for ; i < len(p.doc.Defaults) && p.doc.Defaults[i].Kind == p.doc.Defaults[first].Kind; i++ {
			d := p.doc.Defaults[i]
			who := strings.Join(d.Items, ", ")
			if all := len(p.study.Items(study.Kind(d.Kind))); all > 1 && len(d.Items) == all {
				who = "all"
			}
			values = append(values, fmt.Sprintf("%s: %s (%s)", d.Label, d.Default, who))
		}
		p.paragraph(span{p.small.bold(), study.InfoOf(study.Kind(p.doc.Defaults[first].Kind)).Plural + "  "}, span{p.small, strings.Join(values, "; ")})
		p.y -= 1.5
	}
}
