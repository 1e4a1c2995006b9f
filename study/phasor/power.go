package phasor

import "math"

// Power is what a voltage and a current carry together in one phase, with the
// quantities of IEEE 1459-2010: W, var and VA.
type Power struct {
	P            float64 // active, all orders and direct current
	S            float64 // apparent, product of the true rms values
	P1           float64 // active at order 1
	Q1           float64 // reactive at order 1, positive when the current lags
	S1           float64 // apparent at order 1
	N            float64 // non-active, sqrt(S^2 - P^2)
	Distortion   float64 // non-fundamental apparent, sqrt(S^2 - S1^2)
	Displacement float64 // displacement power factor P1/S1, 0 without order 1
	TruePF       float64 // true power factor P/S, 0 without apparent power
}

// PowerOf returns the power of one phase from the spectra of its voltage (V)
// and its current (A). Orders that only one of them holds count in the rms
// values alone.
func PowerOf(voltage, current Spectrum) Power {
	var p Power
	for h := 0; h < min(len(voltage), len(current)); h++ {
		u, i := voltage[h], current[h]
		p.P += real(u)*real(i) + imag(u)*imag(i)
	}
	u, i := voltage.At(1), current.At(1)
	p.P1 = real(u)*real(i) + imag(u)*imag(i)
	p.Q1 = imag(u)*real(i) - real(u)*imag(i)
	p.S1 = math.Hypot(p.P1, p.Q1)
	p.S = RMS(voltage) * RMS(current)
	p.N = math.Sqrt(max(0, p.S*p.S-p.P*p.P))
	p.Distortion = math.Sqrt(max(0, p.S*p.S-p.S1*p.S1))
	if p.S1 > 0 {
		p.Displacement = p.P1 / p.S1
	}
	if p.S > 0 {
		p.TruePF = p.P / p.S
	}
	return p
}
