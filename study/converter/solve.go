package converter

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
	"reflect"
	"slices"
	"sync"

	"quietbus/study/converter/internal/piecewise"
	"quietbus/study/phasor"
)

// State is where a solution ended. Given as Options.Warm it makes the solution
// at a voltage nearby, or of a nameplate little changed, cheap. It serves one
// solution at a time; others wait.
type State struct {
	mu     sync.Mutex
	plate  Nameplate
	source Terminal // without its voltages
	solver *piecewise.Solver
	plant  *plant
	at     []float64 // V, mean voltage of the links; there a tight power is linearised
}

const (
	tangentTol = 1e-3 // change of the mean voltage that calls for a new tangent
	balanceTol = 1e-3
	growth     = 1 + 1e-6
)

// Solve returns the steady state of a converter behind a terminal. Errors are
// *ConditionError, or the context's.
func Solve(ctx context.Context, n Nameplate, t Terminal, o Options) (*Result, error) {
	if o.Order <= 0 {
		o.Order = phasor.DefaultOrder
	}
	n = n.withDefaults()
	if err := t.check(); err != nil {
		return nil, err
	}
	if err := n.check(t); err != nil {
		return nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	if n.Kind == KindActiveFrontEnd {
		return solveFront(n, t, o)
	}
	if s := o.Warm; s != nil && s.matches(n, t) {
		if r, err := s.run(ctx, t, o.Order); err == nil || ctx.Err() != nil {
			return r, err
		}
	}
	r, err := fromCold(ctx, n, t, o)
	if err == nil || ctx.Err() != nil {
		return r, err
	}
	return rescue(ctx, n, t, o, err)
}

func (s *State) matches(n Nameplate, t Terminal) bool {
	t.Voltage = [3]phasor.Spectrum{}
	return reflect.DeepEqual(s.source, t) && reflect.DeepEqual(s.plate, n)
}

// fromCold solves from an estimate of the direct voltage.
func fromCold(ctx context.Context, n Nameplate, t Terminal, o Options) (*Result, error) {
	s := &State{plate: n, source: t}
	s.source.Voltage = [3]phasor.Spectrum{}
	s.build(t, nil)
	return s.run(ctx, t, o.Order)
}

// build makes the circuit and its start; at nil means an estimate.
func (s *State) build(t Terminal, at []float64) {
	n := s.plate
	if n.Kind == KindControlledReactor || n.Kind == KindControlledResistor {
		s.plant = buildController(n, t)
	} else {
		list, links := rectifiersOf(n, t.omega())
		if at == nil {
			at = make([]float64, links)
			for _, r := range list {
				share := 0.96
				if len(r.legs) == 2 {
					share = 0.9
				}
				at[r.link] = math.Max(at[r.link], share*(crest(r.legs, n.Kind == KindHalfWave, t.Voltage)-2*n.DropV))
			}
			for i := range at {
				at[i] = math.Max(at[i], 1e-3*n.VoltageV)
			}
		}
		s.plant = buildRectifier(n, t, at)
	}
	s.at = at
	s.solver = piecewise.NewSolver(s.plant.c)
	s.solver.Start(s.plant.start)
}

// run solves and takes a new tangent of a tight power until it lies at
// the mean voltage.
func (s *State) run(ctx context.Context, t Terminal, order int) (*Result, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	for try := 0; ; try++ {
		orbit, err := s.solver.Solve(ctx, t.Voltage, max(order, highest(t.Voltage)))
		if err != nil {
			return nil, s.named(err)
		}
		moved := false
		nb, nv := len(s.plant.c.X), len(s.plant.c.Y)
		for i, l := range s.plant.links {
			if l.at == 0 {
				continue
			}
			mean := orbit.Moments[nb+l.capacitor][nb+nv]
			if math.Abs(mean/l.at-1) > tangentTol {
				moved = true
			}
			s.at[i] = mean
		}
		if !moved || try == 8 {
			return s.read(orbit, t, order)
		}
		next := &State{plate: s.plate, source: s.source}
		next.build(t, append([]float64(nil), s.at...))
		// the solved state, with the parameter of the new tangent
		start := append([]float64(nil), next.plant.start...)
		for _, l := range next.plant.links {
			if l.capacitor >= 0 {
				start[nb+l.capacitor] = orbit.Moments[nb+l.capacitor][nb+nv]
			}
			if l.armature >= 0 {
				start[l.armature] = orbit.State[l.armature]
			}
		}
		next.solver.Start(start)
		s.solver, s.plant, s.at = next.solver, next.plant, next.at
	}
}

// named turns an engine error into a condition.
func (s *State) named(err error) error {
	switch {
	case errors.Is(err, piecewise.ErrInconsistent):
		return condition(NotSettled, "", "check the nameplate values; a small line reactor usually makes the case well defined", "the valves find no order in which to conduct")
	case errors.Is(err, piecewise.ErrDiverged), errors.Is(err, piecewise.ErrNotPeriodic):
		return condition(NotSettled, "", "check the nameplate values against each other", "the search for a periodic state ended without one (%v)", err)
	}
	return err
}

// read turns an orbit into a result and checks it.
func (s *State) read(o *piecewise.Orbit, t Terminal, order int) (*Result, error) {
	p := s.plant
	r := &Result{
		voltage: cloned(t.Voltage),
		Current: truncated(o.Lines, order), Iterations: o.Passes, Residual: o.Correction, Multiplier: cmplx.Abs(o.Multiplier),
		State: s, plant: p, orbit: o, order: order,
	}
	p.measure(r, o)
	r.Balance = p.balance(o, t)
	for q := range r.Current {
		for _, z := range r.Current[q] {
			if cmplx.IsNaN(z) || cmplx.IsInf(z) {
				return nil, condition(FailedItsCheck, "", "report the case", "the spectrum is not a number")
			}
		}
	}
	if err := p.judge(s.plate, r, o); err != nil {
		return nil, err
	}
	if !(math.Abs(r.Balance.Error) < balanceTol) {
		return nil, condition(FailedItsCheck, "", "report the case", "the energy balance misses %.3g %% of the input", 100*r.Balance.Error)
	}
	return r, nil
}

// highest returns the highest order of the voltages.
func highest(v [3]phasor.Spectrum) int {
	return max(v[0].Order(), v[1].Order(), v[2].Order())
}

func truncated(v [3]phasor.Spectrum, order int) [3]phasor.Spectrum {
	for q := range v {
		v[q] = v[q][:order+1]
	}
	return v
}

func cloned(v [3]phasor.Spectrum) [3]phasor.Spectrum {
	for q := range v {
		v[q] = slices.Clone(v[q])
	}
	return v
}
