// Package grid is the linear network of a harmonic study.
//
// Every order has three decoupled networks: zero, positive and negative
// sequence. Each is solved by nodal admittance in shift-free coordinates: the
// angle by which a transformer's vector group turns its low-voltage side is
// taken out of the matrix, which so stays complex symmetric, and is put back
// into the results: by +shift in the positive, by -shift in the negative
// sequence. Units are V, A, ohm, Hz, rad; voltages line to neutral.
//
// Sources: Arrillaga and Watson, Power System Harmonics, 2nd ed., 2003; Duff,
// Erisman and Reid, Direct Methods for Sparse Matrices (ordering, LDL^T).
package grid

import (
	"fmt"
	"math"

	"quietbus/study/phasor"
)

// BusID and ElementID name buses and elements by their number of arrival.
type (
	BusID     int
	ElementID int
)

// Stamp adds admittance v (siemens) between ends i and j of an element; i = j
// adds to the diagonal. Off-diagonal values are added once for (i,j) and (j,i).
type Stamp func(i, j int, v complex128)

// Element is one item of the network.
type Element interface {
	label() string
	ends() []BusID
	check() *ElementError
	stamp(f1, h float64, q phasor.Sequence, add Stamp)
	series() bool
}

// ElementError says what is wrong with an element's data.
type ElementError struct{ Element, Field, Problem string }

func (e *ElementError) Error() string {
	return fmt.Sprintf("%s: %s %s", e.Element, e.Field, e.Problem)
}

// Network is built bus by bus and element by element, then compiled.
type Network struct {
	f1       float64
	names    []string
	nominal  []float64
	joins    [][2]BusID
	elements []Element
}

// New returns an empty network with the given fundamental frequency in Hz.
func New(frequencyHz float64) *Network { return &Network{f1: frequencyHz} }

// AddBus adds a bus with its nominal line-to-line voltage in V.
func (n *Network) AddBus(name string, nominalV float64) BusID {
	n.names = append(n.names, name)
	n.nominal = append(n.nominal, nominalV)
	return BusID(len(n.names) - 1)
}

// Join makes one bus of two, as a closed coupler does.
func (n *Network) Join(a, b BusID) { n.joins = append(n.joins, [2]BusID{a, b}) }

// Add adds an element.
func (n *Network) Add(e Element) ElementID {
	n.elements = append(n.elements, e)
	return ElementID(len(n.elements) - 1)
}

func positive(name, field string, v float64) *ElementError {
	if !(v > 0) || math.IsInf(v, 0) {
		return &ElementError{name, field, fmt.Sprintf("is %v; it must be above zero", v)}
	}
	return nil
}
