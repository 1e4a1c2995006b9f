// Package converter says what current a non-linear load draws: typical spectra
// by kind, closed forms, and the time-domain steady state from nameplate data.
//
// Spectra are in per cent of the load's own order 1 current. Angles refer to
// the cosine and to the fundamental voltage at the load's terminals; currents
// are positive into the load.
package converter

// Line is one order of a typical spectrum.
type Line struct {
	Order    int     // 0 is the direct current
	Percent  float64 // of order 1
	AngleDeg float64
}

// Model is a typical spectrum with its origin.
type Model struct {
	Name       string // word in the study file
	Title      string // words on screen and in print
	Lines      []Line // rising order, without order 1
	ThreePhase bool   // drawn by a three-phase load
	Source     string // document, or "typical, from memory"
	Mark       string // "found", "memory" or "derived"
}

const (
	handbook  = "Dugan, McGranaghan, Santoso, Beaty, Electrical Power Systems Quality, 2nd ed."
	reactance = "trade table of drive input current against total reactance; angles: ideal six-pulse series"
	typically = "typical, from memory"
)

// sixPulseAngle is the angle of order h in the ideal six-pulse current of a
// star-star connected bridge: cos t - 1/5 cos 5t + 1/7 cos 7t - 1/11 cos 11t ...
func sixPulseAngle(h int) float64 {
	if h%6 == 5 {
		return 180
	}
	return 0
}

// crest returns a pulse at the crest of the voltage, as a capacitor-smoothed
// single-phase bridge draws it: every order is in phase there, so each angle
// against the cosine is zero.
func crest(percent map[int]float64) []Line { return lines(percent, func(int) float64 { return 0 }) }

func bridge(percent map[int]float64) []Line { return lines(percent, sixPulseAngle) }

func lines(percent map[int]float64, angle func(int) float64) []Line {
	var out []Line
	for h := 0; h <= 50; h++ {
		if p := percent[h]; p > 0 {
			out = append(out, Line{Order: h, Percent: p, AngleDeg: angle(h)})
		}
	}
	return out
}

// Typical returns every typical spectrum in the order of a list on screen.
func Typical() []Model {
	return []Model{
		named("six-pulse", "Six-pulse bridge, no reactor", WithReactance(noReactor)),
		named("six-pulse-3pct", "Six-pulse bridge, 3 % reactor", WithReactance(3)),
		named("six-pulse-5pct", "Six-pulse bridge, 5 % reactor", WithReactance(5)),
		{Name: "six-pulse-smooth", Title: "Six-pulse bridge, inductive smoothing", ThreePhase: true, Mark: "memory",
			Source: "IEEE 519-1992 Table 13.1, typical column; angles: ideal six-pulse series",
			Lines:  bridge(map[int]float64{5: 17.5, 7: 11, 11: 4.5, 13: 2.9, 17: 1.5, 19: 1, 23: 0.9, 25: 0.8})},
		{Name: "dc-drive", Title: "Thyristor dc drive, six-pulse", ThreePhase: true, Mark: "memory",
			Source: handbook + ", dc drive; angles: ideal six-pulse series",
			Lines:  bridge(map[int]float64{5: 33.6, 7: 1.6, 11: 8.7, 13: 1.2, 17: 4.5, 19: 1.3, 23: 2.7, 25: 1.2})},
		{Name: "twelve-pulse", Title: "Twelve-pulse converter", ThreePhase: true, Mark: "memory",
			Source: "handbook table commonly reprinted beside the six-pulse one, from memory; angles: ideal six-pulse series",
			Lines:  bridge(map[int]float64{5: 2.6, 7: 1.6, 11: 7.3, 13: 5.7, 17: 0.2, 19: 0.1, 23: 2, 25: 1.6})},
		{Name: "eighteen-pulse", Title: "Eighteen-pulse converter", ThreePhase: true, Mark: "memory",
			Source: "handbook table commonly reprinted beside the six-pulse one, from memory; angles: ideal six-pulse series",
			Lines:  bridge(map[int]float64{5: 2.1, 7: 1.1, 11: 0.7, 13: 0.5, 17: 4.5, 19: 3.9, 23: 0.5, 25: 0.3})},
		{Name: "active-front-end", Title: "Active front end", ThreePhase: true, Mark: "memory",
			Source: typically + ": THD 3 to 5 %, shares by order assumed; switching-frequency lines left out",
			Lines:  bridge(map[int]float64{5: 2.5, 7: 2, 11: 1.2, 13: 1, 17: 0.7, 19: 0.6, 23: 0.5, 25: 0.4})},
		{Name: "ups", Title: "UPS, double conversion with corrected input", ThreePhase: true, Mark: "memory",
			Source: typically + ": THD about 5 %, shares by order assumed",
			Lines:  bridge(map[int]float64{5: 3.5, 7: 2.5, 11: 1.6, 13: 1.2, 17: 0.8, 19: 0.6})},
		{Name: "ev-charger", Title: "EV charger, active rectifier", ThreePhase: true, Mark: "memory",
			Source: typically + ": THD about 8 % near full power, shares by order assumed",
			Lines:  bridge(map[int]float64{5: 5.5, 7: 3.8, 11: 2.6, 13: 2, 17: 1.3, 19: 1, 23: 0.7, 25: 0.6})},
		{Name: "single-phase-supply", Title: "Switched supply, single-phase, uncorrected", Mark: "memory",
			Source: handbook + ", switch-mode supply; angles: pulse at the crest of the voltage",
			Lines:  crest(map[int]float64{3: 81, 5: 60.6, 7: 37, 9: 15.7, 11: 2.4, 13: 6.3, 15: 7.9})},
		{Name: "led-lighting", Title: "LED lighting, corrected drivers", Mark: "memory",
			Source: typically + ": THD 8 to 25 % with correction, shares by order assumed; angles: pulse at the crest of the voltage",
			Lines:  crest(map[int]float64{3: 14, 5: 7, 7: 4.5, 9: 3, 11: 2, 13: 1.5, 15: 1})},
		{Name: "electronic-ballast", Title: "Fluorescent lighting, electronic ballast", Mark: "memory",
			Source: handbook + ", electronic ballast; angles: pulse at the crest of the voltage",
			Lines:  crest(map[int]float64{2: 0.2, 3: 19.9, 5: 7.4, 7: 3.2, 9: 2.4, 11: 1.8, 13: 0.8, 15: 0.4, 17: 0.1, 19: 0.2, 21: 0.1})},
		{Name: "half-wave", Title: "Half-wave rectifier, resistive load", Mark: "derived",
			Source: "Fourier series of the half-wave rectified sine", Lines: halfWave(50)},
		{Name: "arc-furnace-melting", Title: "Arc furnace, melting", ThreePhase: true, Mark: "memory",
			Source: "IEEE 519-1992 Table 4.1; angles not stated, taken as zero",
			Lines:  crest(map[int]float64{2: 7.7, 3: 5.8, 4: 2.5, 5: 4.2, 7: 3.1})},
	}
}

func named(name, title string, m Model) Model {
	m.Name, m.Title = name, title
	return m
}

// Lookup returns the typical spectrum of a name.
func Lookup(name string) (Model, bool) {
	for _, m := range typical {
		if m.Name == name {
			return m, true
		}
	}
	return Model{}, false
}

var typical = Typical()
