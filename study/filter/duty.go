package filter

import (
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// Duty is what one phase of a branch bears.
type Duty struct {
	Current1, Current float64 // A rms, order 1 and total
	Voltage1, Voltage float64 // across the capacitor, V rms
	Peak              float64 // crest of the capacitor's voltage, V
	Loss1, Loss       float64 // W, order 1 and total
	CurrentOrders     phasor.Spectrum
}

// DutyOf returns the duty of a branch for the current through it.
func (b *Branch) DutyOf(current phasor.Spectrum) Duty {
	d := Duty{CurrentOrders: current}
	v := make(phasor.Spectrum, len(current))
	var i2 float64
	for h := 1; h < len(current); h++ {
		v[h] = b.CapacitorVoltage(float64(h), current[h])
		d.Loss += b.Loss(float64(h), current[h])
		i2 += real(current[h])*real(current[h]) + imag(current[h])*imag(current[h])
	}
	d.Current1, d.Current = cmplx.Abs(current.At(1)), math.Sqrt(i2)
	d.Voltage1, d.Voltage, d.Peak = cmplx.Abs(v.At(1)), phasor.RMS(v), phasor.Peak(v)
	d.Loss1 = b.Loss(1, current.At(1))
	return d
}

// preferred are usual rated line-to-line voltages of power capacitors, V
// (common practice, no source).
var preferred = []float64{230, 400, 415, 440, 480, 525, 600, 690, 760, 800, 1000, 1200, 2400, 3300, 4160, 6600, 7200, 7620, 11000, 12000, 13200, 13800, 22000, 24000, 33000, 36000}

// PreferredVoltage returns the smallest usual capacitor rating that is at
// least v volts line to line; above the list v rounded up to whole kilovolts.
func PreferredVoltage(v float64) float64 {
	for _, p := range preferred {
		if p >= v*(1-1e-9) {
			return p
		}
	}
	return 1000 * math.Ceil(v/1000)
}
