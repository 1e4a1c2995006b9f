package phasor

import "math"

// turn is the operator a = 1 at 120 degrees.
var turn = complex(-0.5, math.Sqrt(3)/2)

// ToSequence returns the symmetrical components of phases a, b and c, indexed
// by Sequence. Phase order is a, b, c: a set whose b lags its a by 120 degrees
// is purely positive.
func ToSequence(abc [3]complex128) [3]complex128 {
	a, b, c := abc[0], abc[1]*turn, abc[2]*turn
	// b*a^2 = b*a*a, and likewise for c.
	b2, c2 := b*turn, c*turn
	return [3]complex128{
		Zero:     (a + abc[1] + abc[2]) / 3,
		Positive: (a + b + c2) / 3,
		Negative: (a + b2 + c) / 3,
	}
}

// ToPhase returns phases a, b and c of symmetrical components indexed by
// Sequence. It is the inverse of ToSequence.
func ToPhase(seq [3]complex128) [3]complex128 {
	z, p, n := seq[Zero], seq[Positive], seq[Negative]
	p1, n1 := p*turn, n*turn
	p2, n2 := p1*turn, n1*turn
	return [3]complex128{z + p + n, z + p2 + n1, z + p1 + n2}
}

// SequencesOf returns the spectra of the symmetrical components of three phase
// spectra, order by order, indexed by Sequence. The result holds as many
// orders as the longest of them.
func SequencesOf(abc [3]Spectrum) [3]Spectrum { return transform(&abc, ToSequence) }

// PhasesOf returns the spectra of phases a, b and c of three sequence spectra
// indexed by Sequence. It is the inverse of SequencesOf.
func PhasesOf(seq [3]Spectrum) [3]Spectrum { return transform(&seq, ToPhase) }

func transform(in *[3]Spectrum, f func([3]complex128) [3]complex128) [3]Spectrum {
	n := max(len(in[0]), len(in[1]), len(in[2]))
	room := make(Spectrum, 3*n)
	out := [3]Spectrum{room[:n:n], room[n : 2*n : 2*n], room[2*n:]}
	for h := range n {
		v := f([3]complex128{in[0].At(h), in[1].At(h), in[2].At(h)})
		out[0][h], out[1][h], out[2][h] = v[0], v[1], v[2]
	}
	return out
}

// Neutral returns the spectrum of the current in the common neutral of three
// phases, the sum of their currents. In a balanced set only the triplen
// orders are left, threefold.
func Neutral(abc [3]Spectrum) Spectrum {
	out := make(Spectrum, max(len(abc[0]), len(abc[1]), len(abc[2])))
	for _, s := range abc {
		for h, v := range s {
			out[h] += v
		}
	}
	return out
}

// Balanced returns the three phase spectra of a balanced set whose phase a is
// given: b and c are the same waveform a third of a period later each, so that
// order h is of sequence OfOrder(h).
func Balanced(a Spectrum) [3]Spectrum {
	n := len(a)
	room := make(Spectrum, 3*n)
	out := [3]Spectrum{room[:n:n], room[n : 2*n : 2*n], room[2*n:]}
	back := [3]complex128{1, turn * turn, turn} // a delay by a third of a period at order 1
	for h, v := range a {
		d := back[h%3]
		out[0][h], out[1][h], out[2][h] = v, v*d, v*d*d
	}
	return out
}
