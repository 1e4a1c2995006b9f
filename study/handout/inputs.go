package handout

import (
	"encoding/json"
	"fmt"
	"strconv"

	"quietbus/study"
)

// unstated is the origin, in words, of a value without provenance.
const unstated = "unstated"

// inputs lists every value that a study's items state, in the study's order,
// with its origin; and the values that are absent and have a default.
func inputs(s *study.Study) ([]InputValue, []Defaults, error) {
	values, defaults := []InputValue{}, []Defaults{}
	for _, kind := range study.Kinds() {
		first := len(defaults)
		for _, item := range s.Items(kind.Kind) {
			name, origins, word := study.NameOf(item), study.ProvenanceOf(item), study.GetField(item, "kind")
			stated, err := statedValues(item)
			if err != nil {
				return nil, nil, fmt.Errorf("results: %s %s: %w", kind.Singular, name, err)
			}
			for _, f := range study.Describe(kind.Kind) {
				if f.Key == "name" || f.Key == "remark" {
					continue
				}
				raw, ok := stated[f.Key]
				if !ok {
					if f.Default != "" && f.Applies(word) {
						defaults = addDefault(defaults, first, kind.Kind, &f, name)
					}
					continue
				}
				v := InputValue{
					Item: name, Kind: string(kind.Kind), Field: f.Key, Label: f.Label, Unit: f.Unit,
					Origin: unstated, Value: plainValue(raw),
				}
				if p := origins[f.Key]; p.Origin != study.Unstated {
					v.Origin, v.Note = string(p.Origin), p.Note
				}
				values = append(values, v)
			}
		}
	}
	return values, defaults, nil
}

// statedValues returns what the study file holds of an item, by key.
func statedValues(item any) (map[string]json.RawMessage, error) {
	raw, err := json.Marshal(item)
	if err != nil {
		return nil, err
	}
	var stated map[string]json.RawMessage
	return stated, json.Unmarshal(raw, &stated)
}

// plainValue returns a value as a number, text, truth value, or list.
func plainValue(raw json.RawMessage) any {
	if v, err := strconv.ParseFloat(string(raw), 64); err == nil {
		return Num(v)
	}
	var text string
	if json.Unmarshal(raw, &text) == nil {
		return text
	}
	var yes bool
	if json.Unmarshal(raw, &yes) == nil {
		return yes
	}
	return raw
}

// addDefault notes that item has the default of f, among the entries of its
// kind, which begin at first.
func addDefault(list []Defaults, first int, kind study.Kind, f *study.Field, item string) []Defaults {
	for i := first; i < len(list); i++ {
		if list[i].Field == f.Key {
			list[i].Items = append(list[i].Items, item)
			return list
		}
	}
	return append(list, Defaults{Kind: string(kind), Field: f.Key, Label: f.Label, Default: f.Default, Items: []string{item}})
}
