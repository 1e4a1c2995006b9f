package handout

import (
	"encoding/json"
	"reflect"
	"strings"

	"quietbus/study"
)

// inputs lists every value that a study's items state, in the study's order,
// with its origin; and the values that are absent and have a default.
func inputs(s *study.Study) ([]InputValue, []Defaults) {
	values, defaults := []InputValue{}, []Defaults{}
	whole := reflect.ValueOf(s).Elem()
	for i := range whole.NumField() {
		list := whole.Field(i)
		if list.Kind() != reflect.Slice || list.Type().Elem().Kind() != reflect.Struct {
			continue
		}
		key := jsonKey(whole.Type().Field(i))
		kind := kindOf(key)
		first := len(defaults)
		for j := range list.Len() {
			item := newItem(kind, list.Index(j))
			for _, f := range item.fields() {
				if f.value.IsZero() && f.optional {
					if f.def != "" && item.has(f) {
						defaults = addDefault(defaults, first, kind, f, item.name)
					}
					continue
				}
				values = append(values, item.input(f))
			}
		}
	}
	return values, defaults
}

// kindOf returns the kind of item a list's key holds: "buses" holds "bus".
func kindOf(key string) string {
	switch {
	case key == "supplies":
		return string(study.KindSupply)
	case key == "buses":
		return string(study.KindBus)
	}
	return strings.TrimSuffix(key, "s")
}

func jsonKey(f reflect.StructField) string {
	key, _, _ := strings.Cut(f.Tag.Get("json"), ",")
	return key
}

// item is one item of the study under reflection.
type item struct {
	kind, name string
	value      reflect.Value
	word       string // its own Kind field, "" without one
	origins    map[string]study.Provenance
}

// itemField is one field of an item with what its tags say.
type itemField struct {
	key, label, unit, def string
	optional              bool     // may be absent
	words                 []string // the kinds it belongs to; nil for all
	value                 reflect.Value
}

func newItem(kind string, v reflect.Value) item {
	it := item{kind: kind, value: v, name: v.FieldByName("Name").String()}
	it.origins, _ = v.FieldByName("Provenance").Interface().(map[string]study.Provenance)
	if f := v.FieldByName("Kind"); f.IsValid() {
		it.word = f.String()
	}
	return it
}

// fields lists the item's own fields, without name, remark and provenance.
func (it item) fields() []itemField {
	var out []itemField
	t := it.value.Type()
	for i := range t.NumField() {
		f := t.Field(i)
		if f.Anonymous {
			continue
		}
		d := itemField{
			key: jsonKey(f), label: f.Tag.Get("label"), unit: f.Tag.Get("unit"), def: f.Tag.Get("default"),
			optional: strings.Contains(f.Tag.Get("json"), "omitempty"), value: it.value.Field(i),
		}
		if words := f.Tag.Get("for"); words != "" {
			d.words = strings.Split(words, "|")
		}
		out = append(out, d)
	}
	return out
}

// has reports whether the field belongs to an item of this kind.
func (it item) has(f itemField) bool {
	if f.words == nil {
		return true
	}
	for _, w := range f.words {
		if w == it.word {
			return true
		}
	}
	return false
}

func (it item) input(f itemField) InputValue {
	in := InputValue{
		Item: it.name, Kind: it.kind, Field: f.key, Label: f.label, Unit: f.unit, Origin: unstated,
		Value: plainValue(f.value),
	}
	if p, ok := it.origins[f.key]; ok && p.Origin != study.Unstated {
		in.Origin, in.Note = string(p.Origin), p.Note
	}
	return in
}

// unstated is the origin, in words, of a value without provenance.
const unstated = "unstated"

// plainValue returns a field's value as a number, text, truth value or what
// JSON makes of a list.
func plainValue(v reflect.Value) any {
	switch v.Kind() {
	case reflect.String:
		return v.String()
	case reflect.Float64:
		return Num(v.Float())
	case reflect.Int:
		return v.Int()
	case reflect.Bool:
		return v.Bool()
	}
	raw, err := json.Marshal(v.Interface())
	if err != nil {
		return nil
	}
	return json.RawMessage(raw)
}

// addDefault notes that item has the default of f, among the entries of its
// kind, which begin at first.
func addDefault(list []Defaults, first int, kind string, f itemField, item string) []Defaults {
	for i := first; i < len(list); i++ {
		if list[i].Field == f.key && list[i].Default == f.def {
			list[i].Items = append(list[i].Items, item)
			return list
		}
	}
	return append(list, Defaults{Kind: kind, Field: f.key, Label: f.label, Default: f.def, Items: []string{item}})
}
