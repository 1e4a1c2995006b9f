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

// primitive is an element's nodal admittance in shift-free coordinates,
// siemens: of its first end, between the ends, of its second end.
type primitive struct{ y00, y01, y11 complex128 }

// grounded reports whether the element gives its ends a way to earth, by
// itself or as a branch: whether its admittance is not singular.
func (p primitive) grounded() bool {
	if p.y01 == 0 {
		return p.y00 != 0 || p.y11 != 0
	}
	product := p.y00 * p.y11
	return cmplxAbs1(product-p.y01*p.y01) > 1e-12*cmplxAbs1(product)
}

// Element is one item of the network: a supply, branch or shunt of this
// package.
type Element interface {
	label() string
	ends() []BusID
	check() *ElementError
	// admit returns the admittance at order h in sequence q.
	admit(f1, h float64, q phasor.Sequence) primitive
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
	ratio    float64 // of the system frequency to nominal; 0 for one: see Deviate
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
