package study

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"
)

// An OperatingState is one way in which the site is run: what is out of
// service, how couplers stand, how much is drawn and how strong the supply is.
// It says only what differs from the study as stated.
type OperatingState struct {
	Named
	Out         []string    `json:"out,omitempty" label:"Out of service" ref:"supply|transformer|cable|reactor|load|motor|generator|nonlinearLoad|bank|filter" help:"Items that are switched off: a bank, a supply, a standby generator that does not run, a faulted cable."`
	Close       []string    `json:"close,omitempty" label:"Couplers closed" ref:"coupler" help:"Couplers that are closed though the study has them open."`
	Open        []string    `json:"open,omitempty" label:"Couplers open" ref:"coupler" help:"Couplers that are open though the study has them closed."`
	FaultLevel  string      `json:"faultLevel,omitempty" label:"Fault level" choices:"normal|min|max" default:"normal" help:"Which of its fault levels each supply has."`
	LoadPercent float64     `json:"loadPercent,omitempty" label:"Load" unit:"%" range:"(0,300]" typical:"10..120" default:"100" help:"What all loads, motors and non-linear loads draw, of what the study states."`
	Loads       []LoadShare `json:"loads,omitempty" label:"Loads that differ" help:"Loads whose percentage is another one."`
	Noted
}

// LoadShare is how much one load draws in an operating state.
type LoadShare struct {
	Item    string  `json:"item" label:"Load" ref:"load|motor|nonlinearLoad" need:"yes" help:"Linear load, motor group or non-linear load."`
	Percent float64 `json:"percent" label:"Draws" unit:"%" range:"[0,300]" help:"Of what the study states."`
}

// KindState is the kind of the operating states.
const KindState Kind = "state"

// NormalState is the name of the state in which the study stands as stated. A
// state of this name in the file says what differs in normal operation, such
// as a standby generator that does not run.
const NormalState = "normal"

// States returns the names of the operating states, the normal one first. A
// verdict holds when it holds in every one of them.
func (s *Study) States() []string {
	names := []string{NormalState}
	for i := range s.OperatingStates {
		if name := s.OperatingStates[i].Name; !strings.EqualFold(name, NormalState) {
			names = append(names, name)
		} else {
			names[0] = name
		}
	}
	return names
}

// state returns the operating state of a name; nil for the study as stated.
func (s *Study) state(name string) (*OperatingState, error) {
	for i := range s.OperatingStates {
		if x := &s.OperatingStates[i]; x.Name == name || name == "" && strings.EqualFold(x.Name, NormalState) {
			return x, nil
		}
	}
	if name == "" || strings.EqualFold(name, NormalState) {
		return nil, nil
	}
	return nil, &FieldError{Item: name, Field: "name", Problem: "is not an operating state of this study", Remedy: "choose " + strings.Join(s.States(), ", ")}
}

// In returns the study as it stands in an operating state: without what is out
// of service, couplers as the state has them, loads and fault levels as it
// says. It shares with s what the state leaves alone, so neither may be changed
// afterwards. The spectrum of a non-linear load keeps its percentages; a motor
// group at half load is taken as half the machines.
func (s *Study) In(x *OperatingState) *Study {
	if x == nil {
		return s
	}
	t := *s
	for _, k := range kinds {
		if k.Kind != KindBus && k.Kind != KindMeasure {
			t.without(k.Kind, x.Out)
		}
	}
	if len(x.Close)+len(x.Open) > 0 {
		t.Couplers = slices.Clone(t.Couplers)
		for i := range t.Couplers {
			c := &t.Couplers[i]
			c.Closed = (c.Closed || slices.Contains(x.Close, c.Name)) && !slices.Contains(x.Open, c.Name)
		}
	}
	x.scale(&t)
	if level := x.FaultLevel; level == "min" || level == "max" {
		t.Supplies = slices.Clone(t.Supplies)
		for i := range t.Supplies {
			u := &t.Supplies[i]
			if mva := u.levels()[level]; mva > 0 {
				u.FaultMVA, u.FaultKA = mva, 0
			}
		}
	}
	return &t
}

// levels returns the lowest and highest fault level in MVA by their word.
func (s *Supply) levels() map[string]float64 {
	return map[string]float64{"min": s.FaultMinMVA, "max": s.FaultMaxMVA}
}

// without takes the named items out of one list.
func (s *Study) without(kind Kind, names []string) {
	list := s.list(kind)
	gone := false
	for i := range list.Len() {
		gone = gone || slices.Contains(names, NameOf(list.Index(i).Addr().Interface()))
	}
	if !gone {
		return
	}
	left := reflect.MakeSlice(list.Type(), 0, list.Len())
	for i := range list.Len() {
		if item := list.Index(i); !slices.Contains(names, NameOf(item.Addr().Interface())) {
			left = reflect.Append(left, item)
		}
	}
	list.Set(left)
}

// scale makes loads draw what the state says.
func (x *OperatingState) scale(t *Study) {
	share := map[string]float64{}
	for _, l := range x.Loads {
		share[l.Item] = l.Percent / 100
	}
	all := or(x.LoadPercent, 100) / 100
	if all == 1 && len(share) == 0 {
		return
	}
	of := func(name string) float64 {
		if v, ok := share[name]; ok {
			return v
		}
		return all
	}
	t.Loads, t.Motors, t.NonlinearLoads = scaled(t.Loads, of), scaled(t.Motors, of), scaled(t.NonlinearLoads, of)
}

// scaled returns the loads with their powers times what of says; those that
// draw nothing at all are left out.
func scaled[T any, P interface {
	*T
	times(k float64)
}](list []T, of func(string) float64) []T {
	out := make([]T, 0, len(list))
	for i := range list {
		item := list[i]
		k := of(NameOf(&item))
		if k == 0 {
			continue
		}
		P(&item).times(k)
		out = append(out, item)
	}
	return out
}

func (l *Load) times(k float64)          { l.KW, l.Kvar = l.KW*k, l.Kvar*k }
func (m *Motor) times(k float64)         { m.KW, m.Kvar, m.RatedKVA = m.KW*k, m.Kvar*k, m.RatedKVA*k }
func (l *NonlinearLoad) times(k float64) { l.KW, l.CurrentA = l.KW*k, l.CurrentA*k }

// operating checks the operating states: what the tags cannot say.
func (c *checker) operating() {
	seen := map[string]bool{}
	for i := range c.study.OperatingStates {
		x := &c.study.OperatingStates[i]
		if key := strings.ToLower(x.Name); seen[key] && key == NormalState {
			c.add(x.Name, "name", "a second state has this name", "rename one of them")
		} else {
			seen[key] = true
		}
		for _, name := range x.Open {
			if slices.Contains(x.Close, name) {
				c.add(x.Name, "open", name+" is to be both closed and open", "leave it in one of the two lists")
			}
		}
		shares := map[string]bool{}
		for n, l := range x.Loads {
			switch kind := c.kind[l.Item]; {
			case kind == "":
				c.add(x.Name, "loads", fmt.Sprintf("row %d: there is no item %q", n+1, l.Item), "name a load of this study")
			case kind != KindLoad && kind != KindMotor && kind != KindNonlinearLoad:
				c.add(x.Name, "loads", fmt.Sprintf("row %d: %q is %s", n+1, l.Item, a(InfoOf(kind).Singular)), "name a linear load, motor group or non-linear load")
			case shares[l.Item]:
				c.add(x.Name, "loads", l.Item+" stands twice", "leave one row for each load")
			}
			shares[l.Item] = true
		}
		if x.FaultLevel == "min" || x.FaultLevel == "max" {
			for j := range c.study.Supplies {
				u := &c.study.Supplies[j]
				if u.levels()[x.FaultLevel] == 0 && !slices.Contains(x.Out, u.Name) {
					c.add(x.Name, "faultLevel", fmt.Sprintf("asks for the %s fault level, which %s does not state", map[string]string{"min": "minimum", "max": "maximum"}[x.FaultLevel], u.Name),
						"state it at the supply, or choose the normal one here")
				}
			}
		}
		if left := c.study.In(x); len(left.Supplies) == 0 {
			c.add(x.Name, "out", "takes every supply out, so nothing has a voltage", "leave a supply in service; an island fed by generators alone is not computed")
		}
	}
	for i := range c.study.Supplies {
		u := &c.study.Supplies[i]
		v := 1000 * c.kv[u.Bus]
		stated := u.FaultA(v) * v * math.Sqrt(3) / 1e6
		if u.FaultMinMVA > stated*(1+1e-9) {
			c.add(u.Name, "faultMinMVA", fmt.Sprintf("%g MVA is above the fault level of %.4g MVA", u.FaultMinMVA, stated), "give the lowest fault level that occurs")
		}
		if u.FaultMaxMVA > 0 && u.FaultMaxMVA < stated*(1-1e-9) {
			c.add(u.Name, "faultMaxMVA", fmt.Sprintf("%g MVA is below the fault level of %.4g MVA", u.FaultMaxMVA, stated), "give the highest fault level that occurs")
		}
	}
}

// wired builds the network of each state, and refuses one in which a generator
// runs on a part of the site that no supply reaches.
func (c *checker) wired() {
	for i := range c.study.OperatingStates {
		x := &c.study.OperatingStates[i]
		stood := c.study.In(x)
		p, err := stood.apply(nil)
		var m *model
		if err == nil {
			m, err = p.build()
		}
		if err != nil {
			c.add(x.Name, "out", "the state cannot be computed: "+err.Error(), "correct what is out and how couplers stand")
			continue
		}
		for _, g := range stood.Generators {
			if !m.system.Live(m.bus[g.Bus]) {
				c.add(x.Name, "out", fmt.Sprintf("leaves bus %s to generator %s alone; an island fed by generators is not computed", g.Bus, g.Name), "leave a supply in service there, or take the generator out too")
			}
		}
	}
}
