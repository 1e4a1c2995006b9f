package converter

import (
	"math"
	"math/cmplx"

	"quietbus/study/phasor"
)

// FrontEnd is what an active front end has beyond the common nameplate: a
// bridge of transistors that draws a sinusoidal current of the positive
// sequence. The line reactor (ReactorH) is the line side of its filter. Zero
// takes the value in brackets.
//
// The model is linear at every order but the first. With s = jhw the current
// controller makes the bridge voltage
//
//	vc = K e^(-s Td) (i - iref) + F e^(-s Td) vf,  K = 2 pi Bandwidth L1
//
// so that the bridge behind its inductance L1 looks from the filter capacitor
// like Y = (1 - F e^(-s Td)) / (R1 + s L1 + K e^(-s Td)): it takes harmonic
// current from a distorted bus, and where the delay turns the real part of Y
// negative it amplifies. Source: Harnefors, Bongiorno, Lundberg,
// "Input-admittance calculation and shaping for controlled voltage-source
// converters", IEEE Trans. Industrial Electronics 54(6), 2007 (from memory).
//
// The dead time of the bridge adds a voltage of DirectV DeadTime SwitchingHz
// that opposes the current like a square wave, orders 6k +- 1 at 1/h (Mohan,
// Undeland, Robbins, Power Electronics, 3rd ed.; from memory). Left out: the
// ripple of the direct voltage under unbalance, which adds a third order.
type FrontEnd struct {
	SwitchingHz float64 // carrier frequency [4000]
	DelayS      float64 // from sampling to the mean of the bridge voltage [1.5 periods of the carrier]
	BandwidthHz float64 // of the current control [a twentieth of the carrier]
	InductorH   float64 // bridge side [10 % of the rating]
	InductorOhm float64
	FilterF     float64 // capacitor of each phase, star; 0: none
	DampingOhm  float64 // in series with it
	DirectV     float64 // [1.63 times the line voltage]
	DeadTimeS   float64 // 0: none, or compensated
	Feedforward float64 // F, share of the measured voltage fed forward, 0 to 1
}

// Typical values, common practice without a source.
const (
	typicalCarrier = 4000
	typicalDelay   = 1.5
	typicalShare   = 20   // carrier over bandwidth
	typicalL1      = 0.10 // of the rating
	typicalDirect  = 1.63 // of the line voltage
)

func (f FrontEnd) withDefaults(n Nameplate, w float64) FrontEnd {
	set := func(v *float64, d float64) {
		if *v == 0 {
			*v = d
		}
	}
	set(&f.SwitchingHz, typicalCarrier)
	set(&f.DelayS, typicalDelay/f.SwitchingHz)
	set(&f.BandwidthHz, f.SwitchingHz/typicalShare)
	set(&f.InductorH, typicalL1*n.VoltageV*n.VoltageV/n.PowerW/w)
	set(&f.DirectV, typicalDirect*n.VoltageV)
	return f
}

// frontState is the linear model of an active front end at its terminal.
type frontState struct {
	f              FrontEnd
	w              float64
	zr, zx         float64    // series impedance before the filter capacitor, ohm at order 1
	direct, mirror complex128 // order 1: dI = direct dE + mirror conj(dE), positive sequence
}

// branches returns, at frequency s = jx, the bridge's admittance with its
// control, the capacitor's, the series impedance, and the transfer from an
// error of the bridge voltage to a current source at the capacitor.
func (m *frontState) branches(x float64) (bridge, capacitor, series, transfer complex128) {
	f := m.f
	delay := cmplx.Rect(1, -x*f.DelayS)
	gain := complex(2*math.Pi*f.BandwidthHz*f.InductorH, 0)
	own := complex(f.InductorOhm, x*f.InductorH)
	transfer = 1 / (own + gain*delay)
	bridge = (1 - complex(f.Feedforward, 0)*delay) * transfer
	if f.FilterF > 0 {
		capacitor = 1 / complex(f.DampingOhm, -1/(x*f.FilterF))
	}
	return bridge, capacitor, complex(m.zr, x/m.w*m.zx), transfer
}

// drawn returns the line current at order h for a voltage behind the series
// impedance and an error of the bridge voltage.
func (m *frontState) drawn(h float64, v, wrong complex128) complex128 {
	bridge, capacitor, series, transfer := m.branches(h * m.w)
	push := -transfer * wrong
	return (v*(bridge+capacitor) + push) / (1 + series*(bridge+capacitor))
}

// sequences returns the linearisation at order h in symmetrical components.
// Above order 1: the same admittance for both rotating sequences, nothing for
// the zero sequence. At order 1: constant power in the positive sequence alone.
func (m *frontState) sequences(h int) (direct, mirror [3][3]complex128) {
	const p, n = phasor.Positive, phasor.Negative
	if h == 1 {
		direct[p][p], mirror[p][p] = m.direct, m.mirror
		return direct, mirror
	}
	y := m.drawn(float64(h), 1, 0)
	direct[p][p], direct[n][n] = y, y
	return direct, mirror
}

// blocks returns the same over the phases.
func (m *frontState) blocks(h int) (direct, mirror [3][3]complex128) {
	ds, ms := m.sequences(h)
	for q := 0; q < 3; q++ {
		var unit [3]complex128
		unit[q] = 1
		v := phasor.ToSequence(unit)
		var d, w [3]complex128
		for s := range d {
			for t := range v {
				d[s] += ds[s][t] * v[t]
				w[s] += ms[s][t] * cmplx.Conj(v[t])
			}
		}
		d, w = phasor.ToPhase(d), phasor.ToPhase(w)
		for p := 0; p < 3; p++ {
			direct[p][q], mirror[p][q] = d[p], w[p]
		}
	}
	return direct, mirror
}

// follow sets how the order 1 current follows the EMF behind z: at the bus
// I = P / (3 conj(V)), so dI = k conj(dV) with k = -P / (3 conj(V)^2), and
// dV = dE - z dI.
func (m *frontState) follow(bus, z complex128, watts float64) {
	c := cmplx.Conj(bus)
	k := -complex(watts/3, 0) / (c * c)
	size := complex(1-square(k*z), 0)
	m.direct, m.mirror = -k*cmplx.Conj(k*z)/size, k/size
}

// solveFront returns what an active front end draws.
func solveFront(n Nameplate, t Terminal, o Options) (*Result, error) {
	w := t.omega()
	f := n.Front.withDefaults(n, w)
	if err := f.check(); err != nil {
		return nil, err
	}
	m := &frontState{f: f, w: w, zr: t.SourceR + n.ReactorOhm, zx: w * (t.SourceL + n.ReactorH)}
	seq := phasor.ToSequence([3]complex128{t.Voltage[0].At(1), t.Voltage[1].At(1), t.Voltage[2].At(1)})
	emf := seq[phasor.Positive]
	source := complex(t.SourceR, w*t.SourceL)
	current, bus, err := powerFlow(emf, source, n.PowerW)
	if err != nil {
		return nil, err
	}
	m.follow(bus, source, n.PowerW)
	if err := m.stable(); err != nil {
		return nil, err
	}
	// the bridge voltage must fit into the direct voltage
	bridgeV := bus - current*complex(n.ReactorOhm, w*n.ReactorH) - current*complex(f.InductorOhm, w*f.InductorH)
	depth := math.Sqrt2 * cmplx.Abs(bridgeV) / (f.DirectV / sqrt3)
	if depth > 1 {
		return nil, condition(BadValue, "DirectV", "raise the direct voltage", "a direct voltage of %.0f V cannot form the bridge voltage of %.0f V, so the current would not stay sinusoidal", f.DirectV, sqrt3*cmplx.Abs(bridgeV))
	}

	r := &Result{Conduction: Modulated, DirectV: f.DirectV, DirectA: n.PowerW / f.DirectV, order: o.Order, front: m}
	r.State, r.voltage = &State{plate: n, source: t}, cloned(t.Voltage)
	r.State.source.Voltage = [3]phasor.Spectrum{}
	for p := range r.Current {
		r.Current[p] = phasor.New(o.Order)
		turn := cmplx.Rect(1, -2*math.Pi/3*float64(p))
		r.Current[p][1] = current * turn
	}
	dead := f.DirectV * f.DeadTimeS * f.SwitchingHz
	phase := cmplx.Phase(current)
	for h := 2; h <= o.Order; h++ {
		var zero complex128
		for q := range t.Voltage {
			zero += t.Voltage[q].At(h) / 3
		}
		for p := range r.Current {
			var wrong complex128
			if h%6 == 1 || h%6 == 5 {
				// a square wave in step with the line current
				size := 4 * dead / (math.Pi * float64(h)) / math.Sqrt2
				if h%4 == 3 {
					size = -size
				}
				wrong = complex(size, 0) * cmplx.Rect(1, float64(h)*(phase-2*math.Pi/3*float64(p)))
			}
			r.Current[p][h] = m.drawn(float64(h), t.Voltage[p].At(h)-zero, wrong)
		}
	}
	r.Switching = m.switching(math.Sqrt2*cmplx.Abs(bridgeV)/(f.DirectV/2), t.FrequencyHz)
	r.Balance = Balance{
		InputW: 3 * real(emf*cmplx.Conj(current)), SourceW: 3 * t.SourceR * square(current), LoadW: n.PowerW,
	}
	r.Balance.Error = (r.Balance.InputW - r.Balance.SourceW - r.Balance.LoadW) / r.Balance.InputW
	return r, nil
}

func square(z complex128) float64 { return real(z)*real(z) + imag(z)*imag(z) }

// powerFlow returns the positive-sequence current, and the bus voltage, of a
// constant power at unity displacement behind z: |E|^2 = |V + z P/(3 V)|^2 on
// the upper branch.
func powerFlow(emf, z complex128, watts float64) (current, bus complex128, err error) {
	e, r, x, p := cmplx.Abs(emf), real(z), imag(z), watts/3
	if !(e > 0) {
		return 0, 0, condition(BadSupply, "Voltage", "check the phase sequence of the supply", "the supply has no positive sequence")
	}
	// u = V^2: u^2 + (2 r p - e^2) u + |z|^2 p^2 = 0
	b := 2*r*p - e*e
	disc := b*b - 4*(r*r+x*x)*p*p
	if b > 0 || disc < 0 {
		// the most at unity displacement: e^2 / (2 (|z| + r)) a phase
		most := 3 * e * e / (2 * (math.Hypot(r, x) + r))
		return 0, 0, &ConditionError{
			Condition: WeakSupply, Field: "PowerW", AvailableW: most,
			Reason: "behind this impedance a converter at unity displacement can draw " + power(most) + " at most, not " + power(watts),
			Remedy: "lower the power or the impedance",
		}
	}
	v := math.Sqrt((-b + math.Sqrt(disc)) / 2)
	// E = V + (r + jx) p/V with V real
	lead := cmplx.Phase(complex(v+r*p/v, x*p/v))
	turn := cmplx.Rect(1, cmplx.Phase(emf)-lead)
	return complex(p/v, 0) * turn, complex(v, 0) * turn, nil
}

func (f FrontEnd) check() error {
	for _, v := range []struct {
		name  string
		value float64
		most  float64
	}{
		{"SwitchingHz", f.SwitchingHz, 1e6}, {"DelayS", f.DelayS, 0.1}, {"BandwidthHz", f.BandwidthHz, 1e6}, {"InductorH", f.InductorH, 10},
		{"InductorOhm", f.InductorOhm, 1e4}, {"FilterF", f.FilterF, 1}, {"DampingOhm", f.DampingOhm, 1e4}, {"DirectV", f.DirectV, 1e6},
		{"DeadTimeS", f.DeadTimeS, 1e-3}, {"Feedforward", f.Feedforward, 1},
	} {
		if !(v.value >= 0 && v.value <= v.most) {
			return condition(BadValue, v.name, "check the value and its unit", "the value is %g", v.value)
		}
	}
	return nil
}

// stable refuses a control that oscillates: by itself when its delay eats the
// phase margin of 90 degrees, with its filter and the supply where their
// common resonance meets negative damping (the positive-net-damping criterion;
// common practice).
func (m *frontState) stable() error {
	if 2*math.Pi*m.f.BandwidthHz*m.f.DelayS >= math.Pi/2 {
		return condition(Unstable, "BandwidthHz", "lower the bandwidth or the delay", "a current control of %.0f Hz with a delay of %.0f us has no phase margin left", m.f.BandwidthHz, 1e6*m.f.DelayS)
	}
	if m.zx == 0 {
		return nil
	}
	total := func(x float64) complex128 {
		bridge, capacitor, series, _ := m.branches(x)
		return bridge + capacitor + 1/series
	}
	last := total(2 * m.w)
	const steps = 2000
	top := math.Pi * m.f.SwitchingHz
	for i := 1; i <= steps; i++ {
		x := 2*m.w + (top-2*m.w)*float64(i)/steps
		y := total(x)
		// a parallel resonance: the susceptance rises through zero
		if imag(last) < 0 && imag(y) >= 0 && real(y) < 0 && real(last) < 0 {
			return condition(Unstable, "DelayS", "damp the filter, lower the bandwidth or the delay",
				"filter and supply resonate at order %.1f, where the delayed control feeds the oscillation instead of damping it", x/m.w)
		}
		last = y
	}
	return nil
}
