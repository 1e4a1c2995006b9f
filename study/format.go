package study

import (
	"fmt"
	"reflect"
	"strings"

	"quietbus/study/converter"
	"quietbus/study/limits"
)

// FormatKeys returns the part of FORMAT.md that lists every key of the study
// file, made from the types and their tags.
func FormatKeys() string {
	var b strings.Builder
	t := reflect.TypeFor[Study]()
	b.WriteString("### study (the file itself)\n\n")
	keyTable(&b, t)
	b.WriteString("\n### title\n\n")
	keyTable(&b, reflect.TypeFor[Title]())
	for _, k := range kinds {
		f := t.Field(k.field)
		fmt.Fprintf(&b, "\n### %s\n\n%s Each is one %s.\n\n", k.Key, f.Tag.Get("help"), k.Singular)
		keyTable(&b, f.Type.Elem())
	}
	for _, x := range []struct {
		title string
		t     reflect.Type
	}{
		{"a line of `background`", reflect.TypeFor[BackgroundLine]()},
		{"a line of `lines`", reflect.TypeFor[SpectrumLine]()},
		{"a line of `shares`", reflect.TypeFor[Share]()},
		{"a row of `rows` of a limit set", reflect.TypeFor[LimitLine]()},
		{"a line of `notReadable`", reflect.TypeFor[SaidLine]()},
		{"a value of `provenance`", reflect.TypeFor[Provenance]()},
		{"a value of `drawing`", reflect.TypeFor[Point]()},
	} {
		fmt.Fprintf(&b, "\n### %s\n\n", x.title)
		keyTable(&b, x.t)
	}
	b.WriteString("\n### words for `spectrum`\n\n| word | meaning | source | mark |\n|---|---|---|---|\n| `typed` | the lines under `lines` | yours | |\n")
	for _, m := range converter.Typical() {
		fmt.Fprintf(&b, "| `%s` | %s | %s | %s |\n", m.Name, m.Title, m.Source, m.Mark)
	}
	b.WriteString("\n### words for `set`\n\n| word | document |\n|---|---|\n")
	for _, s := range limits.Sets() {
		fmt.Fprintf(&b, "| `%s` | %s |\n", s.ID, s.Title)
	}
	return b.String()
}

func keyTable(b *strings.Builder, t reflect.Type) {
	b.WriteString("| key | type | unit | range | needed | meaning |\n|---|---|---|---|---|---|\n")
	keyRows(b, t)
}

func keyRows(b *strings.Builder, t reflect.Type) {
	for i := range t.NumField() {
		f := t.Field(i)
		if f.Anonymous {
			keyRows(b, f.Type)
			continue
		}
		words := f.Tag.Get("help")
		for _, x := range [][2]string{{"choices", "Words: "}, {"ref", "Names a "}, {"for", "Only for "}, {"default", "When absent: "}} {
			if v := f.Tag.Get(x[0]); v != "" {
				words += " " + x[1] + strings.ReplaceAll(v, "|", ", ") + "."
			}
		}
		bounds := ""
		if r := parseBounds(f.Tag.Get("range")); r.Has {
			bounds = r.String()
		}
		fmt.Fprintf(b, "| `%s` | %s | %s | %s | %s | %s |\n", jsonKey(f), typeWord(f.Type), f.Tag.Get("unit"), bounds, f.Tag.Get("need"), words)
	}
}

func typeWord(t reflect.Type) string {
	switch t.Kind() {
	case reflect.Pointer:
		return typeWord(t.Elem())
	case reflect.Slice:
		if t.Elem().Kind() == reflect.Struct {
			return "list of objects"
		}
		return "list of texts"
	case reflect.Struct, reflect.Map:
		return "object"
	case reflect.Float64:
		return "number"
	case reflect.Int:
		return "whole number"
	case reflect.Bool:
		return "true or false"
	}
	return "text"
}
