package figure

import "quietbus/study"

// summed says in a caption how the sources of each order were added.
func summed(o *study.Outcome) string {
	if o == nil || o.Study == nil {
		return ""
	}
	return " Several sources: " + o.Study.SummationWords() + "."
}

// summedWave is summed for a waveform, whose shape rests on the angles.
func summedWave(o *study.Outcome) string {
	if o == nil || o.Study == nil {
		return ""
	}
	if word, _ := o.Study.SummationLaw(); word == study.PhasorSum {
		return summed(o)
	}
	return summed(o) + " The angles are those of the phasor sum, so the shape is one of many that are possible."
}
