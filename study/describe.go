package study

import (
	"reflect"
	"strconv"
	"strings"
)

// KindInfo names a kind of item: its word, its list in the study file, and
// what it is called on screen.
type KindInfo struct {
	Kind     Kind
	Key      string // list in the study file
	Singular string
	Plural   string
	field    int // index in Study
}

// Type is the type of a field's value.
type Type int

// The types of a field.
const (
	Text Type = iota
	Number
	Whole
	Switch // true or false
	Names  // list of item names
	Rows   // list of lines with columns
)

// Field describes one field of a kind of item; see Study for the meaning of
// the parts.
type Field struct {
	Key, Label, Unit, Help, Default string
	Type                            Type
	Need, Pointer                   bool
	Range, Typical                  Bounds
	Choices                         []string
	Ref                             []Kind   // kinds whose names the field holds
	For                             []string // words of the Kind field it belongs to; nil for all
	Columns                         []Field  // of Rows
	index                           []int
	typ                             reflect.Type // without the pointer
}

// Bounds is a range of numbers; the zero value has no bounds.
type Bounds struct {
	Has              bool
	Min, Max         float64
	OpenMin, OpenMax bool
}

// Holds reports whether v lies within the bounds.
func (b Bounds) Holds(v float64) bool {
	if !b.Has {
		return true
	}
	return v == v && (v > b.Min || (v == b.Min && !b.OpenMin)) && (v < b.Max || (v == b.Max && !b.OpenMax))
}

// String says the bounds in words: "above 0, up to 1e+06".
func (b Bounds) String() string {
	lo, hi := strconv.FormatFloat(b.Min, 'g', -1, 64), strconv.FormatFloat(b.Max, 'g', -1, 64)
	if b.OpenMin {
		lo = "above " + lo
	} else {
		lo = "from " + lo
	}
	if b.OpenMax {
		return lo + ", below " + hi
	}
	return lo + " to " + hi
}

var kinds = []KindInfo{
	{Kind: KindSupply, Key: "supplies", Singular: "supply", Plural: "Supplies"},
	{Kind: KindBus, Key: "buses", Singular: "bus", Plural: "Buses"},
	{Kind: KindTransformer, Key: "transformers", Singular: "transformer", Plural: "Transformers"},
	{Kind: KindCable, Key: "cables", Singular: "cable or line", Plural: "Cables and lines"},
	{Kind: KindReactor, Key: "reactors", Singular: "series reactor", Plural: "Series reactors"},
	{Kind: KindCoupler, Key: "couplers", Singular: "coupler", Plural: "Couplers"},
	{Kind: KindLoad, Key: "loads", Singular: "linear load", Plural: "Linear loads"},
	{Kind: KindMotor, Key: "motors", Singular: "motor group", Plural: "Motor groups"},
	{Kind: KindGenerator, Key: "generators", Singular: "generator", Plural: "Generators"},
	{Kind: KindNonlinearLoad, Key: "nonlinearLoads", Singular: "non-linear load", Plural: "Non-linear loads"},
	{Kind: KindBank, Key: "banks", Singular: "capacitor bank", Plural: "Capacitor banks"},
	{Kind: KindFilter, Key: "filters", Singular: "filter", Plural: "Filters"},
	{Kind: KindMeasure, Key: "measures", Singular: "measure", Plural: "Measures"},
	{Kind: KindAssessment, Key: "assessments", Singular: "assessment point", Plural: "Assessment points"},
	{Kind: KindLimitSet, Key: "limitSets", Singular: "limit set", Plural: "Own limit sets"},
	{Kind: KindScan, Key: "scans", Singular: "impedance scan", Plural: "Impedance scans"},
	{Kind: KindState, Key: "states", Singular: "operating state", Plural: "Operating states"},
	{Kind: KindRange, Key: "ranges", Singular: "range", Plural: "Ranges"},
}

var described = map[Kind][]Field{}

var titleFields, studyFields []Field

func init() {
	t := reflect.TypeFor[Study]()
	for i := range kinds {
		for f := range t.NumField() {
			if jsonKey(t.Field(f)) == kinds[i].Key {
				kinds[i].field = f
				described[kinds[i].Kind] = fieldsOf(t.Field(f).Type.Elem(), nil)
			}
		}
	}
	titleFields = fieldsOf(reflect.TypeFor[Title](), nil)
	for _, f := range fieldsOf(t, nil) {
		if f.Label != "" {
			studyFields = append(studyFields, f)
		}
	}
}

// Kinds returns every kind of item in the order of the file.
func Kinds() []KindInfo { return kinds }

// InfoOf returns the description of a kind.
func InfoOf(kind Kind) KindInfo {
	for _, k := range kinds {
		if k.Kind == kind {
			return k
		}
	}
	return KindInfo{Kind: kind, Singular: string(kind), Plural: string(kind)}
}

// Describe returns the fields of a kind of item, in file order. The slice is
// shared and must not be changed.
func Describe(kind Kind) []Field { return described[kind] }

// DescribeTitle returns the fields of the title block.
func DescribeTitle() []Field { return titleFields }

// DescribeStudy returns the study's own values: frequency and highest order.
func DescribeStudy() []Field { return studyFields }

func jsonKey(f reflect.StructField) string {
	key, _, _ := strings.Cut(f.Tag.Get("json"), ",")
	return key
}

// fieldsOf reads the tags of a struct type; embedded structs are flattened,
// and provenance, which belongs to the item as a whole, is left out.
func fieldsOf(t reflect.Type, path []int) []Field {
	var out []Field
	for i := range t.NumField() {
		f := t.Field(i)
		at := append(append([]int(nil), path...), i)
		if f.Anonymous {
			out = append(out, fieldsOf(f.Type, at)...)
			continue
		}
		key := jsonKey(f)
		if key == "" || f.Tag.Get("label") == "" {
			continue
		}
		d := Field{Key: key, Label: f.Tag.Get("label"), Unit: f.Tag.Get("unit"), Help: f.Tag.Get("help"), Default: f.Tag.Get("default"),
			Need: f.Tag.Get("need") == "yes", Range: parseBounds(f.Tag.Get("range")), Typical: parseTypical(f.Tag.Get("typical")),
			Choices: split(f.Tag.Get("choices")), For: split(f.Tag.Get("for")), index: at}
		for _, r := range split(f.Tag.Get("ref")) {
			d.Ref = append(d.Ref, Kind(r))
		}
		ft := f.Type
		if ft.Kind() == reflect.Pointer {
			d.Pointer, ft = true, ft.Elem()
		}
		d.typ = ft
		switch ft.Kind() {
		case reflect.Float64:
			d.Type = Number
		case reflect.Int:
			d.Type = Whole
		case reflect.Bool:
			d.Type = Switch
		case reflect.Slice:
			d.Type = Names
			if ft.Elem().Kind() == reflect.Struct {
				d.Type, d.Columns = Rows, fieldsOf(ft.Elem(), nil)
			}
		}
		out = append(out, d)
	}
	return out
}

func split(text string) []string {
	if text == "" {
		return nil
	}
	return strings.Split(text, "|")
}

func parseBounds(text string) Bounds {
	if text == "" {
		return Bounds{}
	}
	b := Bounds{Has: true, OpenMin: text[0] == '(', OpenMax: text[len(text)-1] == ')'}
	lo, hi, _ := strings.Cut(text[1:len(text)-1], ",")
	b.Min, b.Max = mustNumber(lo), mustNumber(hi)
	return b
}

func parseTypical(text string) Bounds {
	if text == "" {
		return Bounds{}
	}
	lo, hi, _ := strings.Cut(text, "..")
	return Bounds{Has: true, Min: mustNumber(lo), Max: mustNumber(hi)}
}

func mustNumber(text string) float64 {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		panic("study: a tag in model.go holds no number: " + text)
	}
	return v
}

// Applies reports whether the field belongs to an item whose Kind field says
// word.
func (f *Field) Applies(word string) bool {
	if f.For == nil {
		return true
	}
	for _, w := range f.For {
		if w == word {
			return true
		}
	}
	return false
}

// a puts the article before a word.
func a(word string) string {
	if word != "" && strings.ContainsRune("aeiou", rune(word[0])) {
		return "an " + word
	}
	return "a " + word
}
