package study

import (
	"context"
	"fmt"
	"math"

	"quietbus/study/grid"
	"quietbus/study/phasor"
)

// BusShare is how much a bus takes part in a resonance: the shares of all buses
// add to about one.
type BusShare struct {
	Bus   string
	Share float64
}

// Place says where a resonance swings most: "strongest at MSB (62 %)"; empty
// when it cannot be told.
func (p Peak) Place() string {
	if len(p.Buses) == 0 {
		return ""
	}
	return fmt.Sprintf("strongest at %s (%.0f %%)", p.Buses[0].Bus, 100*p.Buses[0].Share)
}

func (m *model) shares(mode *grid.Mode) []BusShare {
	out := make([]BusShare, len(mode.Buses))
	for i, b := range mode.Buses {
		out[i] = BusShare{m.plan.study.Buses[b.Bus].Name, b.Share}
	}
	return out
}

// Modes returns the resonances of the whole network in one sequence between
// two orders, with the named measures on, in an operating state, rising: found at whatever bus they
// show, with the items that make them. EMFs are shorted and non-linear loads
// open; single-phase loads are left out.
//
// Errors: as for Evaluate.
func (p *Prepared) Modes(ctx context.Context, on []string, state string, seq phasor.Sequence, from, to float64) ([]Peak, error) {
	m, err := p.model(on, state)
	if err != nil {
		return nil, err
	}
	list, err := m.system.Modes(ctx, seq, from, to)
	if err != nil {
		return nil, m.named(err)
	}
	out := make([]Peak, len(list))
	for i := range list {
		mode := &list[i]
		out[i] = Peak{Order: mode.Order, Ohm: mode.Ohm, Q: mode.Q, Buses: m.shares(mode), mode: mode}
		out[i].Capacitive, out[i].Inductive = m.sides(mode.Elements)
	}
	return out, nil
}

// A Move is what becomes of a resonance when measures are flipped: Before is
// nil for one that is new, After for one that is gone.
type Move struct{ Before, After *Peak }

// Moves pairs the resonances of one bus, or of one network, before and after
// measures are flipped: those whose shapes are most alike and whose orders are
// within a factor of three. In rising order of the resonance before, new ones
// last.
func Moves(before, after []Peak) []Move {
	taken := make([]bool, len(after))
	partner := make([]int, len(before))
	for i := range partner {
		partner[i] = -1
	}
	for range before {
		best, bi, bj := 0.5, -1, -1
		for i := range before {
			if partner[i] >= 0 {
				continue
			}
			for j := range after {
				if !taken[j] {
					if like := alike(&before[i], &after[j]); like > best {
						best, bi, bj = like, i, j
					}
				}
			}
		}
		if bi < 0 {
			break
		}
		partner[bi], taken[bj] = bj, true
	}
	var out []Move
	for i := range before {
		m := Move{Before: &before[i]}
		if j := partner[i]; j >= 0 {
			m.After = &after[j]
		}
		out = append(out, m)
	}
	for j := range after {
		if !taken[j] {
			out = append(out, Move{After: &after[j]})
		}
	}
	return out
}

// alike says how much two resonances are the same one, from 0 to 1.
func alike(a, b *Peak) float64 {
	octaves := math.Abs(math.Log2(b.Order / a.Order))
	if a.mode == nil || b.mode == nil || octaves > 1.6 {
		return 0
	}
	return a.mode.Alike(b.mode) * (1 - octaves/4)
}

// Words says what becomes of the resonance: "the resonance at order 7.66
// (14.8 ohm, C1 against T1) moves to order 3.98 (2.1 ohm, C1 against T1)".
func (m Move) Words() string {
	switch {
	case m.Before == nil:
		return "a resonance appears at " + m.After.at()
	case m.After == nil:
		return "the resonance at " + m.Before.at() + " is gone"
	}
	if math.Abs(m.After.Order-m.Before.Order) < 0.005*m.Before.Order {
		ratio := m.After.Ohm / m.Before.Ohm
		if ratio > 0.98 && ratio < 1.02 {
			return "the resonance at " + m.Before.at() + " stays"
		}
		return fmt.Sprintf("the resonance at %s stays at its order, with %.3g ohm", m.Before.at(), m.After.Ohm)
	}
	return "the resonance at " + m.Before.at() + " moves to " + m.After.at()
}

// at says where a resonance lies, how high it is and who makes it.
func (p Peak) at() string {
	text := fmt.Sprintf("order %.3g (%.3g ohm", p.Order, p.Ohm)
	if who := p.Words(); who != "" {
		text += ", " + who
	}
	return text + ")"
}
