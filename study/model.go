package study

import "quietbus/study/phasor"

// Format is the version of the study file that this package writes.
const Format = 1

// A Study is one site as the study file holds it: nameplate values in the
// units their keys name, never derived quantities. The struct tags describe
// each field once for the schema, the validation, the edit sheets and the
// printed assumptions (see Describe):
//
//	label    the field's name on screen and in print
//	unit     its unit; units stand in the heading, never in the value
//	range    "(0,1e6]" open or closed bounds; a value outside is an error
//	typical  "50..2500" the range a practitioner expects; outside it warns
//	choices  "a|b|c" the words allowed
//	ref      "bus" the kind of item whose name the field holds
//	for      "single-tuned|high-pass" the kinds (Kind field) it belongs to
//	default  what an absent (zero) value means
//	need     "yes" when a zero or empty value is an error
//	help     one sentence
type Study struct {
	Format      int     `json:"format" help:"Version of the file format; 1."`
	Title       Title   `json:"title" help:"Title block."`
	FrequencyHz float64 `json:"frequencyHz" label:"System frequency" unit:"Hz" range:"[10,1000]" typical:"50..60" need:"yes" help:"Fundamental frequency, 50 or 60 as a rule."`
	MaxOrder    int     `json:"maxOrder,omitempty" label:"Highest order" range:"[2,100]" default:"50" help:"Highest harmonic order that is computed."`

	Summation      string  `json:"summation,omitempty" label:"Adding sources" choices:"phasor|second-law|arithmetic" default:"phasor" help:"How several sources of one order are added: with their angles as stated, by the second summation law of IEC/TR 61000-3-6 where angles are not known, or arithmetically as the worst case. The background is one of the sources."`
	ExponentLow    float64 `json:"exponentLow,omitempty" label:"Exponent below order 5" range:"[1,3]" typical:"1..2" default:"1" help:"Second summation law only: own exponent for orders below 5."`
	ExponentMiddle float64 `json:"exponentMiddle,omitempty" label:"Exponent 5 to 10" range:"[1,3]" typical:"1..2" default:"1.4" help:"Second summation law only: own exponent for orders 5 to 10."`
	ExponentHigh   float64 `json:"exponentHigh,omitempty" label:"Exponent above 10" range:"[1,3]" typical:"1..2" default:"2" help:"Second summation law only: own exponent for orders above 10."`

	Supplies       []Supply        `json:"supplies,omitempty" help:"Utility supplies: an EMF behind the fault impedance."`
	Buses          []Bus           `json:"buses,omitempty" help:"Busbars and boards."`
	Transformers   []Transformer   `json:"transformers,omitempty" help:"Two-winding transformers."`
	Cables         []Cable         `json:"cables,omitempty" help:"Cables and overhead lines."`
	Reactors       []Reactor       `json:"reactors,omitempty" help:"Series reactors between two buses."`
	Couplers       []Coupler       `json:"couplers,omitempty" help:"Bus couplers and tie switches."`
	Loads          []Load          `json:"loads,omitempty" help:"Linear loads."`
	Motors         []Motor         `json:"motors,omitempty" help:"Groups of directly connected induction motors."`
	Generators     []Generator     `json:"generators,omitempty" help:"Synchronous generators in parallel with a supply."`
	NonlinearLoads []NonlinearLoad `json:"nonlinearLoads,omitempty" help:"Loads that draw harmonic current."`
	Banks          []Bank          `json:"banks,omitempty" help:"Capacitor banks, plain or detuned."`
	Filters        []Filter        `json:"filters,omitempty" help:"Passive filters that stand already."`
	Measures       []Measure       `json:"measures,omitempty" help:"Changes that can be flipped on and off."`
	Assessments    []Assessment    `json:"assessments,omitempty" help:"Points where a limit set is applied."`
	LimitSets      []LimitSet      `json:"limitSets,omitempty" help:"Limits of your own, as from a letter of the network operator."`
	Scans          []ScanRequest   `json:"scans,omitempty" help:"Impedance scans wanted in the results: driving-point or transfer."`

	OperatingStates []OperatingState `json:"states,omitempty" help:"Ways in which the site is run; the study as stated is the normal one."`
	Ranges          []Range          `json:"ranges,omitempty" help:"Between what bounds values lie that are not known for sure."`

	Drawing map[string]Point `json:"drawing,omitempty" help:"Place of each bus on the single-line, by name; absent ones are laid out by themselves."`
}

// Title is the title block of the study and of its handout.
type Title struct {
	Study    string `json:"study" label:"Study" need:"yes" help:"What is studied, in one line."`
	Client   string `json:"client,omitempty" label:"Client" help:"For whom."`
	Site     string `json:"site,omitempty" label:"Site" help:"Where."`
	Author   string `json:"author,omitempty" label:"Author" help:"Who made the study."`
	Revision string `json:"revision,omitempty" label:"Revision" help:"Revision mark."`
	Date     string `json:"date,omitempty" label:"Date" help:"Date of the revision, as it shall be printed."`
	Remarks  string `json:"remarks,omitempty" label:"Remarks" help:"Free text on the first page."`
	Invented bool   `json:"invented,omitempty" label:"Invented data" help:"True for a demonstration whose site and numbers are invented; said on screen and in print."`
}

// Named is what every item starts with. Names are unique over the whole
// study: other items refer to them.
type Named struct {
	Name string `json:"name" label:"Name" need:"yes" help:"Unique name; other items refer to it."`
}

// Noted is what every item ends with.
type Noted struct {
	Remark     string                `json:"remark,omitempty" label:"Remark" help:"Free text."`
	Provenance map[string]Provenance `json:"provenance,omitempty" help:"Where a value comes from, by the value's key."`
}

// Origin says how a value came into the study.
type Origin string

// The origins a value may have. A value without provenance has Unstated.
const (
	Unstated Origin = ""
	Given    Origin = "given"
	Measured Origin = "measured"
	Assumed  Origin = "assumed"
)

// Provenance is the origin of one value with a note (letter, nameplate, ...).
type Provenance struct {
	Origin Origin `json:"origin" choices:"given|measured|assumed" help:"given (letter, nameplate), measured, or assumed."`
	Note   string `json:"note,omitempty" help:"Which letter, nameplate or record; or why it was assumed."`
}

// Point is a place on the single-line, in grid steps from the top left.
type Point struct {
	X float64 `json:"x" help:"Steps to the right."`
	Y float64 `json:"y" help:"Steps down."`
}

// Connection says between which conductors a shunt item stands.
type Connection string

// Three-phase, phase to neutral, and phase to phase.
const (
	ThreePhase Connection = "abc"
	PhaseA     Connection = "a"
	PhaseB     Connection = "b"
	PhaseC     Connection = "c"
	PhaseAB    Connection = "ab"
	PhaseBC    Connection = "bc"
	PhaseCA    Connection = "ca"
)

// Supply is the utility: an EMF behind the fault impedance.
type Supply struct {
	Named
	Bus               string           `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus the supply feeds; the PCC as a rule."`
	FaultMVA          float64          `json:"faultMVA,omitempty" label:"Fault level" unit:"MVA" range:"(0,1e6]" typical:"20..5000" help:"Three-phase fault level; state this or the fault current."`
	FaultMinMVA       float64          `json:"faultMinMVA,omitempty" label:"Lowest fault level" unit:"MVA" range:"(0,1e6]" typical:"20..5000" default:"not stated" help:"Lowest three-phase fault level that occurs, for operating states."`
	FaultMaxMVA       float64          `json:"faultMaxMVA,omitempty" label:"Highest fault level" unit:"MVA" range:"(0,1e6]" typical:"20..5000" default:"not stated" help:"Highest three-phase fault level that occurs, for operating states."`
	FaultKA           float64          `json:"faultKA,omitempty" label:"Fault current" unit:"kA" range:"(0,1000]" typical:"1..63" help:"Three-phase fault current; state this or the fault level."`
	XOverR            float64          `json:"xOverR" label:"X/R" range:"[0.01,1000]" typical:"2..30" need:"yes" help:"Reactance over resistance of the fault impedance at order 1."`
	ZeroSequenceRatio float64          `json:"zeroSequenceRatio,omitempty" label:"Z0/Z1" range:"[0.01,100]" typical:"0.5..5" default:"no zero-sequence path" help:"Zero-sequence over positive-sequence impedance; absent when the supply neutral is not earthed."`
	VoltagePercent    float64          `json:"voltagePercent,omitempty" label:"EMF" unit:"%" range:"[50,150]" typical:"95..105" default:"100" help:"EMF behind the fault impedance, of the bus's nominal voltage."`
	AngleDeg          float64          `json:"angleDeg,omitempty" label:"EMF angle" unit:"deg" range:"[-360,360]" default:"0" help:"Angle of the positive-sequence EMF of phase a."`
	ResistanceLaw     string           `json:"resistanceLaw,omitempty" label:"R(h) law" choices:"constant|sqrt|linear|exponent" default:"constant" help:"How the resistance rises with the order h: as 1, sqrt(h), h, or h to the exponent."`
	ResistanceExp     float64          `json:"resistanceExponent,omitempty" label:"R(h) exponent" range:"[0,2]" help:"Exponent when the law is 'exponent'."`
	Background        []BackgroundLine `json:"background,omitempty" label:"Background distortion" help:"Open-circuit harmonic voltage of the supply, by order."`
	Noted
}

// BackgroundLine is one order of the supply's open-circuit distortion.
type BackgroundLine struct {
	Order    int      `json:"order" label:"Order" range:"[2,100]" need:"yes" help:"Harmonic order."`
	Percent  float64  `json:"percent" label:"Voltage" unit:"%" range:"[0,50]" typical:"0..6" help:"Of the nominal fundamental voltage."`
	AngleDeg *float64 `json:"angleDeg,omitempty" label:"Angle" unit:"deg" range:"[-360,360]" default:"unknown, computed as 0" help:"Angle against the fundamental EMF, cosine reference; absent when unknown."`
	Sequence string   `json:"sequence,omitempty" label:"Sequence" choices:"positive|negative|zero" default:"by order" help:"Sequence; by order number when absent."`
}

// Bus is a busbar or board.
type Bus struct {
	Named
	NominalKV float64 `json:"nominalKV" label:"Nominal voltage" unit:"kV" range:"[0.01,1200]" typical:"0.2..150" need:"yes" help:"Nominal line-to-line voltage."`
	Noted
}

// Transformer is a two-winding transformer; its impedance is a series
// branch on its own kVA and winding voltages.
type Transformer struct {
	Named
	HVBus            string  `json:"hvBus" label:"HV bus" ref:"bus" need:"yes" help:"Bus of the high-voltage winding."`
	LVBus            string  `json:"lvBus" label:"LV bus" ref:"bus" need:"yes" help:"Bus of the low-voltage winding."`
	RatedKVA         float64 `json:"ratedKVA" label:"Rated power" unit:"kVA" range:"(0,2e6]" typical:"25..63000" need:"yes" help:"Nameplate power."`
	HVKV             float64 `json:"hvKV" label:"HV winding" unit:"kV" range:"[0.01,1200]" need:"yes" help:"Rated line-to-line voltage of the high-voltage winding."`
	LVKV             float64 `json:"lvKV" label:"LV winding" unit:"kV" range:"[0.01,1200]" need:"yes" help:"Rated line-to-line voltage of the low-voltage winding."`
	ImpedancePercent float64 `json:"impedancePercent" label:"Impedance" unit:"%" range:"[0.1,40]" typical:"3.5..13" need:"yes" help:"Short-circuit impedance on own rating."`
	LoadLossKW       float64 `json:"loadLossKW,omitempty" label:"Load loss" unit:"kW" range:"(0,1e5]" help:"Copper loss at rated current; state this or X/R."`
	XOverR           float64 `json:"xOverR,omitempty" label:"X/R" range:"[0.1,200]" typical:"1.5..45" help:"Short-circuit reactance over resistance; state this or the load loss."`
	VectorGroup      string  `json:"vectorGroup" label:"Vector group" need:"yes" help:"IEC 60076 vector group such as Dyn11, YNd5, Yzn11, Dd0: high-voltage letter first, clock number last."`
	PhaseShiftDeg    float64 `json:"phaseShiftDeg,omitempty" label:"Extra phase shift" unit:"deg" range:"[-60,60]" typical:"-30..30" default:"0" help:"Phase-shifting types: degrees by which the low-voltage positive sequence lags beyond the clock number, such as +20 and -20 for 18 pulses."`
	NoLoadLossKW     float64 `json:"noLoadLossKW,omitempty" label:"No-load loss" unit:"kW" range:"(0,1e4]" default:"no magnetising branch" help:"Iron loss at rated voltage; with the no-load current it makes the magnetising branch, which is linear here."`
	NoLoadPercent    float64 `json:"noLoadCurrentPercent,omitempty" label:"No-load current" unit:"%" range:"(0,20]" typical:"0.2..3" default:"no magnetising branch" help:"At rated voltage, of rated current."`
	TapPercent       float64 `json:"tapPercent,omitempty" label:"Tap" unit:"%" range:"[-30,30]" typical:"-5..5" default:"0" help:"Tap position of the high-voltage winding: +5 means 5 % more turns there."`
	EddyExponent     float64 `json:"eddyExponent,omitempty" label:"R(h) exponent" range:"[0,2]" typical:"0..1.5" default:"0, constant R" help:"Resistance rises as h to this exponent."`
	ZeroRatio        float64 `json:"zeroSequenceRatio,omitempty" label:"Z0/Z1" range:"[0.01,20]" typical:"0.8..1" default:"1" help:"Zero-sequence over positive-sequence short-circuit impedance."`
	HVNeutralOhm     float64 `json:"hvNeutralOhm,omitempty" label:"HV neutral resistance" unit:"ohm" range:"[0,1e6]" default:"0, solidly earthed" help:"Resistance between an earthed high-voltage neutral and earth."`
	HVNeutralXOhm    float64 `json:"hvNeutralReactanceOhm,omitempty" label:"HV neutral reactance" unit:"ohm" range:"[0,1e6]" default:"0" help:"Reactance at order 1 between an earthed high-voltage neutral and earth."`
	LVNeutralOhm     float64 `json:"lvNeutralOhm,omitempty" label:"LV neutral resistance" unit:"ohm" range:"[0,1e6]" default:"0, solidly earthed" help:"Resistance between an earthed low-voltage neutral and earth."`
	LVNeutralXOhm    float64 `json:"lvNeutralReactanceOhm,omitempty" label:"LV neutral reactance" unit:"ohm" range:"[0,1e6]" default:"0" help:"Reactance at order 1 between an earthed low-voltage neutral and earth."`
	Noted
}

// Cable is a cable or an overhead line, per circuit and per kilometre.
type Cable struct {
	Named
	Kind         string  `json:"kind,omitempty" label:"Kind" choices:"cable|line" default:"cable" help:"Cable or overhead line."`
	From         string  `json:"from" label:"From" ref:"bus" need:"yes" help:"Bus at one end."`
	To           string  `json:"to" label:"To" ref:"bus" need:"yes" help:"Bus at the other end."`
	LengthM      float64 `json:"lengthM" label:"Length" unit:"m" range:"[0.5,1e6]" typical:"5..20000" need:"yes" help:"Route length; two bars closer than half a metre are one bus, or joined by a closed coupler."`
	Parallel     int     `json:"parallel,omitempty" label:"In parallel" range:"[1,50]" default:"1" help:"Number of equal circuits in parallel."`
	ROhmPerKm    float64 `json:"rOhmPerKm" label:"R'" unit:"ohm/km" range:"[0.001,100]" typical:"0.02..3" need:"yes" help:"Conductor resistance at order 1 and operating temperature."`
	XOhmPerKm    float64 `json:"xOhmPerKm" label:"X'" unit:"ohm/km" range:"(0,10]" typical:"0.06..0.45" need:"yes" help:"Positive-sequence reactance at order 1."`
	CNFPerKm     float64 `json:"cNFPerKm,omitempty" label:"C'" unit:"nF/km" range:"[0,5000]" typical:"5..800" default:"0" help:"Positive-sequence shunt capacitance."`
	R0OhmPerKm   float64 `json:"r0OhmPerKm,omitempty" label:"R0'" unit:"ohm/km" range:"(0,200]" default:"4 x R'" help:"Zero-sequence resistance with its return path."`
	X0OhmPerKm   float64 `json:"x0OhmPerKm,omitempty" label:"X0'" unit:"ohm/km" range:"(0,40]" default:"3 x X'" help:"Zero-sequence reactance with its return path."`
	C0NFPerKm    float64 `json:"c0NFPerKm,omitempty" label:"C0'" unit:"nF/km" range:"[0,5000]" default:"C'" help:"Zero-sequence shunt capacitance."`
	Skin         string  `json:"skin,omitempty" label:"Skin effect" choices:"none|round|iec60287" default:"round" help:"Law for the rise of R with frequency: round conductor (Bessel functions), the IEC 60287-1-1 form, or none."`
	Form         string  `json:"form,omitempty" label:"Form" choices:"pi|exact" default:"pi" help:"Nominal pi, or the exact hyperbolic form for long cables and lines at high orders."`
	ConductorMM2 float64 `json:"conductorMM2,omitempty" label:"Conductor" unit:"mm2" range:"(0,3000]" typical:"1.5..1000" help:"Cross-section; informative."`
	AmpacityA    float64 `json:"ampacityA,omitempty" label:"Ampacity" unit:"A" range:"(0,20000]" help:"Permissible current of one circuit as installed."`
	Noted
}

// Reactor is a series reactor between two buses.
type Reactor struct {
	Named
	From         string  `json:"from" label:"From" ref:"bus" need:"yes" help:"Bus at one end."`
	To           string  `json:"to" label:"To" ref:"bus" need:"yes" help:"Bus at the other end."`
	InductanceMH float64 `json:"inductanceMH" label:"Inductance" unit:"mH" range:"(0,1e4]" need:"yes" help:"Inductance of one phase."`
	Q            float64 `json:"q,omitempty" label:"X/R at order 1" range:"[0.1,1000]" typical:"20..100" default:"50" help:"Reactance over resistance at order 1."`
	RatedA       float64 `json:"ratedA,omitempty" label:"Rated current" unit:"A" range:"(0,1e5]" help:"Rated rms current."`
	Noted
}

// Coupler is a bus coupler or tie switch: closed, its two buses are one.
type Coupler struct {
	Named
	From   string `json:"from" label:"From" ref:"bus" need:"yes" help:"Bus on one side."`
	To     string `json:"to" label:"To" ref:"bus" need:"yes" help:"Bus on the other side."`
	Closed bool   `json:"closed" label:"Closed" help:"Closed makes one bus of the two."`
	Noted
}

// Load is a linear load.
type Load struct {
	Named
	Bus        string     `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus it stands on."`
	Connection Connection `json:"connection,omitempty" label:"Connection" choices:"abc|a|b|c|ab|bc|ca" default:"abc" help:"Three-phase, one phase to neutral, or phase to phase."`
	KW         float64    `json:"kW" label:"Active power" unit:"kW" range:"[0,1e6]" help:"At nominal voltage."`
	Kvar       float64    `json:"kvar,omitempty" label:"Reactive power" unit:"kvar" range:"[-1e6,1e6]" default:"0" help:"Lagging is positive."`
	AtOrder1   string     `json:"atOrder1,omitempty" label:"At order 1" choices:"impedance|power|current" default:"impedance" help:"Constant impedance, power or current at order 1."`
	Model      string     `json:"model,omitempty" label:"At other orders" choices:"series|parallel|cigre|open" default:"parallel" help:"Passive model above order 1: R and L in series or in parallel, the CIGRE three-element form, or no damping at all."`
	Noted
}

// Motor is a group of induction motors on the line.
type Motor struct {
	Named
	Bus              string  `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus they stand on."`
	RatedKVA         float64 `json:"ratedKVA" label:"Rated input" unit:"kVA" range:"(0,1e6]" need:"yes" help:"Sum of the rated input powers."`
	KW               float64 `json:"kW" label:"Active power" unit:"kW" range:"[0,1e6]" need:"yes" help:"Drawn in the state studied."`
	Kvar             float64 `json:"kvar,omitempty" label:"Reactive power" unit:"kvar" range:"[0,1e6]" help:"Drawn in the state studied."`
	LockedRotorRatio float64 `json:"lockedRotorRatio,omitempty" label:"Locked-rotor current" unit:"x rated" range:"[1,15]" typical:"4..8" default:"6" help:"Locked-rotor current over rated current."`
	LockedRotorXR    float64 `json:"lockedRotorXOverR,omitempty" label:"Locked-rotor X/R" range:"[0.1,50]" typical:"2..10" default:"5" help:"Reactance over resistance with the rotor locked."`
	ResistanceExp    float64 `json:"resistanceExponent,omitempty" label:"R(h) exponent" range:"[0,2]" typical:"0..1" default:"0.5" help:"Locked-rotor resistance rises as h to this exponent."`
	Noted
}

// Generator is a synchronous generator in parallel with a supply.
type Generator struct {
	Named
	Bus          string  `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus it feeds."`
	RatedKVA     float64 `json:"ratedKVA" label:"Rated power" unit:"kVA" range:"(0,2e6]" typical:"20..50000" need:"yes" help:"Nameplate power."`
	KW           float64 `json:"kW,omitempty" label:"Active power" unit:"kW" range:"[0,2e6]" default:"0" help:"Delivered in the state studied."`
	Kvar         float64 `json:"kvar,omitempty" label:"Reactive power" unit:"kvar" range:"[-2e6,2e6]" default:"0" help:"Delivered in the state studied."`
	Subtransient float64 `json:"subtransientPercent" label:"X\"d" unit:"%" range:"[1,100]" typical:"9..25" need:"yes" help:"Subtransient reactance on own rating and the bus's nominal voltage."`
	Negative     float64 `json:"negativePercent,omitempty" label:"X2" unit:"%" range:"[1,100]" typical:"9..25" default:"X\"d" help:"Negative-sequence reactance."`
	ZeroPercent  float64 `json:"zeroPercent,omitempty" label:"X0" unit:"%" range:"(0,100]" typical:"2..12" default:"star point not earthed" help:"Zero-sequence reactance; stated only when the star point is earthed."`
	NeutralOhm   float64 `json:"neutralOhm,omitempty" label:"Neutral resistance" unit:"ohm" range:"[0,1e6]" default:"0, solidly earthed" help:"Between an earthed star point and earth."`
	XOverR       float64 `json:"xOverR,omitempty" label:"X\"d/R" range:"[1,500]" typical:"10..60" default:"30" help:"Subtransient reactance over armature resistance at order 1."`
	Noted
}

// NonlinearLoad draws a harmonic spectrum.
type NonlinearLoad struct {
	Named
	Bus          string         `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus it stands on."`
	Connection   Connection     `json:"connection,omitempty" label:"Connection" choices:"abc|a|b|c|ab|bc|ca" default:"abc" help:"Three-phase, one phase to neutral, or phase to phase."`
	FourWire     bool           `json:"fourWire,omitempty" label:"Uses the neutral" help:"Three-phase only: the group is three single-phase loads to neutral, so triplen orders flow; without it the zero sequence is left out."`
	KW           float64        `json:"kW,omitempty" label:"Active power" unit:"kW" range:"(0,1e6]" help:"Fundamental active power; state this or the current."`
	Displacement float64        `json:"displacementFactor,omitempty" label:"Displacement factor" range:"[0.05,1]" typical:"0.8..1" default:"1" help:"Cosine of the fundamental angle, lagging."`
	CurrentA     float64        `json:"currentA,omitempty" label:"Fundamental current" unit:"A" range:"(0,1e6]" help:"Fixed fundamental current in each line instead of a power."`
	Spectrum     string         `json:"spectrum" label:"Spectrum" need:"yes" help:"Name of a typical spectrum, or 'typed' for the lines below."`
	Lines        []SpectrumLine `json:"lines,omitempty" label:"Spectrum lines" help:"Typed or pasted spectrum, in per cent of order 1."`
	Noted
}

// Typed is the Spectrum word for a spectrum given line by line.
const Typed = "typed"

// SpectrumLine is one order of a typed current spectrum.
type SpectrumLine struct {
	Order    int     `json:"order" label:"Order" range:"[0,100]" help:"Harmonic order; 0 is the direct current."`
	Percent  float64 `json:"percent" label:"Current" unit:"%" range:"[0,1000]" help:"Of the load's own order 1 current."`
	AngleDeg float64 `json:"angleDeg,omitempty" label:"Angle" unit:"deg" range:"[-360,360]" default:"0" help:"Cosine reference; the current's angle is this plus the order times the angle of the fundamental voltage at the load."`
}

// Bank is a shunt capacitor bank. A detuned bank's kvar is the output of the
// whole branch.
type Bank struct {
	Named
	Bus             string  `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus it stands on."`
	Kvar            float64 `json:"kvar" label:"Output" unit:"kvar" range:"(0,1e6]" typical:"5..20000" need:"yes" help:"Output of the whole branch at order 1 and the stated voltage."`
	AtKV            float64 `json:"atKV,omitempty" label:"At voltage" unit:"kV" range:"[0.01,1200]" default:"bus nominal" help:"Line-to-line voltage at which the output is stated."`
	Connection      string  `json:"connection,omitempty" label:"Connection" choices:"delta|star|earthed-star" default:"delta" help:"Delta, star, or star with earthed star point."`
	DetuningPercent float64 `json:"detuningPercent,omitempty" label:"Detuning" unit:"%" range:"(0,50]" typical:"5..14" default:"none" help:"Reactor reactance over capacitor reactance at order 1; 7 % tunes to order 3.78."`
	ReactorQ        float64 `json:"reactorQ,omitempty" label:"Reactor X/R" range:"[1,1000]" typical:"20..100" default:"50" help:"Detuning reactor's reactance over resistance at order 1."`
	LossWPerKvar    float64 `json:"lossWPerKvar,omitempty" label:"Capacitor loss" unit:"W/kvar" range:"[0,20]" typical:"0.2..1" default:"0.2" help:"Dielectric and resistive loss of the capacitor."`
	RatedKV         float64 `json:"ratedKV,omitempty" label:"Capacitor rating" unit:"kV" range:"[0.01,1200]" default:"next preferred voltage above the duty" help:"Rated line-to-line voltage of the capacitors; a detuned bank needs more than the bus."`
	Noted
}

// Filter is a passive shunt filter.
type Filter struct {
	Named
	Bus        string  `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus it stands on."`
	Kind       string  `json:"kind" label:"Kind" choices:"single-tuned|double-tuned|first-order|high-pass|third-order|c-type" need:"yes" help:"Single- or double-tuned; first-, second- (high-pass) or third-order high-pass; C-type."`
	Kvar       float64 `json:"kvar" label:"Output" unit:"kvar" range:"(0,1e6]" typical:"20..20000" need:"yes" help:"Output of the whole branch at order 1 and the stated voltage."`
	AtKV       float64 `json:"atKV,omitempty" label:"At voltage" unit:"kV" range:"[0.01,1200]" default:"bus nominal" help:"Line-to-line voltage at which the output is stated."`
	Order      float64 `json:"order" label:"Tuned order" range:"(1,100]" typical:"2.5..25" need:"yes" help:"Order of lowest impedance of the tuned branch."`
	Order2     float64 `json:"order2,omitempty" label:"Second order" range:"(1,100]" typical:"5..25" for:"double-tuned" help:"Higher tuned order of a double-tuned filter."`
	Q          float64 `json:"q,omitempty" label:"Quality factor" range:"[0.1,500]" typical:"0.5..100" for:"single-tuned|double-tuned|high-pass|third-order|c-type" default:"40 tuned, 3 high-pass, 2 C-type" help:"Tuned: X/R of the reactor at the tuned order. High-pass and C-type: R over reactance at the tuned order."`
	RatedKV    float64 `json:"ratedKV,omitempty" label:"Capacitor rating" unit:"kV" range:"[0.01,1200]" default:"next preferred voltage above the duty" help:"Rated line-to-line voltage of the capacitors."`
	Connection string  `json:"connection,omitempty" label:"Connection" choices:"star|earthed-star|delta" default:"star" help:"Only an earthed star passes the zero sequence."`
	Noted
}

// The kinds of measure.
const (
	SingleTuned  = "single-tuned"
	DoubleTuned  = "double-tuned"
	FirstOrder   = "first-order"
	HighPass     = "high-pass"
	ThirdOrder   = "third-order"
	CType        = "c-type"
	DetuneBank   = "detune-bank"
	RemoveBank   = "remove-bank"
	ActiveFilter = "active-filter"
	LineReactor  = "line-reactor"
	LowPassRC    = "low-pass-rc"
	LowPassLC    = "low-pass-lc"
)

// Measure is a change to the study that can be flipped.
type Measure struct {
	Named
	Kind     string   `json:"kind" label:"Kind" choices:"single-tuned|double-tuned|first-order|high-pass|third-order|c-type|detune-bank|remove-bank|active-filter|line-reactor|low-pass-rc|low-pass-lc" need:"yes" help:"What the measure does."`
	On       bool     `json:"on" label:"On" help:"Position of its switch."`
	Bus      string   `json:"bus,omitempty" label:"Bus" ref:"bus" for:"single-tuned|double-tuned|first-order|high-pass|third-order|c-type|active-filter" help:"Bus where it stands."`
	Target   string   `json:"target,omitempty" label:"Acts on" ref:"bank|nonlinearLoad|load" for:"detune-bank|remove-bank|line-reactor|low-pass-rc|low-pass-lc" help:"Bank or load that it changes."`
	Kvar     float64  `json:"kvar,omitempty" label:"Output" unit:"kvar" range:"(0,1e6]" for:"single-tuned|double-tuned|first-order|high-pass|third-order|c-type" help:"Output of the whole branch at order 1 and the bus's nominal voltage."`
	Order    float64  `json:"order,omitempty" label:"Tuned order" range:"(1,100]" typical:"2.5..25" for:"single-tuned|double-tuned|first-order|high-pass|third-order|c-type" help:"Order of lowest impedance of the tuned branch."`
	Order2   float64  `json:"order2,omitempty" label:"Second order" range:"(1,100]" typical:"5..25" for:"double-tuned" help:"Higher tuned order of a double-tuned filter."`
	Q        float64  `json:"q,omitempty" label:"Quality factor" range:"[0.1,500]" typical:"0.5..100" default:"40 tuned, 3 high-pass, 2 C-type" for:"single-tuned|double-tuned|high-pass|third-order|c-type" help:"Tuned: X/R of the reactor at the tuned order. High-pass and C-type: R over reactance at the tuned order."`
	RatedKV  float64  `json:"ratedKV,omitempty" label:"Capacitor rating" unit:"kV" range:"[0.01,1200]" default:"next preferred voltage above the duty" for:"single-tuned|double-tuned|first-order|high-pass|third-order|c-type|detune-bank" help:"Rated line-to-line voltage of the capacitors."`
	Percent  float64  `json:"percent,omitempty" label:"Reactor" unit:"%" range:"(0,50]" for:"detune-bank|line-reactor" help:"Detuning p of the bank, or reactance of the line reactor on the load's own rating."`
	RatedA   float64  `json:"ratedA,omitempty" label:"Rated current" unit:"A" range:"(0,1e5]" for:"active-filter" help:"Rated rms current in each line."`
	MaxOrder int      `json:"maxOrder,omitempty" label:"Order ceiling" range:"[2,100]" default:"25" for:"active-filter" help:"Highest order that it compensates."`
	Share    float64  `json:"sharePercent,omitempty" label:"Share removed" unit:"%" range:"(0,100]" typical:"70..97" default:"90" for:"active-filter" help:"Share of the sensed harmonic current that it removes at each order up to the ceiling."`
	Shares   []Share  `json:"shares,omitempty" label:"Shares by order" for:"active-filter" help:"Orders whose share differs."`
	Senses   []string `json:"senses,omitempty" label:"Senses" ref:"nonlinearLoad" for:"active-filter" default:"every non-linear load on its bus" help:"Non-linear loads whose current it senses."`
	ROhm     float64  `json:"rOhm,omitempty" label:"Series resistance" unit:"ohm" range:"(0,1e6]" for:"low-pass-rc" help:"Series resistance of the R-C low-pass."`
	LMH      float64  `json:"lMH,omitempty" label:"Series inductance" unit:"mH" range:"(0,1e5]" for:"low-pass-lc" help:"Series inductance of the L-C low-pass."`
	CUF      float64  `json:"cUF,omitempty" label:"Shunt capacitance" unit:"uF" range:"(0,1e6]" for:"low-pass-rc|low-pass-lc" help:"Capacitance across the outlet, phase to neutral."`
	Replaces []string `json:"replaces,omitempty" label:"Replaces" ref:"bank|filter" help:"Banks or filters that are taken out when it is on."`
	Excludes []string `json:"excludes,omitempty" label:"Not together with" ref:"measure" help:"Measures that cannot be on with it."`
	Cost     float64  `json:"cost,omitempty" label:"Cost" range:"[0,1e12]" help:"Capital cost, in the study's own currency."`
	Noted
}

// Share is the share of the sensed current an active filter removes at one order.
type Share struct {
	Order   int     `json:"order" label:"Order" range:"[2,100]" need:"yes" help:"Harmonic order."`
	Percent float64 `json:"percent" label:"Share removed" unit:"%" range:"[0,100]" help:"Share removed at this order."`
}

// Assessment applies one limit set at one bus.
type Assessment struct {
	Named
	Bus     string  `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus that is assessed."`
	Set     string  `json:"set" label:"Limit set" need:"yes" help:"Identifier of the limit set, such as ieee519-2022 or iec61000-2-4-class2, or the name of one of your own."`
	Current string  `json:"current,omitempty" label:"Current of" ref:"supply|transformer|cable|reactor|nonlinearLoad" help:"Branch whose current into the site is assessed, at the end nearest the bus; a supply as a rule. For a set that limits equipment: the non-linear load. Absent: only the voltage is assessed."`
	IscKA   float64 `json:"iscKA,omitempty" label:"Isc" unit:"kA" range:"(0,1000]" default:"from the supplies' fault level" help:"Maximum short-circuit current at the point."`
	DemandA float64 `json:"demandA,omitempty" label:"IL" unit:"A" range:"(0,1e6]" help:"Maximum demand load current, fundamental. Without it currents are not assessed. For a set that limits equipment: its rated current Iref; the computed one when absent."`
	Noted
}

// ScanRequest asks for one driving-point or transfer impedance scan in the
// results.
type ScanRequest struct {
	Named
	Bus      string  `json:"bus" label:"Bus" ref:"bus" need:"yes" help:"Bus that is looked into."`
	At       string  `json:"at,omitempty" label:"Voltage at" ref:"bus" default:"the bus itself" help:"Transfer impedance: the bus whose voltage is taken for a current into the first."`
	Sequence string  `json:"sequence,omitempty" label:"Sequence" choices:"positive|negative|zero" default:"positive" help:"Sequence network."`
	From     float64 `json:"fromOrder,omitempty" label:"From order" range:"[0.1,100]" default:"1" help:"First order."`
	To       float64 `json:"toOrder,omitempty" label:"To order" range:"[0.1,100]" default:"highest order" help:"Last order."`
	Noted
}

// Order returns the highest order that is computed.
func (s *Study) Order() int {
	if s.MaxOrder == 0 {
		return phasor.DefaultOrder
	}
	return s.MaxOrder
}
