package piecewise

// Bridge is a diode or thyristor bridge of two or three legs. AC holds the
// branch of each leg, positive into the bridge, their sum zero; DC is the
// branch of the direct current, positive out of the upper rail.
//
// The bridge holds id >= sum of the positive leg currents. While that is an
// equality the rails stand at the voltages of the conducting legs; while it is
// an inequality the direct current freewheels through a leg and the rails are
// shorted. That can be only when the direct current has an inductance of its
// own (Choke).
//
// The state holds the legs whose upper valve conducts in its low bits, those
// whose lower valve does above them.
type Bridge struct {
	AC    []int
	DC    int
	Choke bool
	Gates []int // thyristors only: gate of the upper valve of each leg, then of the lower; nil for diodes
}

func (b Bridge) bits() uint { return uint(2 * len(b.AC)) }

func (b Bridge) join(up, low uint64) uint64 {
	if up == 0 || low == 0 {
		return 0
	}
	return up | low<<len(b.AC)
}

func (b Bridge) split(state uint64) (up, low, legs uint64) {
	legs = 1<<len(b.AC) - 1
	return state & legs, state >> len(b.AC) & legs, legs
}

func (b Bridge) upper(leg int) uint64 { return b.gate(leg) }
func (b Bridge) lower(leg int) uint64 { return b.gate(len(b.AC) + leg) }
func (b Bridge) gate(i int) uint64 {
	if b.Gates == nil {
		return 0
	}
	return 1 << b.Gates[i]
}

func (b Bridge) columns(state uint64) []column {
	if state == 0 {
		return nil
	}
	up, low, _ := b.split(state)
	short := up&low != 0
	var legs []int
	for x := range b.AC {
		if (up|low)>>x&1 != 0 {
			legs = append(legs, x)
		}
	}
	var out []column
	last := legs[len(legs)-1]
	for _, x := range legs[:len(legs)-1] {
		col := column{b.AC[x], []term{{b.AC[x], 1}, {b.AC[last], -1}}}
		if !short {
			// id is the sum of the upper legs
			if d := float64(up>>x&1) - float64(up>>last&1); d != 0 {
				col.terms = append(col.terms, term{b.DC, d})
			}
		}
		out = append(out, col)
	}
	if short {
		out = append(out, column{b.DC, []term{{b.DC, 1}}})
	}
	return out
}

func (b Bridge) triggers(state uint64) []trigger {
	up, low, legs := b.split(state)
	if state == 0 {
		return b.starts()
	}
	var out []trigger
	current := func(x int, sign float64, next uint64) {
		out = append(out, trigger{terms: []term{{b.AC[x], sign}}, next: next})
	}
	if up&low != 0 {
		out = b.shortEnds(up, low)
		for x := range b.AC {
			switch bit := uint64(1) << x; {
			case up&bit != 0 && low&bit == 0:
				current(x, 1, b.join(up&^bit, low))
			case low&bit != 0 && up&bit == 0:
				current(x, -1, b.join(up, low&^bit))
			}
		}
	} else {
		if many(up) || !many(low) {
			for x := range b.AC {
				if bit := uint64(1) << x; up&bit != 0 {
					current(x, 1, b.join(up&^bit, low))
				}
			}
		}
		if many(low) {
			for x := range b.AC {
				if bit := uint64(1) << x; low&bit != 0 {
					current(x, -1, b.join(up, low&^bit))
				}
			}
		}
		if b.Choke {
			out = append(out, b.shortStarts(up, low, legs)...)
		}
	}
	p, n := b.AC[first(up)], b.AC[first(low)]
	for x, z := range b.AC {
		if bit := uint64(1) << x; (up|low)&bit == 0 {
			out = append(out,
				trigger{volt: true, terms: []term{{p, 1}, {z, -1}}, need: b.upper(x), next: b.join(up|bit, low)},
				trigger{volt: true, terms: []term{{z, 1}, {n, -1}}, need: b.lower(x), next: b.join(up, low|bit)})
		}
	}
	return out
}

// starts are the pairs of legs that can begin to conduct when none does.
func (b Bridge) starts() []trigger {
	var out []trigger
	for x, up := range b.AC {
		for y, low := range b.AC {
			if x != y {
				out = append(out, trigger{
					volt: true, terms: []term{{low, 1}, {up, -1}, {b.DC, -1}},
					need: b.upper(x) | b.lower(y), next: b.join(1<<x, 1<<y),
				})
			}
		}
	}
	return out
}

// shortStarts: the rails change sign, so the second valve of a conducting leg
// takes over. Every diode then conducts.
func (b Bridge) shortStarts(up, low, legs uint64) []trigger {
	rails := []term{{b.AC[first(up)], 1}, {b.AC[first(low)], -1}}
	if b.Gates == nil {
		return []trigger{{volt: true, terms: rails, next: b.join(legs, legs)}}
	}
	var out []trigger
	for x := range b.AC {
		switch bit := uint64(1) << x; {
		case up&bit != 0:
			out = append(out, trigger{volt: true, terms: rails, need: b.lower(x), next: b.join(up, low|bit)})
		case low&bit != 0:
			out = append(out, trigger{volt: true, terms: rails, need: b.upper(x), next: b.join(up|bit, low)})
		}
	}
	return out
}

// shortEnds: the direct current has fallen to the sum of the currents of some
// set of legs, which is then the upper group.
func (b Bridge) shortEnds(up, low uint64) []trigger {
	all, must := up|low, up&^low
	if all&(all-1) == 0 {
		return []trigger{{terms: []term{{b.DC, 1}}, next: 0}}
	}
	var out []trigger
	for set := uint64(1); set < all; set++ {
		if set&^all != 0 || set&must != must || set&(low&^up) != 0 {
			continue
		}
		terms := []term{{b.DC, 1}}
		for x, leg := range b.AC {
			if set>>x&1 != 0 {
				terms = append(terms, term{leg, -1})
			}
		}
		out = append(out, trigger{terms: terms, next: b.join(set, all&^set)})
	}
	return out
}

func many(set uint64) bool { return set&(set-1) != 0 }

func first(set uint64) int {
	for i := 0; ; i++ {
		if set>>i&1 != 0 {
			return i
		}
	}
}
