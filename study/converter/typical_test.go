package converter

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"
)

func TestTypicalSaysWhereItIsFrom(t *testing.T) {
	seen := map[string]bool{}
	for _, m := range Typical() {
		if seen[m.Name] || m.Title == "" || m.Source == "" || len(m.Lines) == 0 {
			t.Errorf("%q: repeated, or without title, source or lines", m.Name)
		}
		seen[m.Name] = true
		if m.Mark != "found" && m.Mark != "memory" && m.Mark != "derived" {
			t.Errorf("%s has mark %q", m.Name, m.Mark)
		}
		if m.Mark == "memory" && !strings.Contains(m.Source, "from memory") {
			t.Errorf("%s is from memory and does not say so: %s", m.Name, m.Source)
		}
		last := -1
		for _, l := range m.Lines {
			if l.Order <= last || l.Order == 1 || !(l.Percent > 0) || !(l.AngleDeg > -180 && l.AngleDeg <= 180) {
				t.Errorf("%s: line %+v after order %d", m.Name, l, last)
			}
			last = l.Order
			if m.ThreePhase && l.Order == 0 {
				t.Errorf("%s: a three-phase kind holds direct current", m.Name)
			}
		}
	}
	for _, name := range []string{"six-pulse", "six-pulse-3pct", "six-pulse-5pct", "twelve-pulse", "eighteen-pulse", "active-front-end",
		"single-phase-supply", "led-lighting", "ups", "ev-charger", "ev-charger-dc", "half-wave", "dc-drive", "arc-furnace-melting", "electronic-ballast"} {
		if m, ok := Lookup(name); !ok || m.Name != name {
			t.Errorf("no typical spectrum %q", name)
		}
	}
	if _, ok := Lookup("typed"); ok {
		t.Error("Lookup finds what is not there")
	}
}

// THD of the listed orders (derived from spectra recalled from the sources the
// models name), and handbook ranges (IEEE 399, IEEE 519-1992, Dugan and
// others; memory, medium) for the kinds whose shares are assumed.
func TestTypicalDistortion(t *testing.T) {
	for name, want := range map[string]float64{
		"six-pulse": 102.5, "six-pulse-3pct": 44.5, "six-pulse-5pct": 34.96, "six-pulse-smooth": 21.46, "twelve-pulse": 10.09, "eighteen-pulse": 6.493,
		"single-phase-supply": 109.3, "electronic-ballast": 21.7, "dc-drive": 35.2, "arc-furnace-melting": 11.24, "arc-furnace-refining": 2.9,
	} {
		m, _ := Lookup(name)
		near(t, name+" THD", thd(m.Lines), want, 6e-4*want)
	}
	for name, r := range map[string][2]float64{
		"six-pulse": {80, 120}, "six-pulse-3pct": {38, 48}, "six-pulse-5pct": {30, 38}, "twelve-pulse": {8, 14}, "eighteen-pulse": {4, 8},
		"active-front-end": {3, 5}, "led-lighting": {8, 25}, "electronic-ballast": {8, 32}, "dc-drive": {25, 40}, "single-phase-supply": {80, 140},
		"ev-charger-single": {5, 20},
	} {
		m, _ := Lookup(name)
		if v := thd(m.Lines); v < r[0] || v > r[1] {
			t.Errorf("%s: THD %.1f %%, handbook range %g to %g", name, v, r[0], r[1])
		}
	}
}

func TestWithReactance(t *testing.T) {
	// Half way between the rows of 3 and 4 %.
	m := WithReactance(3.5)
	near(t, "5th", m.Lines[0].Percent, 37, 1e-12)
	near(t, "7th", m.Lines[1].Percent, 15, 1e-12)
	near(t, "5th angle", m.Lines[0].AngleDeg, 99, 1e-12)
	near(t, "19th angle", m.Lines[5].AngleDeg, wrapped(-172.5), 1e-12)
	for _, x := range []float64{0.5, 1, 1.5, 2, 3, 4, 5, 6} { // the rows themselves
		for _, row := range byReactance {
			if row.reactance != x {
				continue
			}
			for k, l := range WithReactance(x).Lines {
				near(t, "row", l.Percent, row.percent[k], 1e-12)
			}
		}
	}
	last := math.Inf(1)
	for x := 0.5; x <= 6; x += 0.05 { // more reactance, less distortion
		if v := thd(WithReactance(x).Lines); v > last {
			t.Errorf("THD rises at %.2f %%", x)
		} else {
			last = v
		}
	}
	for x, want := range map[float64]float64{0: 80, -1: 80, 0.2: 80, 9: 30, math.Inf(1): 30} {
		m := WithReactance(x)
		near(t, "outside the table", m.Lines[0].Percent, want, 1e-12)
		if !strings.Contains(m.Source, "the table holds 0.5 to 6 %") {
			t.Errorf("%g %%: the source does not say that it is outside the table", x)
		}
	}
	if l := WithReactance(math.NaN()).Lines[0]; l.Percent != 80 {
		t.Errorf("NaN gives %+v", l)
	}
	for name, want := range map[string]float64{"six-pulse": 0.5, "six-pulse-3pct": 3, "six-pulse-5pct": 5} {
		if x, ok := ReactanceOf(name); !ok || x != want {
			t.Errorf("%s stands for %g %%", name, x)
		}
	}
	if _, ok := ReactanceOf("twelve-pulse"); ok {
		t.Error("a twelve-pulse converter has no place in the reactance table")
	}
}

// The angles of the reactance table by a second road: a diode bridge that
// feeds a stiff direct voltage, stepped through time to its steady state. The
// direct voltages are those at which it draws 1 pu of power. The magnitudes of
// the table, which are from a trade table, are met to a quarter.
func TestReactanceAngles(t *testing.T) {
	for reactance, direct := range map[float64]float64{0.5: 1.3653, 1: 1.3447, 2: 1.3343, 3: 1.3255, 5: 1.3082, 6: 1.2998} {
		s, power := stiffBridge(reactance/100, direct)
		near(t, "power", power, 1, 0.03)
		for _, l := range WithReactance(reactance).Lines[:4] {
			if d := wrapped(l.AngleDeg - cmplx.Phase(s[l.Order])*180/math.Pi); math.Abs(d) > 4 {
				t.Errorf("%g %%, order %d: angle %.0f degrees, stepped %.0f", reactance, l.Order, l.AngleDeg, l.AngleDeg-d)
			}
		}
		fifth := 100 * cmplx.Abs(s[5]/s[1])
		near(t, "5th", WithReactance(reactance).Lines[0].Percent, fifth, 0.25*fifth)
	}
}

// stiffBridge steps a three-phase diode bridge behind a reactance (per unit of
// the line voltage and the power) into a fixed direct voltage (per unit of the
// rms line voltage). It returns orders 0 to 19 of phase a against the cosine
// of its source voltage, and the power.
func stiffBridge(x, direct float64) (s [20]complex128, power float64) {
	const n, cycles = 6000, 12
	const dt = 2 * math.Pi / n
	var i [3]float64
	for step := range n * cycles {
		var e, rail, to [3]float64
		for p := range e {
			e[p] = math.Sqrt(2.0/3) * math.Cos((float64(step)+0.5)*dt-2*math.Pi/3*float64(p))
		}
		on := conducting(i, e, direct, &rail)
		star, count := 0.0, 0.0
		for p := range on {
			if on[p] {
				star, count = star+rail[p]-e[p], count+1
			}
		}
		if count >= 2 {
			sum, largest := 0.0, 0
			for p := range on {
				if !on[p] {
					continue
				}
				to[p] = i[p] + dt/x*(e[p]-rail[p]+star/count)
				if i[p] != 0 && to[p]*i[p] <= 0 {
					to[p] = 0
				}
				if sum += to[p]; math.Abs(to[p]) > math.Abs(to[largest]) {
					largest = p
				}
			}
			to[largest] -= sum
		}
		i = to
		if step < n*(cycles-1) {
			continue
		}
		for h := range s {
			s[h] += complex(i[0]*math.Sqrt2/n, 0) * cmplx.Rect(1, -float64(h)*(float64(step)+1)*dt)
		}
		for p := range e {
			power += e[p] * i[p] / n
		}
	}
	return s, power
}

// conducting says which phases are connected, and sets the potential of those
// on the positive rail.
func conducting(i, e [3]float64, direct float64, rail *[3]float64) (on [3]bool) {
	count, open, high, low := 0, 0, 0, 0
	for p := range i {
		if on[p] = i[p] != 0; on[p] {
			count++
		} else {
			open = p
		}
		if i[p] > 0 {
			rail[p] = direct
		}
		if e[p] > e[high] {
			high = p
		}
		if e[p] < e[low] {
			low = p
		}
	}
	switch count {
	case 0:
		if e[high]-e[low] > direct {
			on[high], on[low], rail[high] = true, true, direct
		}
	case 2:
		star := 0.0
		for p := range on {
			if on[p] {
				star += (rail[p] - e[p]) / 2
			}
		}
		if v := e[open] + star; v > direct {
			on[open], rail[open] = true, direct
		} else if v < 0 {
			on[open] = true
		}
	}
	return on
}
