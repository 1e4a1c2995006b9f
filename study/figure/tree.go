package figure

import (
	"slices"

	"quietbus/study"
)

// A tree is the study as a forest of buses from the supplies downward; what
// closes a loop is a tie.
type tree struct {
	s     *study.Study
	roots []*node
	ties  []Feeder
	of    map[string]*node
}

// A node is a bus with the feeders that lead to it and the buses it feeds.
type node struct {
	bus      string
	depth    int
	up       []Feeder // from its parent, several in parallel
	rows     []Row
	kids     []*node
	parent   *node
	supplies int
}

// grow hangs every bus under the nearest bus that feeds it. Couplers feed only
// buses that nothing else does.
func grow(s *study.Study) *tree {
	t := &tree{s: s, of: map[string]*node{}}
	rows, known := rowsOf(s), map[string]bool{}
	for _, b := range s.Buses {
		known[b.Name] = true
	}
	links, all := feedersOf(s, known)
	var queue []*node
	root := func(bus string) {
		if known[bus] && t.of[bus] == nil {
			n := &node{bus: bus, rows: rows[bus]}
			t.of[bus] = n
			t.roots = append(t.roots, n)
			queue = append(queue, n)
		}
	}
	spread := func(list []Feeder) {
		near := map[string][]Feeder{}
		for _, f := range list {
			near[f.From] = append(near[f.From], f)
			f.From, f.To = f.To, f.From
			near[f.From] = append(near[f.From], f)
		}
		for len(queue) > 0 {
			n := queue[0]
			queue = queue[1:]
			for _, f := range near[n.bus] {
				switch k := t.of[f.To]; {
				case k == nil:
					k = &node{bus: f.To, depth: n.depth + 1, up: []Feeder{f}, rows: rows[f.To], parent: n}
					t.of[f.To] = k
					n.kids = append(n.kids, k)
					queue = append(queue, k)
				case k.parent == n && f.Kind != study.KindCoupler && !named(k.up, f.Name):
					k.up = append(k.up, f)
				}
			}
		}
	}
	for _, x := range s.Supplies {
		root(x.Bus)
		if n := t.of[x.Bus]; n != nil {
			n.supplies++
		}
	}
	spread(links)
	for _, b := range s.Buses { // what only a coupler reaches
		if n := t.of[b.Name]; n != nil {
			queue = append(queue, n)
		}
	}
	spread(all)
	for _, b := range s.Buses { // what nothing reaches
		root(b.Name)
		spread(all)
	}
	for _, f := range all {
		if a, b := t.of[f.From], t.of[f.To]; !named(a.up, f.Name) && !named(b.up, f.Name) {
			t.ties = append(t.ties, f)
		}
	}
	return t
}

func named(list []Feeder, name string) bool {
	return slices.ContainsFunc(list, func(f Feeder) bool { return f.Name == name })
}

// feedersOf lists what joins two buses, and the same with the couplers first.
func feedersOf(s *study.Study, known map[string]bool) (links, all []Feeder) {
	for _, x := range s.Transformers {
		links = append(links, Feeder{Kind: study.KindTransformer, Name: x.Name, From: x.HVBus, To: x.LVBus})
	}
	for _, x := range s.Cables {
		links = append(links, Feeder{Kind: study.KindCable, Name: x.Name, From: x.From, To: x.To})
	}
	for _, x := range s.Reactors {
		links = append(links, Feeder{Kind: study.KindReactor, Name: x.Name, From: x.From, To: x.To})
	}
	for _, x := range s.Couplers {
		all = append(all, Feeder{Kind: study.KindCoupler, Name: x.Name, From: x.From, To: x.To})
	}
	unreal := func(f Feeder) bool { return !known[f.From] || !known[f.To] || f.From == f.To }
	links = slices.DeleteFunc(links, unreal)
	return links, append(slices.DeleteFunc(all, unreal), links...)
}

// depth returns the depth of the deepest bus.
func (t *tree) depth() (d int) {
	for _, n := range t.of {
		d = max(d, n.depth)
	}
	return d
}

// between returns the room that ties need between buses that stand side by side
// and the next one.
func (t *tree) between(before []*node, next *node) float64 {
	for _, f := range t.ties {
		a, b := t.of[f.From], t.of[f.To]
		if a.under(before) && b.under([]*node{next}) || b.under(before) && a.under([]*node{next}) {
			return tieGap
		}
	}
	return 0
}

// under reports whether a bus is one of a list or hangs below one.
func (n *node) under(list []*node) bool {
	for ; n != nil; n = n.parent {
		if slices.Contains(list, n) {
			return true
		}
	}
	return false
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
