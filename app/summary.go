//go:build !headless

package main

import (
	"fmt"
	"strings"

	"quietbus/study"
)

// summary says in a few words what an item is, for lists.
func summary(item any) string {
	switch i := item.(type) {
	case *study.Supply:
		level := short(i.FaultMVA) + " MVA"
		if i.FaultMVA == 0 {
			level = short(i.FaultKA) + " kA"
		}
		return fmt.Sprintf("on %s, %s, X/R %s", i.Bus, level, short(i.XOverR))
	case *study.Bus:
		return short(i.NominalKV) + " kV"
	case *study.Transformer:
		return fmt.Sprintf("%s to %s, %s kVA %s, %s %%", i.HVBus, i.LVBus, short(i.RatedKVA), i.VectorGroup, short(i.ImpedancePercent))
	case *study.Cable:
		return fmt.Sprintf("%s to %s, %s m", i.From, i.To, short(i.LengthM))
	case *study.Reactor:
		return fmt.Sprintf("%s to %s, %s mH", i.From, i.To, short(i.InductanceMH))
	case *study.Coupler:
		return fmt.Sprintf("%s to %s", i.From, i.To)
	case *study.Load:
		return fmt.Sprintf("on %s, %s kW", i.Bus, short(i.KW))
	case *study.Generator:
		return fmt.Sprintf("on %s, %s kVA", i.Bus, short(i.RatedKVA))
	case *study.Motor:
		return fmt.Sprintf("on %s, %s kW", i.Bus, short(i.KW))
	case *study.NonlinearLoad:
		size := short(i.KW) + " kW"
		if i.KW == 0 {
			size = short(i.CurrentA) + " A"
		}
		return fmt.Sprintf("on %s, %s, %s", i.Bus, size, titleOf(study.KindNonlinearLoad, "spectrum", i.Spectrum))
	case *study.Bank:
		text := fmt.Sprintf("on %s, %s kvar", i.Bus, short(i.Kvar))
		if i.DetuningPercent > 0 {
			text += ", " + short(i.DetuningPercent) + " % detuned"
		}
		return text
	case *study.Filter:
		return fmt.Sprintf("on %s, %s, %s kvar at order %s", i.Bus, i.Kind, short(i.Kvar), short(i.Order))
	case *study.Measure:
		return measureSummary(i)
	case *study.Assessment:
		return fmt.Sprintf("%s at %s", titleOf(study.KindAssessment, "set", i.Set), i.Bus)
	case *study.LimitSet:
		return strings.TrimPrefix(i.Source()+", ", ", ") + count(len(i.Rows), "order")
	case *study.ScanRequest:
		return "at " + i.Bus
	}
	return "on " + study.GetField(item, "bus")
}

// measureSummary says what a measure does and where.
func measureSummary(m *study.Measure) string {
	place := m.Bus
	if place == "" {
		place = m.Target
	}
	var parts []string
	switch m.Kind {
	case study.SingleTuned, study.DoubleTuned, study.FirstOrder, study.HighPass, study.ThirdOrder, study.CType:
		text := fmt.Sprintf("%s kvar at order %s", short(m.Kvar), short(m.Order))
		if m.Order2 > 0 {
			text += " and " + short(m.Order2)
		}
		parts = append(parts, text)
	case study.DetuneBank:
		parts = append(parts, short(m.Percent)+" % detuning")
	case study.RemoveBank:
		parts = append(parts, "bank taken out")
	case study.ActiveFilter:
		parts = append(parts, short(m.RatedA)+" A active filter")
	case study.LineReactor:
		parts = append(parts, short(m.Percent)+" % line reactor")
	case study.LowPassRC:
		parts = append(parts, fmt.Sprintf("R-C low-pass %s ohm, %s uF", short(m.ROhm), short(m.CUF)))
	case study.LowPassLC:
		parts = append(parts, fmt.Sprintf("L-C low-pass %s mH, %s uF", short(m.LMH), short(m.CUF)))
	}
	if place != "" {
		parts = append(parts, "at "+place)
	}
	return strings.Join(parts, " ")
}
