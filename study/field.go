package study

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strconv"
	"strings"
)

// FieldOf returns the description of a field of a kind.
func FieldOf(kind Kind, key string) *Field {
	for i := range described[kind] {
		if described[kind][i].Key == key {
			return &described[kind][i]
		}
	}
	return nil
}

// GetField returns a field of an item as text: numbers with a decimal point,
// zero values as the empty text where the field is optional, lists as one
// line a row with tabs between the columns, names separated by commas.
func GetField(item any, key string) string {
	f := FieldOf(KindOf(item), key)
	if f == nil {
		return ""
	}
	return f.text(reflect.ValueOf(item).Elem().FieldByIndex(f.index))
}

func (f *Field) text(v reflect.Value) string {
	if v.Kind() == reflect.Pointer {
		if v.IsNil() {
			return ""
		}
		return strconv.FormatFloat(v.Elem().Float(), 'g', -1, 64)
	}
	switch f.Type {
	case Number:
		if v.Float() == 0 && !f.Need && f.Default != "0" && f.Default != "" {
			return ""
		}
		if v.Float() == 0 && f.Range.Has && !f.Range.Holds(0) {
			return ""
		}
		return strconv.FormatFloat(v.Float(), 'g', -1, 64)
	case Whole:
		if v.Int() == 0 && f.Range.Has && !f.Range.Holds(0) {
			return ""
		}
		return strconv.FormatInt(v.Int(), 10)
	case Switch:
		if v.Bool() {
			return "yes"
		}
		return "no"
	case Names:
		return strings.Join(v.Interface().([]string), ", ")
	case Rows:
		var b strings.Builder
		for i := range v.Len() {
			for c := range f.Columns {
				if c > 0 {
					b.WriteByte('\t')
				}
				b.WriteString(f.Columns[c].text(v.Index(i).FieldByIndex(f.Columns[c].index)))
			}
			b.WriteByte('\n')
		}
		return b.String()
	}
	return v.String()
}

// SetField sets a field of an item from text as GetField writes it; a decimal
// comma is understood, and rows may be pasted from a spreadsheet. The item is
// unchanged when the text is wrong.
func SetField(item any, key, text string) error {
	f := FieldOf(KindOf(item), key)
	if f == nil {
		return &FieldError{Item: NameOf(item), Field: key, Problem: "there is no such field", Remedy: "see the list of fields"}
	}
	v, problem := f.parse(text)
	if problem != "" {
		return &FieldError{Item: NameOf(item), Field: key, Problem: problem, Remedy: f.remedy()}
	}
	reflect.ValueOf(item).Elem().FieldByIndex(f.index).Set(v)
	return nil
}

func (f *Field) remedy() string {
	switch {
	case f.Choices != nil:
		return "choose " + strings.Join(f.Choices, ", ")
	case f.Range.Has:
		return "give a value " + f.Range.String() + f.withUnit()
	case f.Ref != nil:
		return "choose an item of the study"
	}
	return "correct it"
}

func (f *Field) withUnit() string {
	if f.Unit == "" {
		return ""
	}
	return " " + f.Unit
}

func (f *Field) parse(text string) (reflect.Value, string) {
	trimmed := strings.TrimSpace(text)
	switch f.Type {
	case Number, Whole:
		v, problem := f.number(trimmed)
		switch {
		case problem != "":
			return reflect.Value{}, problem
		case f.Pointer && trimmed == "":
			return reflect.Zero(reflect.TypeFor[*float64]()), ""
		case f.Pointer:
			return reflect.ValueOf(&v), ""
		case f.Type == Whole:
			return reflect.ValueOf(int(v)), ""
		}
		return reflect.ValueOf(v), ""
	case Switch:
		switch strings.ToLower(trimmed) {
		case "yes", "true", "1", "on":
			return reflect.ValueOf(true), ""
		case "no", "false", "0", "off", "":
			return reflect.ValueOf(false), ""
		}
		return reflect.Value{}, fmt.Sprintf("%q is neither yes nor no", trimmed)
	case Names:
		var names []string
		for _, n := range strings.Split(trimmed, ",") {
			if n = strings.TrimSpace(n); n != "" {
				names = append(names, n)
			}
		}
		return reflect.ValueOf(names), ""
	case Rows:
		return f.rows(text)
	}
	if f.Need && trimmed == "" {
		return reflect.Value{}, "is empty"
	}
	if len(f.Choices) > 0 && trimmed != "" && !slices.Contains(f.Choices, trimmed) {
		return reflect.Value{}, fmt.Sprintf("%q is none of its words", trimmed)
	}
	return reflect.ValueOf(trimmed).Convert(f.typ), ""
}

// number reads a number with decimal point or comma.
func (f *Field) number(text string) (float64, string) {
	if text == "" {
		if f.Need {
			return 0, "is empty"
		}
		return 0, ""
	}
	v, err := ParseNumber(text)
	if err != nil {
		return 0, err.Error()
	}
	if f.Type == Whole && v != math.Trunc(v) {
		return 0, fmt.Sprintf("%s is not a whole number", text)
	}
	if f.Range.Has && !f.Range.Holds(v) {
		return 0, fmt.Sprintf("%s%s is out of range", text, f.withUnit())
	}
	return v, ""
}

// ParseNumber reads a number with a decimal point or a decimal comma.
// Separators of thousands are not guessed: they are an error.
func ParseNumber(text string) (float64, error) {
	clean := strings.TrimSpace(text)
	if strings.Count(clean, ",") == 1 && !strings.Contains(clean, ".") {
		clean = strings.Replace(clean, ",", ".", 1)
	}
	v, err := strconv.ParseFloat(clean, 64)
	if err != nil || math.IsNaN(v) || math.IsInf(v, 0) || strings.ContainsAny(clean, "xX_pP") {
		return 0, fmt.Errorf("%q is not a number", text)
	}
	return v, nil
}

// rows reads lines with columns separated by tabs, semicolons or spaces.
func (f *Field) rows(text string) (reflect.Value, string) {
	t := f.typ.Elem()
	out := reflect.MakeSlice(f.typ, 0, 8)
	for n, line := range strings.Split(strings.ReplaceAll(text, "\r", ""), "\n") {
		if strings.TrimSpace(line) == "" {
			continue
		}
		row := reflect.New(t).Elem()
		cells := cells(line)
		if len(cells) > len(f.Columns) {
			return out, fmt.Sprintf("row %d has %d columns, at most %d are known", n+1, len(cells), len(f.Columns))
		}
		for c := range f.Columns {
			cell := ""
			if c < len(cells) {
				cell = cells[c]
			}
			v, problem := f.Columns[c].parse(cell)
			if problem != "" {
				return out, fmt.Sprintf("row %d, %s: %s", n+1, strings.ToLower(f.Columns[c].Label), problem)
			}
			row.FieldByIndex(f.Columns[c].index).Set(v)
		}
		out = reflect.Append(out, row)
	}
	if out.Len() == 0 {
		return reflect.Zero(out.Type()), ""
	}
	return out, ""
}

func cells(line string) []string {
	switch {
	case strings.Contains(line, "\t"):
		return strings.Split(line, "\t")
	case strings.Contains(line, ";"):
		return strings.Split(line, ";")
	}
	return strings.Fields(line)
}
