package converter

// Kind is a type of converter.
type Kind string

// The converters that Solve computes.
const (
	KindDiodeBridge        Kind = "diode-bridge"        // three-phase six-pulse bridge
	KindThyristorBridge    Kind = "thyristor-bridge"    // the same with thyristors and a firing angle
	KindSinglePhaseBridge  Kind = "single-phase-bridge" // diode bridge on one phase or between two
	KindSinglePhaseFired   Kind = "single-phase-fired"  // thyristor bridge on one phase or between two
	KindHalfWave           Kind = "half-wave"           // one diode
	KindTwelvePulse        Kind = "twelve-pulse"        // bridges behind phase-shifting windings
	KindEighteenPulse      Kind = "eighteen-pulse"
	KindTwentyFourPulse    Kind = "twenty-four-pulse"
	KindControlledReactor  Kind = "controlled-reactor"  // thyristor-controlled reactor
	KindControlledResistor Kind = "controlled-resistor" // phase-controlled heater
	KindActiveFrontEnd     Kind = "active-front-end"    // switching converter with sinusoidal current
)

// Connection says between which conductors a converter stands.
type Connection string

// Three-phase without neutral, three single-phase units to neutral, one phase
// to neutral, and phase to phase. ABC is the default of three-phase kinds,
// PhaseA of the others. For the ac controllers ABC is a delta, ABCN a star
// with neutral and ABCStar a star without.
const (
	ABC     Connection = "abc"
	ABCN    Connection = "abcn"
	ABCStar Connection = "abc-star"
	PhaseA  Connection = "a"
	PhaseB  Connection = "b"
	PhaseC  Connection = "c"
	PhaseAB Connection = "ab"
	PhaseBC Connection = "bc"
	PhaseCA Connection = "ca"
)

// Smoothing is what smooths the direct side of a rectifier.
type Smoothing string

// A capacitor (behind the choke, if there is one), or only the choke.
const (
	ByCapacitor Smoothing = "capacitor"
	ByChoke     Smoothing = "choke"
)

// LoadKind is how the load on the direct side behaves.
type LoadKind string

// Constant power as most motor inverters draw it: a smooth current of the size
// at which the mean power is PowerW whatever the voltage; constant power held
// at every instant, as an inverter does that corrects the ripple of its direct
// voltage (i = p - v P/V^2, the tangent at the mean voltage V, p for the mean
// power); a resistance; a motor armature (resistance, inductance and back EMF,
// which takes the value at which PowerW reaches the shaft); a fixed direct
// current.
const (
	ConstantPower LoadKind = "power"
	TightPower    LoadKind = "tight-power"
	Resistive     LoadKind = "resistance"
	Motor         LoadKind = "motor"
	FixedCurrent  LoadKind = "current"
)

// Nameplate is what is known of one converter, in V, A, W, ohm, H, F, degrees.
// A value of zero means that the part is absent, unless said otherwise.
type Nameplate struct {
	Kind       Kind
	Connection Connection
	VoltageV   float64 // rated line-to-line voltage of the system, rms

	// PowerW is the power into the load behind the rectifier. Ac controllers:
	// power (W) or reactive power (var) at full conduction and rated voltage.
	PowerW float64

	// FiringDeg is the firing angle: bridges from the natural commutation
	// point, ac controllers from the zero of the voltage across the valve.
	FiringDeg float64

	ReactorH, ReactorOhm float64 // in each line
	Smoothing            Smoothing
	ChokeH, ChokeOhm     float64 // in the direct current
	CapacitorF           float64
	DropV                float64 // forward drop of one valve

	Load         LoadKind
	LoadOhm      float64 // Resistive; zero: drawn from PowerW at the ideal direct voltage
	DirectA      float64 // FixedCurrent; zero: PowerW over the ideal direct voltage
	ArmatureOhm  float64 // Motor
	ArmatureH    float64
	Sections     []Section // multi-pulse: deviations of each bridge; none: as designed
	SeparateLink bool      // multi-pulse: each bridge has a capacitor and load of its own

	Front FrontEnd // KindActiveFrontEnd
}

// Section is one bridge of a multi-pulse converter with its winding. All
// impedances are referred to the line side.
type Section struct {
	ShiftDeg   float64 // phase shift of its winding against the line, as built
	Ratio      float64 // secondary voltage over the line voltage; zero: 1
	LeakageH   float64 // leakage inductance of its winding, per phase
	LeakageOhm float64
	ChokeH     float64 // own choke or half interphase reactor in its direct current
	ChokeOhm   float64
	Share      float64 // SeparateLink: relative share of PowerW on this bridge; all zero: equal
}

// phases reports whether the kind has a three-phase unit by nature.
func (k Kind) threePhase() bool {
	switch k {
	case KindSinglePhaseBridge, KindSinglePhaseFired, KindHalfWave:
		return false
	}
	return true
}

// sections is the number of bridges of a multi-pulse kind, 0 for others.
func (k Kind) sections() int {
	switch k {
	case KindTwelvePulse:
		return 2
	case KindEighteenPulse:
		return 3
	case KindTwentyFourPulse:
		return 4
	}
	return 0
}

// Shifts returns the winding shifts, degrees, by which bridges add up to a
// multi-pulse converter: spaced by 60/n.
func (k Kind) Shifts() []float64 {
	switch k {
	case KindTwelvePulse:
		return []float64{0, 30}
	case KindEighteenPulse:
		return []float64{-20, 0, 20}
	case KindTwentyFourPulse:
		return []float64{-22.5, -7.5, 7.5, 22.5}
	}
	return nil
}

// withDefaults fills in the words that were left empty.
func (n Nameplate) withDefaults() Nameplate {
	if n.Connection == "" {
		n.Connection = PhaseA
		if n.Kind.threePhase() {
			n.Connection = ABC
		}
	}
	if n.Smoothing == "" {
		n.Smoothing = ByCapacitor
		if n.CapacitorF == 0 && n.ChokeH > 0 {
			n.Smoothing = ByChoke
		}
	}
	if n.Load == "" {
		n.Load = ConstantPower
	}
	if count := n.Kind.sections(); count > 0 {
		shifts, own := n.Kind.Shifts(), len(n.Sections) == count
		sections := make([]Section, count)
		for i := range sections {
			sections[i].ShiftDeg = shifts[i]
			if own {
				sections[i] = n.Sections[i]
			}
			if sections[i].Ratio == 0 {
				sections[i].Ratio = 1
			}
		}
		if len(n.Sections) > 0 && !own {
			return n // refused by check
		}
		n.Sections = sections
		var total float64
		for _, s := range n.Sections {
			total += s.Share
		}
		for i := range n.Sections {
			if s := &n.Sections[i]; total == 0 {
				s.Share = 1 / float64(len(n.Sections))
			} else {
				s.Share /= total
			}
		}
	}
	return n
}

// volts is the rated rms voltage across the connection of one unit.
func (n Nameplate) volts() float64 {
	switch n.Connection {
	case PhaseA, PhaseB, PhaseC, ABCN:
		return n.VoltageV / sqrt3
	}
	return n.VoltageV
}

// idealDirect is the ideal mean direct voltage at rated voltage.
func (n Nameplate) idealDirect() float64 {
	switch n.Kind {
	case KindSinglePhaseBridge, KindSinglePhaseFired:
		return 0.900316316157106 * n.volts() // 2 sqrt(2)/pi
	case KindHalfWave:
		return 0.450158158078553 * n.volts() // sqrt(2)/pi
	}
	return 1.35047447423566 * n.VoltageV // 3 sqrt(2)/pi
}

const sqrt3 = 1.7320508075688772
