package figure

import (
	"fmt"
	"strings"

	"quietbus/study"
)

// sizesOf says the size of each item of a study in few words, by name: found
// once for a figure, which draws them at each flip.
func sizesOf(s *study.Study) map[string]string {
	size := map[string]string{}
	for _, x := range s.Supplies {
		size[x.Name] = plain(x.FaultMVA) + " MVA, X/R " + plain(x.XOverR)
		if x.FaultKA > 0 {
			size[x.Name] = plain(x.FaultKA) + " kA, X/R " + plain(x.XOverR)
		}
	}
	for _, x := range s.Buses {
		size[x.Name] = plain(x.NominalKV) + " kV"
		if x.NominalKV < 1 {
			size[x.Name] = plain(1000*x.NominalKV) + " V"
		}
	}
	for _, x := range s.Transformers {
		size[x.Name] = plain(x.RatedKVA) + " kVA  " + x.VectorGroup
		if x.PhaseShiftDeg != 0 {
			size[x.Name] += fmt.Sprintf(" %+g°", x.PhaseShiftDeg)
		}
	}
	for _, x := range s.Cables {
		size[x.Name] = plain(x.LengthM) + " m"
		if x.Parallel > 1 {
			size[x.Name] += fmt.Sprintf(" × %d", x.Parallel)
		}
	}
	for _, x := range s.Couplers {
		size[x.Name] = isOpen
		if x.Closed {
			size[x.Name] = isClosed
		}
	}
	for _, x := range s.NonlinearLoads {
		size[x.Name] = plain(x.KW) + " kW" + phaseWords(x.Connection)
		if x.CurrentA > 0 {
			size[x.Name] = plain(x.CurrentA) + " A" + phaseWords(x.Connection)
		}
	}
	for _, x := range s.Loads {
		size[x.Name] = plain(x.KW) + " kW" + phaseWords(x.Connection)
	}
	for _, x := range s.Motors {
		size[x.Name] = plain(x.KW) + " kW"
	}
	for _, x := range s.Generators {
		size[x.Name] = plain(x.RatedKVA) + " kVA"
	}
	for _, x := range s.Banks {
		size[x.Name] = plain(x.Kvar) + " kvar"
		if x.DetuningPercent > 0 {
			size[x.Name] += ", " + plain(x.DetuningPercent) + " %"
		}
	}
	for _, x := range s.Filters {
		size[x.Name] = plain(x.Kvar) + " kvar, order " + plain(x.Order)
	}
	return size
}

// The states of a coupler.
const (
	isOpen   = "open"
	isClosed = "closed"
)

func phaseWords(c study.Connection) string {
	if c == "" || c == study.ThreePhase {
		return ""
	}
	return ", phase " + string(c)
}

// MeasureWords says what a measure is in a few words.
func MeasureWords(m *study.Measure) string {
	switch m.Kind {
	case study.SingleTuned, study.DoubleTuned, study.FirstOrder, study.HighPass, study.ThirdOrder, study.CType:
		text := fmt.Sprintf("%s, %s kvar, order %s", strings.TrimSuffix(study.KindTitle(m.Kind), " filter"), plain(m.Kvar), plain(m.Order))
		if m.Order2 > 0 {
			text += " and " + plain(m.Order2)
		}
		return text
	case study.DetuneBank:
		return fmt.Sprintf("detune %s, %s %%", m.Target, plain(m.Percent))
	case study.RemoveBank:
		return "remove " + m.Target
	case study.ActiveFilter:
		return "active filter, " + plain(m.RatedA) + " A"
	case study.LineReactor:
		return fmt.Sprintf("line reactor %s %% on %s", plain(m.Percent), m.Target)
	case study.LowPassRC:
		return "R-C low-pass before " + m.Target
	case study.LowPassLC:
		return "L-C low-pass before " + m.Target
	}
	return strings.ReplaceAll(m.Kind, "-", " ")
}

// measureBrief says a measure's size in few words, from full to short.
func measureBrief(m *study.Measure) []string {
	switch {
	case study.IsFilter(m.Kind):
		order := "order " + plain(m.Order)
		return []string{MeasureWords(m), order + ", " + plain(m.Kvar) + " kvar", order}
	case m.Kind == study.DetuneBank || m.Kind == study.LineReactor:
		return []string{"reactor " + plain(m.Percent) + " %"}
	case m.Kind == study.RemoveBank:
		return []string{"taken out"}
	case m.Kind == study.ActiveFilter:
		return []string{MeasureWords(m), "active, " + plain(m.RatedA) + " A", plain(m.RatedA) + " A"}
	case m.Kind == study.LowPassRC:
		return []string{"R-C, outlet"}
	case m.Kind == study.LowPassLC:
		return []string{"L-C, outlet"}
	}
	return []string{MeasureWords(m)}
}
