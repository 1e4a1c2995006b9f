package study

import (
	"quietbus/study/grid"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// An Outcome is one evaluated study: one choice of measures, solved, checked
// and assessed. It is immutable once built and may be shared. Voltages are
// line to neutral in V rms, currents in A rms, impedances in ohm.
type Outcome struct {
	Study *Study   // the study that was evaluated, before its measures were applied
	State string   // the operating state in which it stood
	On    []string // names of the measures that were on, in file order

	Buses    []BusResult     // in file order, outlets of low-pass measures after them
	Elements []ElementResult // every item that carries current
	Points   []PointResult   // one per assessment, in file order
	Measures []MeasureResult // one per measure that was on, in file order
	Scans    []ScanResult    // the scans the study asks for
	Check    Check
	Warnings []string // plain sentences: saturation, islands, typical values used out of range
}

// BusResult is the voltage of one bus.
type BusResult struct {
	Name     string
	NominalV float64            // line to line
	Live     bool               // false when no supply reaches it; its spectra are then zero
	Phase    [3]phasor.Spectrum // a, b, c line to neutral
	Seq      [3]phasor.Spectrum // indexed by phasor.Sequence
}

// ElementResult is the current of one item at each of its ends.
type ElementResult struct {
	Name string
	Kind Kind
	Ends []EndResult // one for a shunt item, two for a branch (HV/from first)
}

// EndResult is the current at one end of an item, positive into the item.
type EndResult struct {
	Bus     string
	Phase   [3]phasor.Spectrum
	Neutral phasor.Spectrum // current in the neutral or earth connection, nil where there is none
}

// PointResult is one assessment point with every limit row.
type PointResult struct {
	Name        string
	Bus         string
	Set         string       // identifier of the limit set
	SetTitle    string       // its document and edition
	IscA, ILA   float64      // as used; zero when currents were not assessed
	Rows        []limits.Row // every row, in table order
	NotAssessed []string     // "currents: no maximum demand current is stated", ...
}

// MeasureResult is what a measure that is on is made of and bears.
type MeasureResult struct {
	Name       string
	Kind       string
	Bus        string
	Components []Component
	Duty       *Duty    // passive measures and active filters
	Response   []Gain   // low-pass measures: outlet over bus, by order
	Saturated  bool     // active filter asked for more than its rating
	Notes      []string // plain sentences
}

// Component is one part of a passive measure, per phase.
type Component struct {
	Part   string  // "capacitor", "reactor", "damping resistor"
	Symbol string  // "C", "L", "R"
	Value  float64 // farad, henry or ohm
	Note   string  // "three in delta", "X/R 40 at order 4.8", "rated 0.48 kV, 62.1 kvar"
}

// Duty is what a measure bears, the worst phase of each.
type Duty struct {
	CurrentA1  float64 // fundamental rms current in a line
	CurrentA   float64 // total rms current
	VoltageV1  float64 // across one capacitor as connected (delta: between phases), fundamental rms
	VoltageV   float64 // total rms
	PeakV      float64 // crest of the synthesised waveform
	RatedV     float64 // capacitor rating on the same footing; 0 when there is none
	RatedA     float64 // rated current; 0 when there is none
	LossW1     float64 // three-phase loss at order 1
	LossW      float64 // three-phase loss, all orders
	KvarRated  float64 // capacitor nameplate kvar at RatedV, three-phase
	KvarOutput float64 // output at order 1 and the solved voltage, three-phase
}

// Gain is a two-port's voltage ratio at one order.
type Gain struct {
	Order  int
	Ratio  float64 // |outlet| / |bus|
	LagDeg float64 // phase lag of the outlet, positive when it lags
}

// ScanResult is a driving-point or transfer impedance against order.
type ScanResult struct {
	Name     string // of the ScanRequest, empty for a scan made on the fly
	Bus      string
	At       string // transfer impedance: bus whose voltage is taken for a current into Bus; empty: its own
	Sequence phasor.Sequence
	Orders   []float64
	Z        []complex128 // ohm, same length
	Peaks    []Peak       // parallel resonances, rising order
	Valleys  []Peak       // series resonances, rising order
}

// Peak is an extremum of |Z|.
type Peak struct {
	Order float64
	Ohm   float64
	Q     float64 // order over 3 dB width; 0 when it cannot be told

	// Who makes a parallel resonance: the items whose reactive power swings in
	// it, largest share first. Nil for valleys.
	Capacitive, Inductive []string
	// Where it swings, largest share first: the squares of the mode's eigenvector.
	// Nil for valleys.
	Buses []BusShare

	mode *grid.Mode
}

// Words says who makes the peak: "C1 against T1 and Grid"; empty when nobody
// stands out.
func (p Peak) Words() string {
	if len(p.Capacitive) == 0 || len(p.Inductive) == 0 {
		return ""
	}
	return join(p.Capacitive) + " against " + join(p.Inductive)
}

// Check is how well the solution satisfies its own equations.
type Check struct {
	Residual float64 // worst |Y V - I| over all orders and sequences, relative
	Balance  float64 // worst complex power imbalance by order, relative
	Fallback int     // orders that needed the dense pivoted solver
	Rounds   int     // iterations of the order 1 power flow

	Reciprocity float64 // difference of a transfer impedance from its reverse, relative
}
