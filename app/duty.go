package main

import (
	"fmt"
	"strings"

	"quietbus/study"
)

// A dutySheet is what one measure is made of and bears, in lines of text.
type dutySheet struct {
	heading string
	lines   []string
	notes   []string
}

// dutySheets words the duties of the measures that are on.
func dutySheets(o *study.Outcome) []dutySheet {
	var out []dutySheet
	for i := range o.Measures {
		r := &o.Measures[i]
		s := dutySheet{heading: fmt.Sprintf("%s: %s at %s", r.Name, strings.ToLower(kindWord(r.Kind)), r.Bus), notes: r.Notes}
		for _, c := range r.Components {
			line := fmt.Sprintf("%s %s, %s", c.Symbol, engineering(c), c.Part)
			if c.Note != "" {
				line += ": " + c.Note
			}
			s.lines = append(s.lines, line)
		}
		if r.Duty != nil {
			s.lines = append(s.lines, dutyLines(r.Duty)...)
		}
		if line := gainLine(r.Response); line != "" {
			s.lines = append(s.lines, line)
		}
		out = append(out, s)
	}
	return out
}

// dutyLines words currents, voltages, losses and output against the ratings.
func dutyLines(d *study.Duty) []string {
	var lines []string
	if d.CurrentA > 0 {
		line := fmt.Sprintf("Current %s A rms", short(d.CurrentA))
		if d.CurrentA1 > 0 {
			line += fmt.Sprintf(", of which %s A at order 1", short(d.CurrentA1))
		}
		lines = append(lines, line+ofRated(d.CurrentA, d.RatedA, "A"))
	}
	if d.VoltageV > 0 {
		lines = append(lines, fmt.Sprintf("Capacitor voltage %s V rms, %s V at order 1, %s V crest", short(d.VoltageV), short(d.VoltageV1), short(d.PeakV))+
			ofRated(d.VoltageV, d.RatedV, "V rms"))
	}
	if d.LossW > 0 {
		lines = append(lines, fmt.Sprintf("Losses %s W, of which %s W at order 1", short(d.LossW), short(d.LossW1)))
	}
	if d.KvarOutput > 0 {
		lines = append(lines, fmt.Sprintf("Output %s kvar; capacitor nameplate %s kvar", short(d.KvarOutput), short(d.KvarRated)))
	}
	return lines
}

// ofRated sets a value against a rating, "" when there is none.
func ofRated(value, rated float64, unit string) string {
	if rated <= 0 {
		return ""
	}
	return fmt.Sprintf(" (%s %% of %s %s rated)", short(100*value/rated), short(rated), unit)
}

// gainOrders are the orders at which a low-pass is described.
var gainOrders = []int{1, 3, 5, 7, 11, 13, 25}

// gainLine words a low-pass measure's gain and lag.
func gainLine(response []study.Gain) string {
	var parts []string
	for _, g := range response {
		for _, h := range gainOrders {
			if g.Order == h {
				parts = append(parts, fmt.Sprintf("order %d: %s x, %s deg", h, short(g.Ratio), short(g.LagDeg)))
			}
		}
	}
	if len(parts) == 0 {
		return ""
	}
	return "Outlet over bus, and lag: " + strings.Join(parts, "; ")
}

// engineering prints a component value in the unit of its size.
func engineering(c study.Component) string {
	switch c.Symbol {
	case "C":
		return short(c.Value*1e6) + " uF"
	case "L":
		return short(c.Value*1e3) + " mH"
	}
	return short(c.Value) + " ohm"
}
