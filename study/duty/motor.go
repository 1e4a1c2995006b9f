package duty

import (
	"math"
	"math/cmplx"
	"sort"

	"quietbus/study/phasor"
)

// HVFNEMA returns the harmonic voltage factor of NEMA MG 1 part 30: sqrt(sum
// V_n^2/n) over odd orders from 5 not divisible by three, V_n per unit of the
// fundamental (found in part; the formula memory, high).
func HVFNEMA(voltage phasor.Spectrum) float64 {
	return hvf(voltage, 5, voltage.Order(), func(n int) bool { return n%2 == 1 && n%3 != 0 })
}

// HVFIEC returns the harmonic voltage factor of IEC 60034-1 clause 7.2.1 for
// three-phase motors: sqrt(sum u_n^2/n) over orders 2 to 13 not divisible by
// three, per unit of the fundamental (memory, medium).
func HVFIEC(voltage phasor.Spectrum) float64 {
	return hvf(voltage, 2, 13, func(n int) bool { return n%3 != 0 })
}

func hvf(voltage phasor.Spectrum, from, to int, counts func(n int) bool) float64 {
	base := square(voltage.At(1))
	if base == 0 {
		return 0
	}
	var sum float64
	for n := from; n <= min(to, voltage.Order()); n++ {
		if counts(n) {
			sum += square(voltage[n]) / float64(n)
		}
	}
	return math.Sqrt(sum / base)
}

// MotorIEC checks a motor's terminal voltage against IEC 60034-1 clause 7.2.1:
// HVF at most 0.03 for design N motors and 0.02 for others (memory, medium).
func MotorIEC(voltage phasor.Spectrum, designN bool) Check {
	limit := 0.02
	if designN {
		limit = 0.03
	}
	return check("harmonic voltage factor", HVFIEC(voltage), limit, "IEC 60034-1 clause 7.2.1", Memory)
}

// deratingCurve is read from the curve of NEMA MG 1 Figure 30-1, to 0.02
// (memory, low).
var deratingCurve = [...][2]float64{
	{0.03, 1}, {0.04, 0.98}, {0.05, 0.96}, {0.06, 0.93}, {0.07, 0.9}, {0.08, 0.87}, {0.09, 0.83}, {0.1, 0.79}, {0.11, 0.75}, {0.12, 0.7},
}

// MotorDerating returns an indication of the share of its rated power that a
// general-purpose motor may give at a NEMA harmonic voltage factor; false
// above 0.12, where the curve ends. It rests on a curve recalled with low
// confidence: an indication, not proof.
func MotorDerating(hvf float64) (float64, bool) {
	if hvf <= deratingCurve[0][0] {
		return 1, true
	}
	i := sort.Search(len(deratingCurve), func(i int) bool { return deratingCurve[i][0] >= hvf })
	if i == len(deratingCurve) {
		return 0, false
	}
	a, b := deratingCurve[i-1], deratingCurve[i]
	return a[1] + (b[1]-a[1])*(hvf-a[0])/(b[0]-a[0]), true
}

// Field is the rotating field that one order makes in a three-phase machine.
type Field struct {
	Order   int
	Seq     phasor.Sequence
	RPM     float64 // of the field, negative when it turns backwards; 0 for the zero sequence
	RotorHz float64 // of the current it induces in a rotor near synchronous speed
	Torque  int     // order of the torque pulsation it makes with the fundamental field; 0 for none
}

// FieldOf returns the field of order h in a machine with the given number of
// poles at hz, its order of the sequence of a balanced set: order 5 turns
// backwards at five times the speed and shakes the shaft at order 6, as does
// order 7 forwards (derived).
func FieldOf(h, poles int, hz float64) Field {
	f := Field{Order: h, Seq: phasor.OfOrder(h)}
	sync := 120 * hz / float64(max(poles, 2))
	switch f.Seq {
	case phasor.Positive:
		f.RPM, f.Torque = float64(h)*sync, h-1
	case phasor.Negative:
		f.RPM, f.Torque = -float64(h)*sync, h+1
	default:
		return f
	}
	f.RotorHz = float64(f.Torque) * hz
	return f
}

// GeneratorI2 returns the equivalent negative-sequence current (A) that heats a
// generator's rotor as the harmonics and the unbalance do together: sqrt(I_2^2
// + sum sqrt((n+i)/2) I_n^2), i = +1 for negative-sequence orders 5, 11, ...
// and -1 for positive-sequence orders 7, 13, ... (ANSI C50.13 practice,
// memory, medium). currents are the three sequence spectra, indexed by
// phasor.Sequence.
func GeneratorI2(currents [3]phasor.Spectrum) float64 {
	sum := square(currents[phasor.Negative].At(1))
	for _, q := range [...]phasor.Sequence{phasor.Positive, phasor.Negative} {
		for n := 2; n < len(currents[q]); n++ {
			rotor := float64(n - 1)
			if q == phasor.Negative {
				rotor = float64(n + 1)
			}
			sum += math.Sqrt(rotor/2) * square(currents[q][n])
		}
	}
	return math.Sqrt(sum)
}

// Unbalance returns the negative- over the positive-sequence fundamental, 0
// without a positive sequence.
func Unbalance(seq [3]phasor.Spectrum) float64 {
	p := cmplx.Abs(seq[phasor.Positive].At(1))
	if p == 0 {
		return 0
	}
	return cmplx.Abs(seq[phasor.Negative].At(1)) / p
}
