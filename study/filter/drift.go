package filter

// Drift is how far a branch's components and the system frequency are from
// their nominal values, each as a fraction: 0.1 is 10 % more.
type Drift struct {
	Capacitance float64 // tolerance and ageing of the capacitors
	Inductance  float64 // tolerance of the reactors
	Frequency   float64 // of the system

	TemperatureK float64 // rise above the temperature of the nominal values
	PerKelvin    float64 // change of the capacitance per kelvin, as a fraction
}

func (d Drift) capacitance() float64 {
	return (1 + d.Capacitance) * (1 + d.PerKelvin*d.TemperatureK)
}

// Drifted returns the branch as it is under a drift. Its orders count from the
// drifted system frequency; its resistances stay.
func (b *Branch) Drifted(d Drift) *Branch {
	out := *b
	f := 1 + d.Frequency
	out.F1 *= f
	for _, x := range []*float64{&out.Xc, &out.Xc2, &out.Xc3, &out.XcT} {
		*x /= f * d.capacitance()
	}
	for _, x := range []*float64{&out.Xl, &out.XlT} {
		*x *= f * (1 + d.Inductance)
	}
	return &out
}

// Equivalent returns the drift as one equivalent deviation of the frequency,
// df/f + (dL/L + dC/C)/2, to first order (Arrillaga and Watson, Power System
// Harmonics, 2nd ed.): the tuned order falls by that fraction.
func (d Drift) Equivalent() float64 {
	return d.Frequency + (d.Inductance+d.capacitance()-1)/2
}
