package converter

import "quietbus/study/converter/internal/piecewise"

// symmetries states what repeats within a period: half a period later every
// line current is reversed (any supply without even orders); a sixth later the
// phases have moved up by one as well (balanced supplies).
func (p *plant) symmetries(rotates bool) {
	nb := len(p.c.X)
	half := piecewise.Symmetry{Parts: 2, Phase: [3]int{0, 1, 2}, From: make([]int, nb), Sign: make([]float64, nb)}
	for b := range half.From {
		half.From[b], half.Sign[b] = b, -1
	}
	for _, r := range p.rectifiers {
		half.Sign[r.dc] = 1
	}
	for _, l := range p.links {
		if l.armature >= 0 {
			half.Sign[l.armature] = 1
		}
	}
	for i := range p.c.Units {
		half.UnitFrom = append(half.UnitFrom, i)
	}
	p.c.Symmetries = []piecewise.Symmetry{half}
	if !rotates {
		return
	}
	up := [3]int{1, 2, 0}
	sixth := half
	sixth.Parts, sixth.Phase, sixth.Legs = 6, up, up[:]
	sixth.From = append([]int(nil), half.From...)
	sixth.UnitFrom = append([]int(nil), half.UnitFrom...)
	if len(p.rectifiers) == 0 {
		// an ac controller: three branches, three valves or one star
		copy(sixth.From, up[:])
		if len(p.c.Units) == 3 {
			copy(sixth.UnitFrom, up[:])
		}
	}
	for _, r := range p.rectifiers {
		for x, from := range up {
			sixth.From[r.dc-3+x] = r.dc - 3 + from
		}
	}
	p.c.Symmetries = append(p.c.Symmetries, sixth)
}
