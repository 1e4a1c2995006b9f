package study

import (
	"encoding/json"
	"reflect"
)

// Schema returns the JSON Schema (draft 2020-12) of the study file, made from
// the types and their tags; study.schema.json beside this file holds the same.
func Schema() []byte {
	doc := objectSchema(reflect.TypeFor[Study]())
	doc["$schema"] = "https://json-schema.org/draft/2020-12/schema"
	doc["title"] = "Quietbus study, format 1"
	doc["required"] = []string{"format", "title", "frequencyHz"}
	doc["properties"].(map[string]any)["format"].(map[string]any)["const"] = Format
	data, err := json.MarshalIndent(doc, "", "  ")
	if err != nil { // only unsupported types can make one, and there are none
		panic(err)
	}
	return append(data, '\n')
}

func objectSchema(t reflect.Type) map[string]any {
	properties := map[string]any{}
	var required []string
	var walk func(reflect.Type)
	walk = func(t reflect.Type) {
		for i := range t.NumField() {
			f := t.Field(i)
			if f.Anonymous {
				walk(f.Type)
				continue
			}
			key := jsonKey(f)
			if key == "" {
				continue
			}
			properties[key] = valueSchema(f)
			if f.Tag.Get("need") == "yes" {
				required = append(required, key)
			}
		}
	}
	walk(t)
	doc := map[string]any{"type": "object", "additionalProperties": false, "properties": properties}
	if required != nil {
		doc["required"] = required
	}
	return doc
}

func valueSchema(f reflect.StructField) map[string]any {
	doc := typeSchema(f.Type)
	words := f.Tag.Get("help")
	if unit := f.Tag.Get("unit"); unit != "" {
		words += " Unit: " + unit + "."
	}
	if typical := f.Tag.Get("typical"); typical != "" {
		words += " Typical: " + typical + "."
	}
	if absent := f.Tag.Get("default"); absent != "" {
		words += " When absent: " + absent + "."
	}
	if kinds := f.Tag.Get("for"); kinds != "" {
		words += " Only for: " + kinds + "."
	}
	if ref := f.Tag.Get("ref"); ref != "" {
		words += " Names a: " + ref + "."
	}
	doc["description"] = words
	if b := parseBounds(f.Tag.Get("range")); b.Has {
		// zero stands for "absent" where the key may be left out
		if f.Tag.Get("need") == "yes" || b.Holds(0) || f.Type.Kind() == reflect.Pointer {
			put(doc, b)
		} else {
			inner := map[string]any{}
			put(inner, b)
			doc["anyOf"] = []any{map[string]any{"const": 0}, inner}
		}
	}
	if choices := split(f.Tag.Get("choices")); choices != nil {
		if f.Tag.Get("need") != "yes" {
			choices = append([]string{""}, choices...)
		}
		doc["enum"] = choices
	}
	if f.Tag.Get("need") == "yes" && f.Type.Kind() == reflect.String {
		doc["minLength"] = 1
	}
	return doc
}

func put(doc map[string]any, b Bounds) {
	lo, hi := "minimum", "maximum"
	if b.OpenMin {
		lo = "exclusiveMinimum"
	}
	if b.OpenMax {
		hi = "exclusiveMaximum"
	}
	doc[lo], doc[hi] = b.Min, b.Max
}

func typeSchema(t reflect.Type) map[string]any {
	switch t.Kind() {
	case reflect.Pointer:
		return typeSchema(t.Elem())
	case reflect.Struct:
		return objectSchema(t)
	case reflect.Slice:
		return map[string]any{"type": "array", "items": typeSchema(t.Elem())}
	case reflect.Map:
		return map[string]any{"type": "object", "additionalProperties": typeSchema(t.Elem())}
	case reflect.Float64:
		return map[string]any{"type": "number"}
	case reflect.Int:
		return map[string]any{"type": "integer"}
	case reflect.Bool:
		return map[string]any{"type": "boolean"}
	}
	return map[string]any{"type": "string"}
}
