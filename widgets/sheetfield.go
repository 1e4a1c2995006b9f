package widgets

// A FieldKind says how a field of a sheet is entered.
type FieldKind string

// The kinds of field.
const (
	FieldText      FieldKind = "text"
	FieldNumber    FieldKind = "number"
	FieldChoice    FieldKind = "choice"    // one of Choices
	FieldReference FieldKind = "reference" // the name of another item: one of Choices
	FieldBool      FieldKind = "bool"      // "true" or "false"
	FieldLines     FieldKind = "lines"     // rows of Columns, see SplitRows and JoinRows
	FieldMulti     FieldKind = "multi"     // any of Choices, one a line
)

// Origins a value may have; the empty one is unstated.
const (
	OriginGiven    = "given"
	OriginMeasured = "measured"
	OriginAssumed  = "assumed"
)

// A SheetField is one field of a Sheet as it shall be shown.
type SheetField struct {
	Key     string
	Label   string
	Unit    string
	Help    string // one sentence
	Typical string // range a practitioner expects, such as "4 to 7"
	Default string // what an empty value means; shown in the empty field
	Kind    FieldKind
	Text    string   // the value
	Choices []string // for choice, reference and multi
	Labels  []string // what the choices are called on screen; nil for themselves
	Columns []Column // for lines
	Need    bool     // must be filled in

	Error  string // problem found outside, shown until the text changes
	Remedy string

	Sourced bool   // the value may carry an origin
	Origin  string // "", given, measured or assumed
	Note    string // which letter or nameplate; why it was assumed
}

// A Column is one column of a field of lines.
type Column struct {
	Label    string
	Unit     string
	Default  string // what an empty cell means
	Optional bool   // may be empty
	Text     bool   // words, not a number
}
