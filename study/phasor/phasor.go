// Package phasor holds harmonic spectra and what is read off them.
//
// A Spectrum is a slice of complex rms values by order: index 0 is the direct
// component, index 1 the fundamental, index h order h. The reference is the
// cosine: x(t) = X_0 + sum sqrt(2) |X_h| cos(h w t + arg X_h).
package phasor

// DefaultOrder is the highest order computed when nothing else is asked for.
const DefaultOrder = 50

// Spectrum is a signal's complex rms value by order, 0..len-1.
type Spectrum []complex128

// New returns a zero spectrum for orders 0..order.
func New(order int) Spectrum { return make(Spectrum, order+1) }

// Order returns the highest order held.
func (s Spectrum) Order() int { return len(s) - 1 }

// At returns the value at order h, zero outside the spectrum.
func (s Spectrum) At(h int) complex128 {
	if h < 0 || h >= len(s) {
		return 0
	}
	return s[h]
}

// Sequence names a symmetrical component. Its values index [3] arrays.
type Sequence int

// The three sequences.
const (
	Zero Sequence = iota
	Positive
	Negative
)

// String returns "zero", "positive" or "negative".
func (q Sequence) String() string { return [...]string{"zero", "positive", "negative"}[q] }

// OfOrder returns the sequence of a balanced set at order h: positive for
// h mod 3 = 1, negative for 2, zero for 0.
func OfOrder(h int) Sequence {
	return Sequence(((h % 3) + 3) % 3)
}
