package grid

import (
	"quietbus/study/phasor"
)

// PhaseShunt is a passive shunt between one phase and neutral, or between two
// phases. It couples the sequences: at order 1 it is part of the power flow,
// above it is put in exactly by compensation on the network's Thevenin
// equivalent at its terminals.
type PhaseShunt struct {
	Name   string
	Bus    BusID
	Weight [3]float64 // {1,0,0} for a, {1,-1,0} for ab
	Branch interface{ Admittance(h float64) complex128 }
}

func (e *PhaseShunt) label() string                                   { return e.Name }
func (e *PhaseShunt) ends() []BusID                                   { return []BusID{e.Bus} }
func (e *PhaseShunt) series() bool                                    { return false }
func (e *PhaseShunt) check() *ElementError                            { return nil }
func (e *PhaseShunt) admit(_, _ float64, _ phasor.Sequence) primitive { return primitive{} }
func (e *PhaseShunt) weights() [3]float64                             { return e.Weight }

// terminal returns the voltage across the shunt.
func (e *PhaseShunt) terminal(v [3]complex128) complex128 {
	var u complex128
	for i, w := range e.Weight {
		u += complex(w, 0) * v[i]
	}
	return u
}

// at returns the phase currents for a current through the shunt.
func (e *PhaseShunt) through(i complex128) [3]complex128 {
	var out [3]complex128
	for p, w := range e.Weight {
		out[p] = complex(w, 0) * i
	}
	return out
}

func (e *PhaseShunt) draw(v [3]complex128) [3]complex128 {
	return e.through(e.terminal(v) * e.Branch.Admittance(1))
}
