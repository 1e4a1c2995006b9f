// Package converter says what current a non-linear load draws: typical spectra
// by kind, closed forms, and the time-domain steady state from nameplate data.
//
// Spectra are in per cent of the load's own order 1 current. Angles refer to
// the cosine and to the fundamental voltage at the load's terminals; currents
// are positive into the load.
package converter

import (
	"slices"
	"sync"
)

// Line is one order of a typical spectrum.
type Line struct {
	Order    int     // 0 is the direct current
	Percent  float64 // of the rms value of order 1
	AngleDeg float64 // -180 (not included) to 180
}

// Model is a typical spectrum with its origin.
type Model struct {
	Name       string // word in the study file
	Title      string // words on screen and in print
	Lines      []Line // rising order, without order 1
	ThreePhase bool   // drawn by a three-phase load
	Source     string // document, or "typical, from memory", and where the angles are from
	Mark       string // "found", "memory" or "derived", of the magnitudes
}

const (
	handbook  = "Dugan, McGranaghan, Santoso, Beaty, Electrical Power Systems Quality, 2nd ed."
	typically = "typical, from memory"

	// How each group of kinds comes by its angles.
	series = "; angles: signs of the ideal six-pulse series, -1/5 +1/7 -1/11 +1/13 ..., firing angle 0"
	pulse  = "; angles: those of a current pulse at the crest of the voltage"
	stiff  = "; angles: own calculation of a diode bridge with stiff direct voltage behind the same reactance, against the voltage behind it"
)

// sixPulseAngle is the angle of order h in the ideal six-pulse current of a
// bridge in the star-star position: cos t - 1/5 cos 5t + 1/7 cos 7t - 1/11 cos
// 11t + 1/13 cos 13t ... A delta-star transformer in front turns it into the
// other pattern by itself, since the angles go with the terminal voltage.
func sixPulseAngle(h int) float64 {
	if h%6 == 5 {
		return 180
	}
	return 0
}

func atCrest(int) float64 { return 0 }

// narrowPulse is the sign of order h of a pulse at the crest that is so narrow
// that its spectrum first passes through zero at about order 12.
func narrowPulse(h int) float64 {
	if h > 12 {
		return 180
	}
	return 0
}

// lines orders a spectrum given as per cent by order.
func lines(percent map[int]float64, angle func(int) float64) []Line {
	out := make([]Line, 0, len(percent))
	for h, p := range percent {
		out = append(out, Line{Order: h, Percent: p, AngleDeg: angle(h)})
	}
	slices.SortFunc(out, func(a, b Line) int { return a.Order - b.Order })
	return out
}

// typical is made once; its models are shared and never written to.
var typical = sync.OnceValue(func() []Model {
	return append(threePhase(), singlePhase()...)
})

func threePhase() []Model {
	bridge := func(name, title, mark, source string, percent map[int]float64) Model {
		return Model{Name: name, Title: title, ThreePhase: true, Mark: mark, Source: source + series, Lines: lines(percent, sixPulseAngle)}
	}
	return []Model{
		named("six-pulse", "Six-pulse drive, no reactor", WithReactance(noReactor)),
		named("six-pulse-3pct", "Six-pulse drive, 3 % reactor", WithReactance(3)),
		named("six-pulse-5pct", "Six-pulse drive, 5 % reactor", WithReactance(5)),
		bridge("six-pulse-smooth", "Six-pulse bridge, smooth direct current", "memory", "IEEE 519-1992 Table 13.1, typical column, from memory",
			map[int]float64{5: 17.5, 7: 11, 11: 4.5, 13: 2.9, 17: 1.5, 19: 1, 23: 0.9, 25: 0.8}),
		bridge("dc-drive", "Thyristor dc drive, six-pulse", "memory", handbook+", dc drive with rippled direct current, from memory",
			map[int]float64{5: 33.6, 7: 1.6, 11: 8.7, 13: 1.2, 17: 4.5, 19: 1.3, 23: 2.7, 25: 1.2}),
		bridge("twelve-pulse", "Twelve-pulse converter", "memory", "handbook table reprinted beside IEEE 519-1992 Table 13.1, from memory; its 5th and 7th are the imperfect cancellation",
			map[int]float64{5: 2.6, 7: 1.6, 11: 7.3, 13: 5.7, 17: 0.2, 19: 0.1, 23: 2, 25: 1.6}),
		bridge("eighteen-pulse", "Eighteen-pulse converter", "memory", "handbook table reprinted beside IEEE 519-1992 Table 13.1, from memory",
			map[int]float64{5: 2.1, 7: 1.1, 11: 0.7, 13: 0.5, 17: 4.5, 19: 3.9, 23: 0.5, 25: 0.3}),
		bridge("active-front-end", "Active front end", "memory", typically+": THD 3 to 5 %, shares by order assumed, lines about the switching frequency left out",
			map[int]float64{5: 2.5, 7: 2, 11: 1.2, 13: 1, 17: 0.7, 19: 0.6, 23: 0.5, 25: 0.4}),
		bridge("ups", "UPS, transistor rectifier", "memory", typically+": double conversion, THD about 5 % near full power, shares by order assumed",
			map[int]float64{5: 3.5, 7: 2.5, 11: 1.6, 13: 1.2, 17: 0.8, 19: 0.6}),
		bridge("ups-thyristor", "UPS, thyristor six-pulse rectifier", "memory", typically+": older double conversion without input filter, THD about 30 %, shares by order assumed",
			map[int]float64{5: 27, 7: 9, 11: 7, 13: 4, 17: 3, 19: 2, 23: 1.5, 25: 1}),
		bridge("ev-charger", "EV charger, three-phase on board", "memory", typically+": corrected input, THD about 8 % near full power and more below, shares by order assumed",
			map[int]float64{5: 5.5, 7: 3.8, 11: 2.6, 13: 2, 17: 1.3, 19: 1, 23: 0.7, 25: 0.6}),
		bridge("ev-charger-dc", "EV charger, three-phase off board (dc)", "memory", typically+": active rectifier, THD about 5 % near full power and more below, shares by order assumed",
			map[int]float64{5: 3.2, 7: 2.4, 11: 1.8, 13: 1.5, 17: 1, 19: 0.8, 23: 0.6, 25: 0.5}),
		{Name: "arc-furnace-melting", Title: "Arc furnace, melting", ThreePhase: true, Mark: "memory",
			Source: "IEEE 519-1992 Table 4.1, initial melting, from memory; angles are not known and vary, taken as zero",
			Lines:  lines(map[int]float64{2: 7.7, 3: 5.8, 4: 2.5, 5: 4.2, 7: 3.1}, atCrest)},
		{Name: "arc-furnace-refining", Title: "Arc furnace, refining", ThreePhase: true, Mark: "memory",
			Source: "IEEE 519-1992 Table 4.1, refining, from memory; angles are not known, taken as zero",
			Lines:  lines(map[int]float64{3: 2, 5: 2.1}, atCrest)},
	}
}

func singlePhase() []Model {
	at := func(name, title, source string, percent map[int]float64, angle func(int) float64) Model {
		return Model{Name: name, Title: title, Mark: "memory", Source: source + pulse, Lines: lines(percent, angle)}
	}
	return []Model{
		at("single-phase-supply", "Switched supply, single-phase, uncorrected", handbook+", switch-mode supply, from memory",
			map[int]float64{3: 81, 5: 60.6, 7: 37, 9: 15.7, 11: 2.4, 13: 6.3, 15: 7.9}, narrowPulse),
		at("led-lighting", "LED lighting, corrected drivers", typically+": THD 8 to 25 % with correction, shares by order assumed",
			map[int]float64{3: 14, 5: 7, 7: 4.5, 9: 3, 11: 2, 13: 1.5, 15: 1}, atCrest),
		at("electronic-ballast", "Fluorescent lighting, electronic ballast", handbook+", electronic ballast, from memory",
			map[int]float64{2: 0.2, 3: 19.9, 5: 7.4, 7: 3.2, 9: 2.4, 11: 1.8, 13: 0.8, 15: 0.4, 17: 0.1, 19: 0.2, 21: 0.1}, atCrest),
		at("ev-charger-single", "EV charger, single-phase on board", typically+": corrected input, THD about 10 % near full power, shares by order assumed",
			map[int]float64{3: 8.5, 5: 4, 7: 2.5, 9: 1.7, 11: 1.2, 13: 0.9}, atCrest),
		{Name: "half-wave", Title: "Half-wave rectifier, resistive load", Mark: "derived",
			Source: "Fourier series of the half-wave rectified sine, exact; it holds direct current", Lines: HalfWave(100)},
	}
}

func named(name, title string, m Model) Model {
	m.Name, m.Title = name, title
	return m
}

// Typical returns every typical spectrum in the order of a list on screen. The
// models are shared: do not write to their lines.
func Typical() []Model { return slices.Clone(typical()) }

// Lookup returns the typical spectrum of a name.
func Lookup(name string) (Model, bool) {
	for _, m := range typical() {
		if m.Name == name {
			return m, true
		}
	}
	return Model{}, false
}
