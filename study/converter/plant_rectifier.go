package converter

import (
	"math"

	"quietbus/study/converter/internal/piecewise"
)

// buildRectifier makes the circuit of a rectifier. at holds, for each link, an
// estimate of its mean voltage; about it a tight power is linearised.
func buildRectifier(n Nameplate, t Terminal, at []float64) *plant {
	w := t.omega()
	list, links := rectifiersOf(n, w)
	half := n.Kind == KindHalfWave
	p := &plant{rectifiers: list, links: make([]link, links)}

	// branches
	nb, np, nv := 0, 0, 0
	for i := range list {
		legs := len(list[i].legs)
		if half {
			legs = 0
		}
		list[i].dc = nb + legs
		nb = list[i].dc + 1
	}
	free := n.Load == ConstantPower || n.Load == TightPower || n.Load == Motor || n.Load == FixedCurrent && n.Smoothing == ByChoke
	for i := range p.links {
		l := &p.links[i]
		*l = link{capacitor: -1, param: -1, armature: -1, watts: n.PowerW / float64(links), ideal: n.idealDirect()}
		if n.SeparateLink {
			l.watts = n.PowerW * n.Sections[i].Share
		}
		if n.Smoothing == ByCapacitor {
			l.capacitor = nv
			nv++
			if n.Load == Motor {
				l.armature = nb
				nb++
			}
		}
		if free {
			l.param = np
			np++
		}
	}
	c := piecewise.NewCircuit(nb, nv, np)
	p.c, p.source, p.load, p.drop = c, matrix(nb), matrix(nb), make([]float64, nb)

	for i, r := range list {
		l := &p.links[r.link]
		l.direct = append(l.direct, r.dc)
		l.crest = math.Max(l.crest, crest(r.legs, half, t.Voltage))
		if half {
			c.K[r.dc] = across(r.legs)
			p.drop[r.dc] = n.DropV
		} else {
			for x, leg := range r.legs {
				c.K[r.dc-len(r.legs)+x] = leg
			}
			p.drop[r.dc] = 2 * n.DropV
		}
		p.rectifiers[i].unit = i
		c.Units = append(c.Units, p.valves(n, r, half))
	}
	c.Feed(t.SourceR, w*t.SourceL, t.NeutralR, w*t.NeutralL)
	copyMatrix(p.source, c.R)
	c.Feed(n.ReactorOhm, w*n.ReactorH, 0, 0)

	for _, r := range list {
		c.X[r.dc][r.dc] += r.chokeX
		c.R[r.dc][r.dc] += r.chokeR
		c.EMF[r.dc][0] -= p.drop[r.dc]
		first := r.dc - len(r.legs)
		if half {
			c.X[r.dc][r.dc] += r.leakX
			c.R[r.dc][r.dc] += r.leakR
			first = r.dc
		}
		for b := first; b < r.dc; b++ {
			c.X[b][b] += r.leakX
			c.R[b][b] += r.leakR
		}
		if n.Smoothing == ByChoke && n.Load == Resistive {
			// with neither reactor nor choke the current would follow at once
			for b := first; b < max(r.dc, first+1); b++ {
				c.X[b][b] += inductanceFloor * n.loadOhm(p.links[r.link].watts)
			}
		}
		for b := first; b <= r.dc; b++ {
			c.R[b][b] += lossFloor * c.X[b][b]
		}
	}
	c.Rates = nv == 0
	p.scale(n, t)
	p.start = make([]float64, nb+nv+1+np)
	p.start[nb+nv] = 1
	for i := range p.links {
		p.directSide(n, i, w, at)
	}
	if !half {
		p.symmetries(n.Kind.threePhase())
	}
	return p
}

// loadOhm is the load resistance of a link of so many watts.
func (n Nameplate) loadOhm(watts float64) float64 {
	if n.LoadOhm > 0 {
		return n.LoadOhm
	}
	return n.idealDirect() * n.idealDirect() / watts
}

// valves returns the unit of one rectifier and appends its gates.
func (p *plant) valves(n Nameplate, r rectifier, half bool) piecewise.Unit {
	c := p.c
	if half {
		return piecewise.Valve{Branch: r.dc, Diode: true}
	}
	smoothed := n.Smoothing == ByChoke && (n.ChokeH > 0 || n.Load == Motor && n.ArmatureH > 0)
	b := piecewise.Bridge{DC: r.dc, Choke: r.chokeX > 0 || smoothed}
	for x := range r.legs {
		b.AC = append(b.AC, r.dc-len(r.legs)+x)
	}
	fired := n.Kind == KindThyristorBridge || n.Kind == KindSinglePhaseFired || n.Kind.sections() > 0 && n.FiringDeg > 0
	if !fired {
		return b
	}
	alpha := n.FiringDeg * math.Pi / 180
	legs := len(r.legs)
	b.Gates = make([]int, 2*legs)
	for i := range b.Gates {
		x, lower := i%legs, i >= legs
		g := piecewise.Gate{Width: 2 * math.Pi / 3}
		if legs == 3 {
			for q := range g.Ref {
				g.Ref[q] = positive[q] * r.ref
			}
			g.At = alpha - math.Pi/3 + 2*math.Pi/3*float64(x)
			if lower {
				g.At += math.Pi
			}
		} else {
			for q, k := range across(r.legs) {
				g.Ref[q] = complex(k, 0)
			}
			g.Width = math.Max(math.Pi-alpha, math.Pi/9)
			g.At = alpha - math.Pi/2
			if (x == 1) != lower {
				g.At += math.Pi
			}
		}
		b.Gates[i] = len(c.Gates)
		c.Gates = append(c.Gates, g)
	}
	return b
}

// scale sets the sizes against which tolerances are taken.
func (p *plant) scale(n Nameplate, t Terminal) {
	for _, l := range p.links {
		p.c.Volt = math.Max(p.c.Volt, l.crest)
	}
	share := n.PowerW
	if n.Load == FixedCurrent && n.DirectA > 0 {
		share = n.DirectA * n.idealDirect()
	}
	p.c.Amp = share / float64(len(p.rectifiers)) / n.idealDirect()
}

// directSide adds the smoothing and the load of one link.
func (p *plant) directSide(n Nameplate, i int, w float64, at []float64) {
	c, l := p.c, &p.links[i]
	nb, nv := len(c.X), len(c.Y)
	amps := l.watts / l.ideal
	if n.Load == FixedCurrent && n.DirectA > 0 {
		amps = n.DirectA / float64(len(p.links))
	}
	ohm := 0.0
	if n.Load == Resistive {
		ohm = n.loadOhm(l.watts)
	}
	control := func(states []int, power bool, target, scale float64) *piecewise.Control {
		ctl := &c.Controls[l.param]
		*ctl = piecewise.Control{States: states, Power: power, Target: target, Scale: scale}
		return ctl
	}
	if l.capacitor >= 0 {
		v := l.capacitor
		for _, d := range l.direct {
			c.S[d][v] = 1
		}
		c.Y[v] = w * n.CapacitorF
		c.Rest[v] = 0.985 * (l.crest - p.drop[l.direct[0]])
		volts := 0.9 * (l.crest - p.drop[l.direct[0]])
		switch n.Load {
		case ConstantPower:
			c.Draw[v][1+l.param] = -1
			control([]int{nb + v}, true, l.watts, l.watts/l.ideal)
			p.start[nb+nv+1+l.param] = l.watts / at[i]
		case TightPower:
			l.at = at[i]
			slope := l.watts / (l.at * l.at)
			c.G[v] = -slope
			c.Draw[v][1+l.param] = -1
			control([]int{nb + v}, true, l.watts, l.watts/l.ideal).Slope = slope
			p.start[nb+nv+1+l.param] = 2 * l.watts / l.at
		case Resistive:
			c.G[v] = 1 / ohm
		case FixedCurrent:
			c.Draw[v][0] = -amps
		case Motor:
			m := l.armature
			c.X[m][m], c.R[m][m] = w*n.ArmatureH, n.ArmatureOhm
			p.load[m][m] = n.ArmatureOhm
			c.S[m][v] = -1
			c.EMF[m][1+l.param] = -1
			c.Units = append(c.Units, piecewise.Always{Branch: m})
			control([]int{m}, true, l.watts, l.ideal)
			amps = l.watts / at[i]
			p.start[nb+nv+1+l.param] = at[i] - n.ArmatureOhm*amps
			p.start[m] = amps
		}
		p.start[nb+v] = volts
		return
	}
	// the choke alone: every rectifier of the link feeds the same load
	inductance, resistance := 0.0, 0.0
	if n.Kind.sections() > 0 && !n.SeparateLink {
		inductance, resistance = w*n.ChokeH, n.ChokeOhm
	}
	loadR := 0.0
	switch n.Load {
	case Resistive:
		loadR = ohm
	case Motor:
		loadR = n.ArmatureOhm
		inductance += w * n.ArmatureH
	}
	l.ohm = loadR
	for _, d := range l.direct {
		for _, e := range l.direct {
			c.X[d][e] += inductance
			c.R[d][e] += resistance + loadR + lossFloor*inductance
			p.load[d][e] += loadR
		}
		if l.param >= 0 {
			c.EMF[d][1+l.param] = -1
		}
	}
	if l.param >= 0 {
		cos := math.Max(0.05, math.Cos(n.FiringDeg*math.Pi/180))
		if n.Load == FixedCurrent {
			control(l.direct, false, amps, l.ideal)
			p.start[nb+nv+1+l.param] = l.ideal * math.Cos(n.FiringDeg*math.Pi/180) * 0.9
		} else {
			control(l.direct, true, l.watts, l.ideal)
			p.start[nb+nv+1+l.param] = l.ideal * cos * 0.8
		}
	}
}

func matrix(n int) [][]float64 {
	m := make([][]float64, n)
	for i := range m {
		m[i] = make([]float64, n)
	}
	return m
}

func copyMatrix(dst, src [][]float64) {
	for i := range src {
		copy(dst[i], src[i])
	}
}
