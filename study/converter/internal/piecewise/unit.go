package piecewise

// A Unit is a group of valves with their own branches: it says, for each set
// of its conducting valves, which branch currents are free and what ends the
// set.
type Unit interface {
	// bits is the number of bits of the unit's state.
	bits() uint
	// columns returns the free currents of a state.
	columns(state uint64) []column
	// triggers returns what ends a state.
	triggers(state uint64) []trigger
	// turned returns the state with polarity exchanged and legs permuted.
	turned(state uint64, legs []int) uint64
}

// A term is one summand of a linear function of the branch currents or of the
// branch voltages.
type term struct {
	branch int
	coef   float64
}

// A column is one free current: the branch current that serves as its
// coordinate, and every branch in which it flows.
type column struct {
	coord int
	terms []term
}

// A trigger is a function that stays positive while a state holds: a sum of
// branch currents, or of branch voltages e = K u + EMF k - R c - S v - X c'.
// It counts only while all gates of need are open. next is the unit's state
// once the function has become negative.
type trigger struct {
	volt  bool
	terms []term
	need  uint64
	next  uint64
}

// Always is a branch without valves.
type Always struct{ Branch int }

func (a Always) bits() uint { return 0 }
func (a Always) columns(uint64) []column {
	return []column{{a.Branch, []term{{a.Branch, 1}}}}
}
func (a Always) triggers(uint64) []trigger { return nil }

// Valve is a branch with one diode (Diode), or with two thyristors in
// antiparallel whose gates are Plus and Minus. States: 0 blocking, 1 conducting
// forward, 2 conducting backward.
type Valve struct {
	Branch      int
	Diode       bool
	Plus, Minus int // gate numbers
}

func (v Valve) bits() uint { return 2 }

func (v Valve) columns(state uint64) []column {
	if state == 0 {
		return nil
	}
	return []column{{v.Branch, []term{{v.Branch, 1}}}}
}

func (v Valve) triggers(state uint64) []trigger {
	b := v.Branch
	switch state {
	case 1:
		return []trigger{{terms: []term{{b, 1}}}}
	case 2:
		return []trigger{{terms: []term{{b, -1}}}}
	}
	if v.Diode {
		return []trigger{{volt: true, terms: []term{{b, -1}}, next: 1}}
	}
	return []trigger{
		{volt: true, terms: []term{{b, -1}}, need: 1 << v.Plus, next: 1},
		{volt: true, terms: []term{{b, 1}}, need: 1 << v.Minus, next: 2},
	}
}
