package figure

import (
	"quietbus/study"
)

// Step is the grid of the single-line in points at zoom 1; study.Drawing
// counts in it.
const Step = 12

// Sizes of the single-line, in steps.
const (
	columnWidth  = 10.4
	columnGap    = 1.2
	busHead      = 3.0 // from the top of a bus's place to its bar: name and distortion
	rowHeight    = 1.75
	feederHeight = 3.4
	linkHeight   = 1.6
	supplyHeight = 3.2
	rakeTop      = 0.5
	feederPitch  = 7.0 // between parallel feeders
)

// Layout places everything on the single-line, in steps from the top left.
type Layout struct {
	Buses    []PlacedBus
	Feeders  []Feeder
	Supplies []PlacedSupply
	W, H     float64
}

// PlacedBus is a bus with what hangs on it.
type PlacedBus struct {
	Name    string
	X, Y, W float64 // left end, height and length of the bar
	Rows    []Row
}

// Row is one item or measure under a bus.
type Row struct {
	Kind  study.Kind
	Name  string
	Inset bool // acts on the row above it
}

// Feeder joins two buses: a transformer, cable, reactor or coupler.
type Feeder struct {
	Kind     study.Kind
	Name     string
	From, To string
	Tree     bool    // leads straight down to a bus placed under it
	X        float64 // of its line, for a tree feeder
}

// PlacedSupply stands above its bus.
type PlacedSupply struct {
	Name, Bus string
	X, Y      float64
}

// edge is a way from a bus to another.
type edge struct {
	Feeder
	other string
	used  *bool
}

// tidy is the state of one automatic layout.
type tidy struct {
	s       *study.Study
	near    map[string][]edge
	rows    map[string][]Row
	placed  map[string]bool
	lay     *Layout
	ofIndex map[string]int
}

// Tidy lays a study out by itself: supplies at the top, each bus above what it
// feeds, loads hanging below their bus, no two places overlapping. Positions
// in study.Drawing take precedence for their bus.
func Tidy(s *study.Study) *Layout {
	t := &tidy{s: s, near: map[string][]edge{}, rows: rowsOf(s), placed: map[string]bool{}, lay: &Layout{}, ofIndex: map[string]int{}}
	join := func(kind study.Kind, name, a, b string) {
		used := new(bool)
		t.near[a] = append(t.near[a], edge{Feeder{Kind: kind, Name: name, From: a, To: b}, b, used})
		t.near[b] = append(t.near[b], edge{Feeder{Kind: kind, Name: name, From: b, To: a}, a, used})
	}
	for _, x := range s.Transformers {
		join(study.KindTransformer, x.Name, x.HVBus, x.LVBus)
	}
	for _, x := range s.Cables {
		join(study.KindCable, x.Name, x.From, x.To)
	}
	for _, x := range s.Reactors {
		join(study.KindReactor, x.Name, x.From, x.To)
	}
	for _, x := range s.Couplers {
		join(study.KindCoupler, x.Name, x.From, x.To)
	}
	x := 1.0
	for _, sup := range s.Supplies {
		if !t.placed[sup.Bus] {
			x += t.place(sup.Bus, x, supplyHeight, columnWidth) + 2*columnGap
		}
	}
	for _, b := range s.Buses {
		if !t.placed[b.Name] {
			x += t.place(b.Name, x, supplyHeight, columnWidth) + 2*columnGap
		}
	}
	t.finish()
	return t.lay
}

// rowsOf lists what hangs on each bus: items, each followed by the measures
// that act on it, then the measures that stand there by themselves.
func rowsOf(s *study.Study) map[string][]Row {
	rows := map[string][]Row{}
	acting := map[string][]string{}
	for _, m := range s.Measures {
		if m.Target != "" {
			acting[m.Target] = append(acting[m.Target], m.Name)
		}
	}
	add := func(kind study.Kind, name, bus string) {
		rows[bus] = append(rows[bus], Row{Kind: kind, Name: name})
		for _, m := range acting[name] {
			rows[bus] = append(rows[bus], Row{Kind: study.KindMeasure, Name: m, Inset: true})
		}
	}
	for _, x := range s.NonlinearLoads {
		add(study.KindNonlinearLoad, x.Name, x.Bus)
	}
	for _, x := range s.Generators {
		add(study.KindGenerator, x.Name, x.Bus)
	}
	for _, x := range s.Motors {
		add(study.KindMotor, x.Name, x.Bus)
	}
	for _, x := range s.Loads {
		add(study.KindLoad, x.Name, x.Bus)
	}
	for _, x := range s.Banks {
		add(study.KindBank, x.Name, x.Bus)
	}
	for _, x := range s.Filters {
		add(study.KindFilter, x.Name, x.Bus)
	}
	for _, m := range s.Measures {
		if m.Target == "" {
			rows[m.Bus] = append(rows[m.Bus], Row{Kind: study.KindMeasure, Name: m.Name})
		}
	}
	return rows
}

// place puts a bus and all below it, from x on and with its place's top at
// top, at least as wide as least, and returns the width taken.
func (t *tidy) place(bus string, x, top, least float64) float64 {
	t.placed[bus] = true
	at := len(t.lay.Buses)
	t.ofIndex[bus] = at
	bar := top + busHead
	t.lay.Buses = append(t.lay.Buses, PlacedBus{Name: bus, X: x, Y: bar, Rows: t.rows[bus]})
	below := bar + rakeTop + rowHeight*float64(len(t.rows[bus]))
	var children []edge
	for _, e := range t.near[bus] {
		if !t.placed[e.other] && !*e.used && !(e.Kind == study.KindCoupler && t.fedOtherwise(e.other)) {
			*e.used = true
			t.placed[e.other] = true
			children = append(children, e)
		}
	}
	width := 0.0
	for i, e := range children {
		drop := linkHeight
		if e.Kind == study.KindTransformer {
			drop = feederHeight
		}
		childTop := bar + drop + 0.4
		if i == 0 && len(t.rows[bus]) > 0 {
			childTop = below + drop*0.7
		}
		f := e.Feeder
		f.Tree, f.X = true, x+width+0.6
		t.lay.Feeders = append(t.lay.Feeders, f)
		if i > 0 {
			width += columnGap
			f.X += columnGap
			t.lay.Feeders[len(t.lay.Feeders)-1].X = f.X
		}
		need := columnWidth
		for k, p := range t.parallel(bus, e.other) {
			p.Tree, p.X = true, f.X+feederPitch*float64(k+1)
			t.lay.Feeders = append(t.lay.Feeders, p)
			need = max(need, feederPitch*float64(k+2)+0.6)
		}
		width += t.place(e.other, x+width, childTop, need)
	}
	width = max(width, least)
	t.lay.Buses[at].W = width
	return width
}

// parallel returns the further ways between a bus and one that was just hung
// under it, and takes them.
func (t *tidy) parallel(bus, child string) (list []Feeder) {
	for _, e := range t.near[bus] {
		if e.other == child && !*e.used && e.Kind != study.KindCoupler {
			*e.used = true
			list = append(list, e.Feeder)
		}
	}
	return list
}

// fedOtherwise reports whether a transformer or cable leads to the bus from a
// part that will still be placed, so that a coupler is drawn as a tie.
func (t *tidy) fedOtherwise(bus string) bool {
	for _, e := range t.near[bus] {
		if e.Kind != study.KindCoupler {
			return true
		}
	}
	return false
}

// finish moves drawn buses to their places, adds ties and supplies and takes
// the extent.
func (t *tidy) finish() {
	lay := t.lay
	for i := range lay.Buses {
		b := &lay.Buses[i]
		if p, ok := t.s.Drawing[b.Name]; ok {
			dx := p.X - b.X
			b.X, b.Y = p.X, p.Y
			for j := range lay.Feeders {
				if lay.Feeders[j].Tree && lay.Feeders[j].To == b.Name {
					lay.Feeders[j].X += dx
				}
			}
		}
	}
	done := map[string]bool{}
	for _, f := range lay.Feeders {
		done[f.Name] = true
	}
	for _, b := range t.s.Buses {
		for _, e := range t.near[b.Name] {
			if !done[e.Name] {
				done[e.Name] = true
				lay.Feeders = append(lay.Feeders, e.Feeder)
			}
		}
	}
	count := map[string]int{}
	for _, sup := range t.s.Supplies {
		b := lay.Buses[t.ofIndex[sup.Bus]]
		n := count[sup.Bus]
		count[sup.Bus]++
		lay.Supplies = append(lay.Supplies, PlacedSupply{Name: sup.Name, Bus: sup.Bus, X: b.X + 0.6*b.W + 6*float64(n), Y: b.Y - busHead - supplyHeight + 1.2})
	}
	for _, b := range lay.Buses {
		lay.W = max(lay.W, b.X+b.W+1)
		lay.H = max(lay.H, b.Y+rakeTop+rowHeight*float64(len(b.Rows))+0.8)
	}
}

// Bus returns the place of a bus, nil when there is none.
func (l *Layout) Bus(name string) *PlacedBus {
	for i := range l.Buses {
		if l.Buses[i].Name == name {
			return &l.Buses[i]
		}
	}
	return nil
}
