package piecewise

// Star is a three-wire star whose lines each hold two thyristors in
// antiparallel: the currents add up to zero, so at least two lines conduct or
// none. The state holds the lines that conduct forward in bits 0..2, those
// that conduct backward in bits 3..5.
type Star struct {
	Branch      [3]int
	Plus, Minus [3]int // gate numbers
}

func (s Star) bits() uint { return 6 }

func (s Star) join(plus, minus uint64) uint64 {
	if all := plus | minus; !many(all) {
		return 0
	}
	return plus | minus<<3
}

func (s Star) columns(state uint64) []column {
	if state == 0 {
		return nil
	}
	all := (state | state>>3) & 7
	var lines []int
	for x := range s.Branch {
		if all>>x&1 != 0 {
			lines = append(lines, s.Branch[x])
		}
	}
	last := lines[len(lines)-1]
	var out []column
	for _, b := range lines[:len(lines)-1] {
		out = append(out, column{b, []term{{b, 1}, {last, -1}}})
	}
	return out
}

func (s Star) triggers(state uint64) []trigger {
	plus, minus := state&7, state>>3&7
	var out []trigger
	if state == 0 {
		for x := range s.Branch {
			for y := range s.Branch {
				if x != y {
					out = append(out, trigger{
						volt: true, terms: []term{{s.Branch[y], 1}, {s.Branch[x], -1}},
						need: 1<<s.Plus[x] | 1<<s.Minus[y], next: s.join(1<<x, 1<<y),
					})
				}
			}
		}
		return out
	}
	ref := s.Branch[first(plus|minus)]
	for x, b := range s.Branch {
		bit := uint64(1) << x
		switch {
		case plus&bit != 0:
			out = append(out, trigger{terms: []term{{b, 1}}, next: s.join(plus&^bit, minus)})
		case minus&bit != 0:
			out = append(out, trigger{terms: []term{{b, -1}}, next: s.join(plus, minus&^bit)})
		default:
			out = append(out,
				trigger{volt: true, terms: []term{{ref, 1}, {b, -1}}, need: 1 << s.Plus[x], next: s.join(plus|bit, minus)},
				trigger{volt: true, terms: []term{{b, 1}, {ref, -1}}, need: 1 << s.Minus[x], next: s.join(plus, minus|bit)})
		}
	}
	return out
}
