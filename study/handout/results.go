package handout

import (
	"encoding/json"
	"fmt"
	"io"
	"math"
	"strconv"
)

// ResultsFormat is the version of results.json that this package writes.
const ResultsFormat = 1

// Results is the document results.json: every number of the handout and the
// spectra behind it, for other programs. RESULTS.md explains it and
// results.schema.json checks it. Angles are in degrees against the cosine of
// the reference: the EMF of the first supply has the angle its study file
// states, 0 as a rule. Values are rms. Numbers have nine significant digits.
type Results struct {
	Format     int          `json:"format"` // 1
	Program    Program      `json:"program"`
	Study      StudyInfo    `json:"study"`
	Settings   Settings     `json:"settings"`
	Verdict    []Verdict    `json:"verdict"` // one an assessment point, in the study's order
	States     []Operating  `json:"states"`  // the operating states, the normal one first
	Before     *State       `json:"before"`  // without any measure; null when it was not computed
	After      *State       `json:"after"`   // with the measures that are on
	Provenance []InputValue `json:"provenance"`
	Defaults   []Defaults   `json:"defaults"`
}

// Program is what wrote the document.
type Program struct {
	Name    string `json:"name"`
	Version string `json:"version"` // empty when it was not stated
}

// StudyInfo is the title block, and the digest of the study file.
type StudyInfo struct {
	Title    string `json:"title"`
	Client   string `json:"client"`
	Site     string `json:"site"`
	Author   string `json:"author"`
	Revision string `json:"revision"`
	Date     string `json:"date"`
	Remarks  string `json:"remarks"`
	Invented bool   `json:"invented"` // true for a demonstration with invented data
	SHA256   string `json:"sha256"`   // of the study file's bytes, in hexadecimal
}

// Settings are what the whole study shares.
type Settings struct {
	FrequencyHz Num    `json:"frequencyHz"`
	MaxOrder    int    `json:"maxOrder"`  // arrays by order have maxOrder+1 elements
	Summation   string `json:"summation"` // how several sources of one order are added
}

// Verdict is the sentence at one assessment point.
type Verdict struct {
	Point  string `json:"point"`
	Bus    string `json:"bus"`
	State  string `json:"state"`  // "meets", "partly assessed", "over", "not assessed"
	Text   string `json:"text"`   // after
	Before string `json:"before"` // empty when there is no before
}

// State is the solved study with one choice of measures.
type State struct {
	MeasuresOn []string       `json:"measuresOn"`
	MeetsAll   bool           `json:"meetsAll"` // every assessment point meets its limits, and all was assessed
	Buses      []BusState     `json:"buses"`
	Elements   []ElementState `json:"elements"`
	Points     []PointState   `json:"points"`
	Measures   []MeasureState `json:"measures"`
	Scans      []ScanState    `json:"scans"`
	Check      CheckState     `json:"check"`
	Warnings   []string       `json:"warnings"`
}

// BusState is the voltage of one bus.
type BusState struct {
	Name      string                     `json:"name"`
	NominalV  Num                        `json:"nominalV"` // line to line
	Live      bool                       `json:"live"`     // false: no supply reaches it, all values are zero
	Phases    Phases[PhaseVoltage]       `json:"phases"`
	Sequences Sequences[SequenceVoltage] `json:"sequences"`
}

// Phases holds one value for each phase.
type Phases[T any] struct {
	A T `json:"a"`
	B T `json:"b"`
	C T `json:"c"`
}

// Sequences holds one value for each symmetrical component.
type Sequences[T any] struct {
	Positive T `json:"positive"`
	Negative T `json:"negative"`
	Zero     T `json:"zero"`
}

// PhaseVoltage is one phase's voltage to neutral. Percent is of the phase's
// own fundamental and, like Degrees, has an element for each order: index 0 is
// the direct component, index 1 (100 %) the fundamental.
type PhaseVoltage struct {
	FundamentalV       Num   `json:"fundamentalV"`
	FundamentalDegrees Num   `json:"fundamentalDegrees"`
	RMSV               Num   `json:"rmsV"`
	THDPercent         Num   `json:"thdPercent"` // orders 2 to maxOrder, of the fundamental
	Percent            []Num `json:"percent"`
	Degrees            []Num `json:"degrees"`
}

// SequenceVoltage is one symmetrical component of a bus's voltage. Percent is
// of the bus's positive-sequence fundamental, by order as in PhaseVoltage.
type SequenceVoltage struct {
	FundamentalV       Num   `json:"fundamentalV"`
	FundamentalDegrees Num   `json:"fundamentalDegrees"`
	Percent            []Num `json:"percent"`
	Degrees            []Num `json:"degrees"`
}

// ElementState is the current of one item of the study.
type ElementState struct {
	Name string     `json:"name"`
	Kind string     `json:"kind"` // "supply", "transformer", "cable", "load", "measure", ...
	Ends []EndState `json:"ends"` // one for a shunt item, two for a branch: high-voltage or from side first
}

// EndState is the current at one end, positive into the item.
type EndState struct {
	Bus     string          `json:"bus"`
	Phases  Phases[Current] `json:"phases"`
	Neutral *Current        `json:"neutral"` // null where no neutral or earth is connected
}

// Current is one conductor's current. A and Degrees have an element for each
// order: index 0 is the direct component, index 1 the fundamental.
type Current struct {
	RMSA       Num   `json:"rmsA"`
	THDPercent Num   `json:"thdPercent"` // of the current's own fundamental; 0 without one
	A          []Num `json:"A"`
	Degrees    []Num `json:"degrees"`
}

// PointState is one assessment point with every row of its limit set.
type PointState struct {
	Name        string     `json:"name"`
	Bus         string     `json:"bus"`
	Set         string     `json:"set"`
	SetTitle    string     `json:"setTitle"`
	State       string     `json:"state"` // as in Verdict
	IscA        Num        `json:"iscA"`  // as used; 0 when currents were not assessed
	DemandA     Num        `json:"demandA"`
	Rows        []LimitRow `json:"rows"`
	NotAssessed []string   `json:"notAssessed"` // what could not be, and why
}

// LimitRow is one value beside its limit, the worst phase.
type LimitRow struct {
	Name     string `json:"name"`     // "11th harmonic voltage"
	Quantity string `json:"quantity"` // "voltage" or "current"
	Order    int    `json:"order"`    // 0 for a total
	Index    string `json:"index"`    // "THD", "TDD" or empty for one order
	Phase    string `json:"phase"`
	Value    Num    `json:"value"` // in the unit; per cent are of the base the rule names
	Limit    Num    `json:"limit"`
	Unit     string `json:"unit"`    // "%" or "A"
	Share    Num    `json:"share"`   // value over limit; 1 is at the limit
	Verdict  string `json:"verdict"` // "meets" or "over"
	Rule     string `json:"rule"`    // document, edition, table and row
	Mark     string `json:"mark"`    // "found", "memory" (to be confirmed against the document) or "derived"
}

// MeasureState is what a measure that is on is made of and bears.
type MeasureState struct {
	Name       string      `json:"name"`
	Kind       string      `json:"kind"`
	Bus        string      `json:"bus"`
	Components []PartState `json:"components"`
	Duty       *DutyState  `json:"duty"`     // null when it bears none of its own
	Response   []GainState `json:"response"` // low-pass measures only
	Saturated  bool        `json:"saturated"`
	Notes      []string    `json:"notes"`
}

// PartState is one component, per phase.
type PartState struct {
	Part   string `json:"part"`
	Symbol string `json:"symbol"` // "C", "L", "R"
	Value  Num    `json:"value"`
	Unit   string `json:"unit"` // "F", "H", "ohm"
	Note   string `json:"note"`
}

// DutyState is what a measure bears, the worst phase of each. Ratings are 0
// where there are none.
type DutyState struct {
	FundamentalA Num `json:"fundamentalA"` // rms line current at order 1
	RMSA         Num `json:"rmsA"`         // all orders
	RatedA       Num `json:"ratedA"`
	FundamentalV Num `json:"fundamentalV"` // across the capacitor of one phase
	RMSV         Num `json:"rmsV"`
	PeakV        Num `json:"peakV"`
	RatedV       Num `json:"ratedV"`
	FundamentalW Num `json:"fundamentalLossW"` // three-phase loss at order 1
	LossW        Num `json:"lossW"`            // all orders
	RatedKvar    Num `json:"ratedKvar"`        // capacitor nameplate at ratedV, three-phase
	OutputKvar   Num `json:"outputKvar"`       // at order 1 and the solved voltage, three-phase
}

// GainState is the voltage ratio of a low-pass measure at one order.
type GainState struct {
	Order      int `json:"order"`
	Ratio      Num `json:"ratio"`      // |outlet| over |bus|
	LagDegrees Num `json:"lagDegrees"` // positive when the outlet lags
}

// ScanState is a driving-point impedance against order.
type ScanState struct {
	Name     string      `json:"name"`
	Bus      string      `json:"bus"`
	At       string      `json:"at"` // transfer impedance: bus whose voltage is taken; empty for a driving-point impedance
	Sequence string      `json:"sequence"`
	Orders   []Num       `json:"orders"`
	Ohm      []Num       `json:"ohm"`
	Degrees  []Num       `json:"degrees"`
	Peaks    []PeakState `json:"peaks"`   // parallel resonances
	Valleys  []PeakState `json:"valleys"` // series resonances
}

// PeakState is an extremum of the impedance.
type PeakState struct {
	Order Num `json:"order"`
	Ohm   Num `json:"ohm"`
	Q     Num `json:"q"` // 0 when it cannot be told

	Capacitive []string `json:"capacitive"` // items whose capacitance makes a parallel resonance, largest share first
	Inductive  []string `json:"inductive"`  // items whose inductance makes it

	Buses []BusPart `json:"buses"` // where a parallel resonance swings, largest share first
}

// BusPart is the participation of a bus in a resonance.
type BusPart struct {
	Bus   string `json:"bus"`
	Share Num    `json:"share"` // the shares of all buses add to about one
}

// CheckState is how well the solution satisfies its own equations.
type CheckState struct {
	Residual Num `json:"residual"` // worst |Y V - I| over all orders and sequences, relative
	Balance  Num `json:"balance"`  // worst complex power imbalance by order, relative
	Fallback int `json:"fallback"` // orders that needed the dense pivoted solver
	Rounds   int `json:"rounds"`   // iterations of the order 1 power flow

	Reciprocity Num `json:"reciprocity"` // difference of a transfer impedance from its reverse, relative
}

// InputValue is one value of the study file with its origin.
type InputValue struct {
	Item   string `json:"item"`
	Kind   string `json:"kind"`
	Field  string `json:"field"` // its key in the study file
	Label  string `json:"label"`
	Value  any    `json:"value"` // as in the study file
	Unit   string `json:"unit"`
	Origin string `json:"origin"` // "given", "measured", "assumed" or "unstated"
	Note   string `json:"note"`
}

// Defaults lists the items in which a value is absent, so that the default is
// what was computed with.
type Defaults struct {
	Kind    string   `json:"kind"`
	Field   string   `json:"field"`
	Label   string   `json:"label"`
	Default string   `json:"default"` // in words
	Items   []string `json:"items"`
}

// Num is a number that is written with nine significant digits.
type Num float64

// MarshalJSON writes the number, and refuses one that is not finite.
func (n Num) MarshalJSON() ([]byte, error) {
	v := float64(n)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return nil, fmt.Errorf("%v is not a finite number", v)
	}
	if v == 0 {
		return []byte("0"), nil // no minus zero
	}
	format := byte('f')
	if a := math.Abs(v); a < 1e-5 || a >= 1e12 {
		format = 'e'
	}
	return strconv.AppendFloat(nil, n.rounded(), format, -1, 64), nil
}

// rounded returns the number with nine significant digits.
func (n Num) rounded() float64 {
	v, err := strconv.ParseFloat(strconv.FormatFloat(float64(n), 'e', 8, 64), 64)
	if err != nil {
		return float64(n)
	}
	return v
}

// WriteTo writes the document as JSON, lists of numbers on one line each.
func (r *Results) WriteTo(w io.Writer) (int64, error) {
	raw, err := json.Marshal(r)
	if err != nil {
		return 0, fmt.Errorf("results: %w", err)
	}
	n, err := w.Write(layOut(raw))
	return int64(n), err
}

// ReadResults reads a results document and refuses another format.
func ReadResults(r io.Reader) (*Results, error) {
	var doc Results
	if err := json.NewDecoder(r).Decode(&doc); err != nil {
		return nil, fmt.Errorf("results: %w", err)
	}
	if doc.Format != ResultsFormat {
		return nil, fmt.Errorf("results: format %d is not known; this program reads format %d", doc.Format, ResultsFormat)
	}
	return &doc, nil
}

// layOut indents compact JSON, but keeps an object's or a list's scalars
// together: a list of plain values stays on one line.
func layOut(raw []byte) []byte {
	out := make([]byte, 0, len(raw)*5/4)
	depth := 0
	newline := func() {
		out = append(out, '\n')
		for range depth {
			out = append(out, ' ', ' ')
		}
	}
	for i := 0; i < len(raw); i++ {
		switch ch := raw[i]; ch {
		case '"':
			end := stringEnd(raw, i)
			out = append(out, raw[i:end]...)
			i = end - 1
		case '{', '[':
			if end := flatEnd(raw, i); end > 0 {
				out = appendFlat(out, raw[i:end])
				i = end - 1
				continue
			}
			out = append(out, ch)
			depth++
			newline()
		case '}', ']':
			depth--
			newline()
			out = append(out, ch)
		case ',':
			out = append(out, ch)
			newline()
		case ':':
			out = append(out, ':', ' ')
		default:
			out = append(out, ch)
		}
	}
	return append(out, '\n')
}

// stringEnd returns the index after the string that begins at i.
func stringEnd(raw []byte, i int) int {
	for i++; raw[i] != '"'; i++ {
		if raw[i] == '\\' {
			i++
		}
	}
	return i + 1
}

// flatEnd returns the index after the list that begins at i when it holds only
// plain values, or after an empty object; otherwise 0.
func flatEnd(raw []byte, i int) int {
	if raw[i] == '{' {
		if raw[i+1] == '}' {
			return i + 2
		}
		return 0
	}
	for i++; ; i++ {
		switch raw[i] {
		case '{', '[':
			return 0
		case ']':
			return i + 1
		case '"':
			i = stringEnd(raw, i) - 1
		}
	}
}

func appendFlat(out, list []byte) []byte {
	for i := 0; i < len(list); i++ {
		if list[i] == '"' {
			end := stringEnd(list, i)
			out = append(out, list[i:end]...)
			i = end - 1
			continue
		}
		out = append(out, list[i])
		if list[i] == ',' {
			out = append(out, ' ')
		}
	}
	return out
}
