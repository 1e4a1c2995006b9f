package converter

import (
	"context"
	"math"
	"math/cmplx"
	"testing"

	"quietbus/study/phasor"
)

// front is a 100 kW, 400 V active front end of our own invention.
func front() (Nameplate, Terminal) {
	w := 2 * math.Pi * 50
	base := 400.0 * 400 / 100e3
	n := Nameplate{Kind: KindActiveFrontEnd, VoltageV: 400, PowerW: 100e3, ReactorH: 0.03 * base / w, ReactorOhm: 0.003 * base,
		Front: FrontEnd{FilterF: 100e-6, DampingOhm: 0.5, DeadTimeS: 2e-6, Feedforward: 0.8}}
	return n, Balanced(400, 50, 0.005*base, 0.02*base/w)
}

// Source: THD range of an active front end, 3 to 5 % (handbook range, memory,
// medium confidence), as plausibility on a bus with 2 to 3 % voltage
// distortion; on a clean bus less.
func TestActiveFrontEndPlausible(t *testing.T) {
	n, term := front()
	clean := phasor.THD(mustSolve(t, n, term, 50).Current[0])
	dirty := phasor.THD(mustSolve(t, n, distorted(term, 0.1, 0.4), 50).Current[0])
	if !(clean > 1e-4 && clean < 0.03) {
		t.Errorf("THD %.2f %% on a clean bus", 100*clean)
	}
	if !(dirty > clean && dirty > 0.01 && dirty < 0.06) {
		t.Errorf("THD %.2f %% on a distorted bus, %.2f %% on a clean one", 100*dirty, 100*clean)
	}
}

// Power, displacement at the bus and losses (mark: derived).
func TestActiveFrontEndPower(t *testing.T) {
	n, term := front()
	r := mustSolve(t, n, term, 25)
	if math.Abs(r.Balance.Error) > 1e-9 {
		t.Errorf("balance %g", r.Balance.Error)
	}
	z := complex(term.SourceR, term.SourceL*term.omega())
	bus := term.Voltage[0][1] - z*r.Current[0][1]
	if s := 3 * bus * cmplx.Conj(r.Current[0][1]); math.Abs(real(s)-100e3) > 1e-3 || math.Abs(imag(s)) > 1e-3 {
		t.Errorf("draws %v at its bus", s)
	}
	for h := 2; h <= 25; h++ {
		if h%6 != 1 && h%6 != 5 && cmplx.Abs(r.Current[0][h]) > 1e-9 {
			t.Errorf("order %d of a balanced supply: %v", h, r.Current[0][h])
		}
	}
}

// Limits in which the admittance is known (mark: derived): without delay and
// with full feed-forward the bridge is deaf to the voltage; without
// feed-forward and with next to no bandwidth it is its inductance alone; an
// ideal proportional control adds the resistance 2 pi Bandwidth L1.
func TestActiveFrontEndAdmittance(t *testing.T) {
	w := 2 * math.Pi * 50
	l := 1e-3
	y := func(f FrontEnd, h float64) complex128 {
		f.InductorH = l
		m := &frontState{f: f, w: w}
		return m.drawn(h, 1, 0)
	}
	for _, h := range []float64{5, 7, 25} {
		own := complex(0, h*w*l)
		for _, c := range []struct {
			name string
			f    FrontEnd
			want complex128
		}{
			{"deaf", FrontEnd{BandwidthHz: 200, Feedforward: 1}, 0},
			{"slow", FrontEnd{BandwidthHz: 1e-9}, 1 / own},
			{"resistive", FrontEnd{BandwidthHz: 200}, 1 / (own + complex(2*math.Pi*200*l, 0))},
		} {
			if got := y(c.f, h); cmplx.Abs(got-c.want) > 1e-6*cmplx.Abs(1/own) {
				t.Errorf("%s at order %g: %v, want %v", c.name, h, got, c.want)
			}
		}
	}
	// a delay of a quarter period of the order turns the resistance of the
	// control into reactance; of more, into negative resistance
	if got := y(FrontEnd{BandwidthHz: 200, DelayS: 0.02 / 25 * 0.35}, 25); real(got) >= 0 {
		t.Errorf("delayed by 126 degrees the control should feed order 25: %v", got)
	}
}

// Second road: linearisation against solutions at changed voltages.
func TestActiveFrontEndNorton(t *testing.T) {
	n, term := front()
	n.Front.DeadTimeS = 0 // its voltage follows the current's phase, which is left out
	term = distorted(term, 0.1, 0.2)
	base := mustSolve(t, n, term, 13)
	norton, err := base.Norton(context.Background(), 13)
	if err != nil {
		t.Fatal(err)
	}
	for _, h := range []int{1, 5, 7, 12} {
		for _, turn := range []complex128{1, 1i} {
			v, back := term, term
			v.Voltage, back.Voltage = clone(term.Voltage, 50), clone(term.Voltage, 50)
			v.Voltage[1][h] += 0.01 * turn
			back.Voltage[1][h] -= 0.01 * turn
			up, down := mustSolve(t, n, v, 13), mustSolve(t, n, back, 13)
			predicted := norton.Predict(v.Voltage)
			for p := 0; p < 3; p++ {
				for k := 1; k <= 13; k++ {
					want := (up.Current[p][k] - down.Current[p][k]) / 2
					if got := predicted[p][k] - base.Current[p][k]; cmplx.Abs(got-want) > 1e-4*cmplx.Abs(want)+1e-6 {
						t.Errorf("order %d by %d: %v, want %v", k, h, got, want)
					}
				}
			}
		}
	}
}

// Carrier lines at full modulation (M = 1). Source: Jn(pi/2), Jn(pi) from
// tables of Bessel functions (mark: derived): J2(pi/2) = 0.24970,
// J1(pi) = 0.28462; the first pair of lines stands 2 (2/pi) J2 Vd/2, the second
// 2 (1/pi) J1 Vd/2 (Mohan, Undeland, Robbins, Power Electronics, 3rd ed.,
// table of bridge harmonics at M = 1: 0.318 and 0.181, from memory).
func TestCarrierLines(t *testing.T) {
	const vd = 600.0
	lines := carrierLines(vd, 1, 4000, 50)
	want := map[float64]float64{3900: 0.318, 4100: 0.318, 7950: 0.181, 8050: 0.181}
	for _, l := range lines {
		if w, ok := want[l.FrequencyHz]; ok {
			if got := l.BridgeV * math.Sqrt2 / (vd / 2); math.Abs(got-w) > 1e-3 {
				t.Errorf("%g Hz: %.4f of Vd/2, want %.3f", l.FrequencyHz, got, w)
			}
			delete(want, l.FrequencyHz)
		}
		if l.FrequencyHz == 4000 {
			t.Error("the carrier itself is alike in all legs")
		}
	}
	if len(want) > 0 {
		t.Errorf("missing %v", want)
	}
	// behind a plain inductance the current is V / (w L)
	m := &frontState{w: 2 * math.Pi * 50, f: FrontEnd{InductorH: 1e-3, SwitchingHz: 4000, DirectV: vd}}
	for _, l := range m.switching(1, 50) {
		if got, want := l.CurrentA, l.BridgeV/(2*math.Pi*l.FrequencyHz*1e-3); math.Abs(got/want-1) > 1e-12 {
			t.Errorf("%g Hz: %g A, want %g", l.FrequencyHz, got, want)
		}
	}
}

func TestActiveFrontEndConditions(t *testing.T) {
	n, term := front()
	for name, c := range map[string]struct {
		change func(*Nameplate, *Terminal)
		want   Condition
	}{
		"weak":   {func(n *Nameplate, t *Terminal) { t.SourceL *= 40 }, WeakSupply},
		"low dc": {func(n *Nameplate, t *Terminal) { n.Front.DirectV = 500 }, BadValue},
		"fast":   {func(n *Nameplate, t *Terminal) { n.Front.BandwidthHz = 900 }, Unstable},
		"undamped": {func(n *Nameplate, t *Terminal) {
			n.Front.DampingOhm = 0
			n.Front.FilterF = 60e-6
			n.ReactorOhm, t.SourceR = 0, 0
		}, Unstable},
		"negative": {func(n *Nameplate, t *Terminal) { n.Front.FilterF = -1 }, BadValue},
	} {
		m, tt := n, term
		c.change(&m, &tt)
		_, err := Solve(context.Background(), m, tt, Options{})
		expect(t, name, err, c.want)
	}
}

// Delay: what is left of an order is |1 - e^-ja| = 2 sin(a/2), so 60 degrees
// leave it as it was (mark: derived).
func TestActiveFilterDelay(t *testing.T) {
	load := phasor.Balanced(phasor.Spectrum{0, 100, 0, 0, 0, 20, 0, 14, 0, 0, 0, 9, 0, 7})
	f := ActiveFilter{RatedA: 100, MaxOrder: 11, Share: 1, DelayS: 0.02 / 360 * 60 / 7}
	c, err := f.Compensate(load, 50, 400)
	if err != nil {
		t.Fatal(err)
	}
	for h, want := range map[int]float64{1: 100, 5: 20 * 2 * math.Sin(5.0/7*30*math.Pi/180), 7: 14, 11: 9 * 2 * math.Sin(11.0/7*30*math.Pi/180), 13: 7} {
		if got := cmplx.Abs(c.Line[0][h]); math.Abs(got-want) > 1e-9 {
			t.Errorf("order %d: %.6f A left, want %.6f", h, got, want)
		}
	}
	if len(c.Amplified) != 1 || c.Amplified[0] != 11 {
		t.Errorf("amplified %v, want order 11", c.Amplified)
	}
	f.Selective = true
	if c, err = f.Compensate(load, 50, 400); err != nil {
		t.Fatal(err)
	}
	if cmplx.Abs(c.Line[0][5])+cmplx.Abs(c.Line[0][11]) > 1e-9 || cmplx.Abs(c.Line[0][13]) != 7 {
		t.Error("selective control should remove orders up to the ceiling and no more")
	}
}

// Saturation: every order scaled to the rating (mark: derived).
func TestActiveFilterSaturation(t *testing.T) {
	load := phasor.Balanced(phasor.Spectrum{0, 100, 0, 0, 0, 30, 0, 40})
	f := ActiveFilter{RatedA: 25, CrestA: 1000, MaxOrder: 25, Share: 1, SwitchingHz: 16000, DirectV: 700, InductorH: 2e-3}
	c, err := f.Compensate(load, 50, 400)
	if err != nil {
		t.Fatal(err)
	}
	if !c.Saturated || math.Abs(c.RequestedA-50) > 1e-9 || math.Abs(c.DeliveredA-25) > 1e-9 || math.Abs(cmplx.Abs(c.Line[1][5])-15) > 1e-9 {
		t.Errorf("asked %g, delivered %g, scale %g, left %v", c.RequestedA, c.DeliveredA, c.Scale, c.Line[1][5])
	}
	if len(c.Switching) == 0 {
		t.Error("no switching lines")
	}
	f.CrestA = 20
	if c, err = f.Compensate(load, 50, 400); err != nil || phasor.Peak(c.Injected[2]) > 20*(1+1e-6) {
		t.Errorf("crest above its limit: %v", err)
	}
	if _, err = (ActiveFilter{MaxOrder: 25}).Compensate(load, 50, 400); err == nil {
		t.Error("no rating, no error")
	}
}
