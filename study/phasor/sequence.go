package phasor

import "math"

// The operator a and its square.
var (
	opA  = complex(-0.5, math.Sqrt(3)/2)
	opA2 = complex(-0.5, -math.Sqrt(3)/2)
)

// ToSequence turns phases a, b, c into zero, positive and negative sequence,
// indexed by Sequence (Fortescue).
func ToSequence(p [3]complex128) [3]complex128 {
	return [3]complex128{
		Zero:     (p[0] + p[1] + p[2]) / 3,
		Positive: (p[0] + opA*p[1] + opA2*p[2]) / 3,
		Negative: (p[0] + opA2*p[1] + opA*p[2]) / 3,
	}
}

// ToPhase is the inverse of ToSequence.
func ToPhase(s [3]complex128) [3]complex128 {
	z, p, n := s[Zero], s[Positive], s[Negative]
	return [3]complex128{z + p + n, z + opA2*p + opA*n, z + opA*p + opA2*n}
}

// SequencesOf turns three phase spectra of equal length into sequence spectra.
func SequencesOf(p [3]Spectrum) [3]Spectrum { return transform(p, ToSequence) }

// PhasesOf is the inverse of SequencesOf.
func PhasesOf(s [3]Spectrum) [3]Spectrum { return transform(s, ToPhase) }

func transform(in [3]Spectrum, f func([3]complex128) [3]complex128) [3]Spectrum {
	n := max(len(in[0]), len(in[1]), len(in[2]))
	all := make(Spectrum, 3*n)
	out := [3]Spectrum{all[:n:n], all[n : 2*n : 2*n], all[2*n:]}
	for h := range n {
		v := f([3]complex128{in[0].At(h), in[1].At(h), in[2].At(h)})
		out[0][h], out[1][h], out[2][h] = v[0], v[1], v[2]
	}
	return out
}
