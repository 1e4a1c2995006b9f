//go:build !headless

package main

import "quietbus/study"

// A selection is what the evidence is about: a bus, and on it perhaps an item
// whose current is looked at.
type selection struct {
	Bus     string // bus whose voltage and impedance are shown
	Element string // item whose current is shown instead of the voltage, "" for none
	Other   string // item that carries no current (measure, assessment, scan), for editing
}

// item returns the name of the item that is selected.
func (s selection) item() string {
	switch {
	case s.Other != "":
		return s.Other
	case s.Element != "":
		return s.Element
	}
	return s.Bus
}

// firstSelection returns what a study opens with: its first assessed bus, else
// its first bus.
func firstSelection(s *study.Study) selection {
	for i := range s.Assessments {
		if _, item := s.Find(s.Assessments[i].Bus); item != nil {
			return selection{Bus: s.Assessments[i].Bus}
		}
	}
	if len(s.Buses) > 0 {
		return selection{Bus: s.Buses[0].Name}
	}
	return selection{}
}

// in returns the selection with what is no longer in the study taken out.
func (sel selection) in(s *study.Study) selection {
	gone := func(name string) bool {
		_, item := s.Find(name)
		return name != "" && item == nil
	}
	if gone(sel.Element) {
		sel.Element = ""
	}
	if gone(sel.Other) {
		sel.Other = ""
	}
	if sel.Bus == "" || gone(sel.Bus) {
		sel.Bus = firstSelection(s).Bus
	}
	return sel
}

// selectionOf returns what picking a named item shows: the item's own current
// at the bus it stands on, or the bus.
func selectionOf(s *study.Study, name string) selection {
	kind, found := s.Find(name)
	if found == nil {
		return selection{}
	}
	switch kind {
	case study.KindBus:
		return selection{Bus: name}
	case study.KindMeasure, study.KindAssessment, study.KindScan, study.KindLimitSet:
		return selection{Bus: busOf(s, name), Other: name}
	case study.KindCoupler: // an ideal switch: its current is not a result
		return selection{Bus: busOf(s, name), Other: name}
	}
	return selection{Bus: busOf(s, name), Element: name}
}

// busOf returns the bus that an item stands on, the lower-voltage or far side
// of a branch; a measure stands where what it acts on does.
func busOf(s *study.Study, name string) string {
	kind, found := s.Find(name)
	if kind == study.KindBus {
		return name
	}
	if found == nil {
		return ""
	}
	for _, key := range []string{"bus", "lvBus", "to"} {
		if bus := study.GetField(found, key); bus != "" {
			return bus
		}
	}
	if target := study.GetField(found, "target"); target != "" && target != name {
		return busOf(s, target)
	}
	return ""
}
