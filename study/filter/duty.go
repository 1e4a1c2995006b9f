package filter

import (
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// Duty is what one phase of a branch bears, or the worst phase of three.
// Voltages are across the main capacitor.
type Duty struct {
	Current1, Current float64 // A rms, order 1 and total
	Voltage1, Voltage float64 // V rms, order 1 and total
	Sum               float64 // V, arithmetic sum of the orders' rms voltages
	Peak              float64 // crest of the capacitor's voltage, V
	Var               float64 // sum of h V_h^2/XC: the capacitor's var, harmonics included
	Loss1, Loss       float64 // W, order 1 and total
	CurrentOrders     phasor.Spectrum
}

// DutyOf returns the duty of one phase for the current through it, orders 1
// and above, star equivalent.
func (b *Branch) DutyOf(current phasor.Spectrum) Duty {
	var room [maxStack]complex128
	v := b.voltages(current, room[:0])
	d := b.thermal(current)
	d.electric(v, b.Xc)
	d.Peak = phasor.Peak(v)
	return d
}

// maxStack is how many orders a duty holds without allocating.
const maxStack = 128

// voltages returns the spectrum of the main capacitor's voltage.
func (b *Branch) voltages(current phasor.Spectrum, dst phasor.Spectrum) phasor.Spectrum {
	dst = append(dst, 0)
	for h := 1; h < len(current); h++ {
		dst = append(dst, b.CapacitorVoltage(float64(h), current[h]))
	}
	return dst
}

// thermal fills in currents and losses.
func (b *Branch) thermal(current phasor.Spectrum) Duty {
	d := Duty{CurrentOrders: current, Current1: cmplx.Abs(current.At(1))}
	var i2 float64
	for h := 1; h < len(current); h++ {
		p := real(current[h])*real(current[h]) + imag(current[h])*imag(current[h])
		if p == 0 {
			continue
		}
		i2 += p
		w := p * real(b.Impedance(float64(h)))
		d.Loss += w
		if h == 1 {
			d.Loss1 = w
		}
	}
	d.Current = math.Sqrt(i2)
	return d
}

// electric fills in the capacitor's voltages, all but the peak.
func (d *Duty) electric(v phasor.Spectrum, xc float64) {
	d.Voltage1, d.Voltage = cmplx.Abs(v.At(1)), phasor.RMS(v)
	for h, u := range v {
		size := cmplx.Abs(u)
		d.Sum += size
		d.Var += float64(h) * size * size / xc
	}
}

// Bear returns the duty of all three phases for their currents, the worst
// phase of each value; losses and var are the sum of the three. The voltages
// are those across each capacitor as it is connected: phase to star point, or,
// with delta, between phases, where the capacitor is a third of the star
// equivalent and carries no zero sequence.
func (b *Branch) Bear(current [3]phasor.Spectrum, delta bool) Duty {
	var worst Duty
	var room [3][maxStack]complex128
	var star [3]phasor.Spectrum
	for p := range current {
		star[p] = b.voltages(current[p], room[p][:0])
		d := b.thermal(current[p])
		worst.Loss, worst.Loss1 = worst.Loss+d.Loss, worst.Loss1+d.Loss1
		worst.Current1 = max(worst.Current1, d.Current1)
		if d.Current >= worst.Current {
			worst.Current, worst.CurrentOrders = d.Current, d.CurrentOrders
		}
	}
	xc := b.Xc
	if delta {
		xc *= 3
		a := append(phasor.Spectrum(nil), star[0]...)
		for p := range star {
			next := star[(p+1)%3]
			if p == 2 {
				next = a
			}
			for h := range star[p] {
				star[p][h] -= next.At(h)
			}
		}
	}
	for p := range star {
		var d Duty
		d.electric(star[p], xc)
		worst.Var += d.Var
		worst.Voltage1, worst.Voltage = max(worst.Voltage1, d.Voltage1), max(worst.Voltage, d.Voltage)
		worst.Sum = max(worst.Sum, d.Sum)
		// The crest never exceeds the arithmetic sum, so most phases of a
		// nearly balanced set need no search for theirs.
		if math.Sqrt2*d.Sum > worst.Peak {
			worst.Peak = max(worst.Peak, phasor.Peak(star[p]))
		}
	}
	return worst
}

// PartDuty is what one component of one phase bears.
type PartDuty struct {
	Part
	Current1, Current float64 // through it, A rms
	Voltage1, Voltage float64 // across it, V rms
	Peak              float64 // crest of the voltage across it, V
	Loss1, Loss       float64 // in it, W
}

// PartDuties returns the duty of every component of one phase, star
// equivalent, for the current through the branch. The reactors' resistances
// are listed by themselves; the capacitor's loss resistance counts with the
// capacitor.
func (b *Branch) PartDuties(current phasor.Spectrum) []PartDuty {
	all := b.parts()
	var i, v [len(all)]phasor.Spectrum
	for k := range all {
		i[k], v[k] = make(phasor.Spectrum, len(current)), make(phasor.Spectrum, len(current))
	}
	out := make([]PartDuty, len(all))
	for n := 1; n < len(current); n++ {
		h := float64(n)
		_, share := b.arm(h)
		reactor, damper := current[n]*share, current[n]*(1-share)
		var tank complex128
		if b.XcT > 0 {
			tank = current[n] * b.tank(h) / complex(b.RlT, h*b.XlT)
		}
		through := [...]complex128{current[n], reactor, reactor, reactor, damper, damper, current[n] - tank, tank, tank}
		for k, c := range all {
			i[k][n] = through[k]
			switch c.symbol {
			case "C":
				v[k][n] = through[k] * complex(0, -c.ohm/h)
			case "L":
				v[k][n] = through[k] * complex(0, c.ohm*h)
			default:
				v[k][n] = through[k] * complex(c.ohm, 0)
			}
			r := 0.0
			switch {
			case c.symbol == "R":
				r = c.ohm
			case k == 0:
				r = b.Rc
			}
			w := r * (real(through[k])*real(through[k]) + imag(through[k])*imag(through[k]))
			out[k].Loss += w
			if n == 1 {
				out[k].Loss1 = w
			}
		}
	}
	kept := out[:0]
	for k, c := range all {
		if c.ohm == 0 {
			continue
		}
		d := out[k]
		d.Part = c.Part(2 * math.Pi * b.F1)
		d.Current1, d.Current = cmplx.Abs(i[k].At(1)), phasor.RMS(i[k])
		d.Voltage1, d.Voltage, d.Peak = cmplx.Abs(v[k].At(1)), phasor.RMS(v[k]), phasor.Peak(v[k])
		kept = append(kept, d)
	}
	return kept
}
