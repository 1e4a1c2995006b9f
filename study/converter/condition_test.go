package converter

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"strings"
	"testing"
	"time"
)

// expect checks a named condition with a reason that can be read.
func expect(t *testing.T, name string, err error, want Condition) {
	t.Helper()
	var c *ConditionError
	if !errors.As(err, &c) {
		t.Errorf("%s: %v, want %q", name, err, want)
		return
	}
	if c.Condition != want || len(c.Reason) < 10 || strings.Contains(c.Error(), "%!") || (strings.Contains(c.Error(), "NaN") && name != "NaN") {
		t.Errorf("%s: %q, want %q", name, c.Error(), want)
	}
	if want == WeakSupply && !(c.AvailableW > 0) {
		t.Errorf("%s: does not say how much power there is: %v", name, c)
	}
}

func TestNamedConditions(t *testing.T) {
	w := 2 * math.Pi * 50
	base := 400.0 * 400 / 100e3
	for name, c := range map[string]struct {
		change func(*Nameplate, *Terminal)
		want   Condition
	}{
		"stiff":           {func(n *Nameplate, t *Terminal) { n.ReactorH, t.SourceL = 0, 0 }, StiffSupply},
		"no capacitor":    {func(n *Nameplate, t *Terminal) { n.CapacitorF = 0 }, NoCapacitor},
		"microfarad as F": {func(n *Nameplate, t *Terminal) { n.CapacitorF = 7500 }, HugeCapacitor},
		"no load":         {func(n *Nameplate, t *Terminal) { n.PowerW = 0 }, NoLoad},
		"weak":            {func(n *Nameplate, t *Terminal) { t.SourceL = 1.2 * base / w }, WeakSupply},
		"very weak":       {func(n *Nameplate, t *Terminal) { t.SourceL = 50 * base / w }, WeakSupply},
		"weak, choke":     {func(n *Nameplate, t *Terminal) { t.SourceL = 1.2 * base / w; n.Smoothing, n.ChokeH = ByChoke, 5e-3 }, WeakSupply},
		"weak, motor": {func(n *Nameplate, t *Terminal) {
			t.SourceL = 1.2 * base / w
			n.Load, n.ArmatureH, n.ArmatureOhm = Motor, 1e-3, 0.05
		}, WeakSupply},
		"short circuit": {func(n *Nameplate, t *Terminal) {
			n.Smoothing, n.ChokeH, n.Load, n.LoadOhm = ByChoke, 1e-3, Resistive, 1e-5
		}, FullOverlap},
		"nothing conducts": {func(n *Nameplate, t *Terminal) {
			n.Kind, n.Smoothing, n.ChokeH, n.Load, n.LoadOhm, n.FiringDeg = KindThyristorBridge, ByChoke, 1e-3, Resistive, 5, 125
		}, NoConduction},
		"tight power rings": {func(n *Nameplate, t *Terminal) {
			n.Load, n.ReactorH, n.ChokeH, n.CapacitorF = TightPower, 0, 0.06*base/w, 2e-3
		}, Unstable},
		"dead bus":          {func(n *Nameplate, t *Terminal) { t.Voltage[0], t.Voltage[1], t.Voltage[2] = nil, nil, nil }, BadSupply},
		"direct voltage":    {func(n *Nameplate, t *Terminal) { t.Voltage = clone(t.Voltage, 1); t.Voltage[0][0] = 2 }, BadSupply},
		"not a number":      {func(n *Nameplate, t *Terminal) { t.Voltage = clone(t.Voltage, 1); t.Voltage[1][1] = cmplx.NaN() }, BadSupply},
		"negative":          {func(n *Nameplate, t *Terminal) { n.ReactorH = -1e-4 }, BadValue},
		"NaN":               {func(n *Nameplate, t *Terminal) { n.ChokeOhm = math.NaN() }, BadValue},
		"no frequency":      {func(n *Nameplate, t *Terminal) { t.FrequencyHz = 0 }, BadValue},
		"unknown kind":      {func(n *Nameplate, t *Terminal) { n.Kind = "mystery" }, BadValue},
		"wrong connection":  {func(n *Nameplate, t *Terminal) { n.Connection = PhaseAB }, BadValue},
		"reactor fired low": {func(n *Nameplate, t *Terminal) { n.Kind, n.FiringDeg = KindControlledReactor, 60 }, BadValue},
		"sections":          {func(n *Nameplate, t *Terminal) { n.Kind, n.Sections = KindTwelvePulse, make([]Section, 3) }, BadValue},
		"unsmoothed":        {func(n *Nameplate, t *Terminal) { n.Kind, n.Smoothing = KindThyristorBridge, ByChoke }, BadValue},
	} {
		n, term := drive()
		c.change(&n, &term)
		began := time.Now()
		r, err := Solve(context.Background(), n, term, Options{})
		expect(t, name, err, c.want)
		if r != nil && err == nil {
			t.Errorf("%s: a result of THD with %v", name, r.Conduction)
		}
		if took := time.Since(began); took > 3*time.Second {
			t.Errorf("%s: took %v", name, took)
		}
	}
}

// Extremes that are physical must not be refused.
func TestExtremesThatWork(t *testing.T) {
	for name, change := range map[string]func(*Nameplate, *Terminal){
		"hundredth of the load":         func(n *Nameplate, t *Terminal) { n.PowerW /= 100 },
		"ten times the capacitor":       func(n *Nameplate, t *Terminal) { n.CapacitorF *= 10 },
		"a hundred times the capacitor": func(n *Nameplate, t *Terminal) { n.CapacitorF *= 100 },
		"slim link":                     func(n *Nameplate, t *Terminal) { n.CapacitorF /= 40; n.ReactorH /= 3 },
		"stiff":                         func(n *Nameplate, t *Terminal) { n.ReactorH, t.SourceL, t.SourceR = 0, t.SourceL/50, t.SourceR/50 },
		"weak":                          func(n *Nameplate, t *Terminal) { t.SourceL *= 15 },
		"one phase lost": func(n *Nameplate, t *Terminal) {
			t.Voltage = clone(t.Voltage, 1)
			t.Voltage[2][1] *= 0.02
			n.PowerW /= 2
		},
	} {
		n, term := drive()
		change(&n, &term)
		r, err := Solve(context.Background(), n, term, Options{})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if math.Abs(r.Balance.LoadW/n.PowerW-1) > 1e-3 || math.Abs(r.Balance.Error) > 1e-3 {
			t.Errorf("%s: %+v", name, r.Balance)
		}
	}
}

func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	n, term := drive()
	if _, err := Solve(ctx, n, term, Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("solve: %v", err)
	}
	r := mustSolve(t, n, term, 25)
	if _, err := r.Norton(ctx, 25); !errors.Is(err, context.Canceled) {
		t.Errorf("norton: %v", err)
	}
}
