package study

import (
	"errors"
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"

	"quietbus/study/converter"
	"quietbus/study/grid"
)

// checker gathers what is wrong with a study.
type checker struct {
	study *Study
	kind  map[string]Kind // of every name
	kv    map[string]float64
	found []*FieldError
}

func (c *checker) add(item, field, problem, remedy string) {
	c.found = append(c.found, &FieldError{item, field, problem, remedy})
}

// Validate returns every problem that keeps the study from being evaluated,
// in file order; nil when there is none.
func (s *Study) Validate() []*FieldError {
	c := &checker{study: s, kind: map[string]Kind{}, kv: map[string]float64{}}
	c.head()
	c.names()
	for _, k := range kinds {
		for i, item := range s.Items(k.Kind) {
			c.fields(k, i, item)
		}
	}
	if len(c.found) == 0 {
		c.items()
		c.operating()
		c.ranges()
		c.measures()
		c.wiring()
	}
	return c.found
}

func (c *checker) head() {
	s := c.study
	if s.Format != Format {
		c.add("study", "format", fmt.Sprintf("is %d; this program reads format %d", s.Format, Format), "set it, or use a newer program")
	}
	if strings.TrimSpace(s.Title.Study) == "" {
		c.add("title", "study", "is empty", "say in one line what is studied")
	}
	for i := range studyFields {
		if p := studyFields[i].wrong(reflect.ValueOf(s).Elem().FieldByIndex(studyFields[i].index)); p != "" {
			c.add("study", studyFields[i].Key, p, studyFields[i].remedy())
		}
	}
	if len(s.Buses) == 0 {
		c.add("study", "buses", "there is no bus", "add a bus")
	}
	if len(s.Supplies) == 0 {
		c.add("study", "supplies", "there is no supply", "add a supply with its fault level")
	}
}

// names checks that each name is there and is unique over the study.
func (c *checker) names() {
	for _, k := range kinds {
		for i, item := range c.study.Items(k.Kind) {
			name := NameOf(item)
			if strings.TrimSpace(name) == "" {
				c.add(fmt.Sprintf("%s[%d]", k.Key, i), "name", "is empty", "give it a unique name")
				continue
			}
			if other, twice := c.kind[name]; twice {
				c.add(name, "name", fmt.Sprintf("%s and %s have this name", a(InfoOf(other).Singular), a(k.Singular)), "rename one of them")
			}
			c.kind[name] = k.Kind
		}
	}
	for _, b := range c.study.Buses {
		c.kv[b.Name] = b.NominalKV
	}
	for name := range c.study.Drawing {
		if c.kind[name] != KindBus {
			c.add("drawing", name, "is not a bus of the study", "remove the entry")
		}
	}
}

// wrong says what is wrong with a value by itself; "" when nothing is.
func (f *Field) wrong(v reflect.Value) string {
	if v.Kind() == reflect.Pointer {
		if v.IsNil() {
			return ""
		}
		v = v.Elem()
	}
	switch f.Type {
	case Number, Whole:
		x := 0.0
		if f.Type == Whole {
			x = float64(v.Int())
		} else {
			x = v.Float()
		}
		switch {
		case math.IsNaN(x) || math.IsInf(x, 0):
			return "is not a number"
		case x == 0 && !f.Need:
			return ""
		case x == 0 && !f.Range.Holds(0):
			return "is zero or missing"
		case !f.Range.Holds(x):
			return fmt.Sprintf("%g%s is out of range", x, f.withUnit())
		}
	case Text:
		word := v.String()
		if f.Need && strings.TrimSpace(word) == "" {
			return "is empty"
		}
		if word != "" && f.Choices != nil && !slices.Contains(f.Choices, word) {
			return fmt.Sprintf("%q is none of its words", word)
		}
	}
	return ""
}

// fields checks each field of an item by itself, and what it refers to.
func (c *checker) fields(k KindInfo, i int, item any) {
	name := NameOf(item)
	if name == "" {
		name = fmt.Sprintf("%s[%d]", k.Key, i)
	}
	v := reflect.ValueOf(item).Elem()
	word := ""
	if f := FieldOf(k.Kind, "kind"); f != nil {
		word = v.FieldByIndex(f.index).String()
	}
	for n := range described[k.Kind] {
		f := &described[k.Kind][n]
		if f.Key == "name" {
			continue
		}
		at := v.FieldByIndex(f.index)
		if !f.Applies(word) {
			if !at.IsZero() {
				c.add(name, f.Key, fmt.Sprintf("does not belong to the kind %q", word), "remove it, or choose another kind")
			}
			continue
		}
		if p := f.wrong(at); p != "" {
			c.add(name, f.Key, p, f.remedy())
			continue
		}
		c.refers(name, f, at)
		if f.Type == Rows {
			c.rows(name, f, at)
		}
	}
	for key, p := range ProvenanceOf(item) {
		if FieldOf(k.Kind, key) == nil {
			c.add(name, "provenance", fmt.Sprintf("%q is no field of %s", key, a(k.Singular)), "use the key of the value")
		}
		if p.Origin != Given && p.Origin != Measured && p.Origin != Assumed {
			c.add(name, "provenance", fmt.Sprintf("the origin of %q is %q", key, p.Origin), "use given, measured or assumed")
		}
	}
}

func (c *checker) refers(name string, f *Field, at reflect.Value) {
	if f.Ref == nil {
		return
	}
	names := []string{}
	if f.Type == Names {
		names = at.Interface().([]string)
	} else if at.String() != "" {
		names = append(names, at.String())
	}
	for _, other := range names {
		words := make([]string, len(f.Ref))
		for i, k := range f.Ref {
			words[i] = InfoOf(k).Singular
		}
		kind, ok := c.kind[other]
		switch {
		case !ok:
			c.add(name, f.Key, fmt.Sprintf("there is no item %q", other), "name "+a(strings.Join(words, " or "))+" of this study")
		case !slices.Contains(f.Ref, kind):
			c.add(name, f.Key, fmt.Sprintf("%q is %s", other, a(InfoOf(kind).Singular)), "name "+a(strings.Join(words, " or ")))
		case other == name:
			c.add(name, f.Key, "refers to itself", "name another item")
		}
	}
}

func (c *checker) rows(name string, f *Field, list reflect.Value) {
	seen := map[int64]bool{}
	for i := range list.Len() {
		for n := range f.Columns {
			col := &f.Columns[n]
			at := list.Index(i).FieldByIndex(col.index)
			if p := col.wrong(at); p != "" {
				c.add(name, f.Key, fmt.Sprintf("row %d, %s: %s", i+1, strings.ToLower(col.Label), p), col.remedy())
			}
			if col.Key == "order" {
				if h := at.Int(); seen[h] {
					c.add(name, f.Key, fmt.Sprintf("order %d stands twice", h), "leave one row for each order")
				} else {
					seen[h] = true
				}
			}
		}
	}
}

// either reports an error unless exactly one of two values is stated.
func (c *checker) either(name, a, b string, va, vb float64) {
	switch {
	case va != 0 && vb != 0:
		c.add(name, a, "both it and "+b+" are stated", "state one of the two")
	case va == 0 && vb == 0:
		c.add(name, a, "neither it nor "+b+" is stated", "state one of the two")
	}
}

func (c *checker) different(name, fa, a, b string) {
	if a == b {
		c.add(name, fa, "both ends are on bus "+a, "connect the other end to another bus")
	}
}

func (c *checker) sameLevel(name, a, b string) {
	if math.Abs(c.kv[a]-c.kv[b]) > 0.05*c.kv[a] {
		c.add(name, "to", fmt.Sprintf("joins %g kV and %g kV", c.kv[a], c.kv[b]), "join buses of one voltage, or use a transformer")
	}
}

// items checks what the tags cannot say.
func (c *checker) items() {
	s := c.study
	for i := range s.Supplies {
		c.either(s.Supplies[i].Name, "faultMVA", "faultKA", s.Supplies[i].FaultMVA, s.Supplies[i].FaultKA)
	}
	for i := range s.Transformers {
		c.transformer(&s.Transformers[i])
	}
	for _, x := range s.Cables {
		c.different(x.Name, "to", x.From, x.To)
		c.sameLevel(x.Name, x.From, x.To)
	}
	for _, x := range s.Reactors {
		c.different(x.Name, "to", x.From, x.To)
		c.sameLevel(x.Name, x.From, x.To)
	}
	for _, x := range s.Couplers {
		c.different(x.Name, "to", x.From, x.To)
		c.sameLevel(x.Name, x.From, x.To)
	}
	for _, l := range s.Loads {
		if l.KW == 0 && l.Kvar == 0 {
			c.add(l.Name, "kW", "is zero, and so is kvar", "state what the load draws, or remove it")
		}
	}
	for _, g := range s.Generators {
		if p := math.Hypot(g.KW, g.Kvar); p > 1.2*g.RatedKVA {
			c.add(g.Name, "kW", fmt.Sprintf("with its kvar makes %.4g kVA, more than the rating of %g kVA", p, g.RatedKVA), "correct what it delivers, or the rating")
		}
	}
	for i := range s.NonlinearLoads {
		c.nonlinear(&s.NonlinearLoads[i])
	}
	c.limitSets()
	for i := range s.Assessments {
		c.assessment(&s.Assessments[i])
	}
	for _, x := range s.Scans {
		if lo, hi := or(x.From, 1), or(x.To, float64(s.Order())); lo >= hi {
			c.add(x.Name, "fromOrder", fmt.Sprintf("the scan runs from %g to %g", lo, hi), "give a first order below the last")
		}
	}
}

func (c *checker) transformer(t *Transformer) {
	c.either(t.Name, "loadLossKW", "xOverR", t.LoadLossKW, t.XOverR)
	c.different(t.Name, "lvBus", t.HVBus, t.LVBus)
	if _, err := grid.ParseVectorGroup(t.VectorGroup); err != nil {
		c.add(t.Name, "vectorGroup", err.Error(), "correct it")
	}
	if r := 100 * t.LoadLossKW / t.RatedKVA; r >= t.ImpedancePercent {
		c.add(t.Name, "loadLossKW", fmt.Sprintf("makes a resistance of %.3g %%, more than the whole impedance of %.3g %%", r, t.ImpedancePercent), "check the load loss, the rating and the impedance")
	}
	for _, w := range []struct {
		key, bus string
		kv       float64
	}{{"hvKV", t.HVBus, t.HVKV}, {"lvKV", t.LVBus, t.LVKV}} {
		if nominal := c.kv[w.bus]; math.Abs(w.kv-nominal) > 0.3*nominal {
			c.add(t.Name, w.key, fmt.Sprintf("the winding has %g kV but bus %s %g kV", w.kv, w.bus, nominal), "correct the winding, or connect it to a bus of its voltage")
		}
	}
}

func (c *checker) nonlinear(l *NonlinearLoad) {
	c.either(l.Name, "kW", "currentA", l.KW, l.CurrentA)
	if l.FourWire && !l.Connection.threePhase() {
		c.add(l.Name, "fourWire", "a single-phase load has no such choice", "clear it, or connect the load to all three phases")
	}
	if l.Spectrum == Typed {
		if len(l.Lines) == 0 {
			c.add(l.Name, "lines", "the spectrum is to be typed but has no lines", "type or paste its lines, or choose a typical spectrum")
		}
		return
	}
	if len(l.Lines) > 0 {
		c.add(l.Name, "lines", "there are typed lines beside a typical spectrum", "set spectrum to 'typed', or remove the lines")
	}
	if _, ok := converter.Lookup(l.Spectrum); !ok {
		c.add(l.Name, "spectrum", fmt.Sprintf("%q is no typical spectrum of this program", l.Spectrum), "choose one from the list, or 'typed'")
	}
}

// measures checks that each measure has what its kind needs.
func (c *checker) measures() {
	for i := range c.study.Measures {
		m := &c.study.Measures[i]
		needs := map[string]float64{}
		target := []Kind(nil)
		switch m.Kind {
		case SingleTuned, FirstOrder, HighPass, ThirdOrder, CType:
			needs["kvar"], needs["order"] = m.Kvar, m.Order
		case DoubleTuned:
			needs["kvar"], needs["order"], needs["order2"] = m.Kvar, m.Order, m.Order2
		case DetuneBank:
			needs["percent"], target = m.Percent, []Kind{KindBank}
		case RemoveBank:
			target = []Kind{KindBank}
		case ActiveFilter:
			needs["ratedA"] = m.RatedA
			c.senses(m)
		case LineReactor:
			needs["percent"], target = m.Percent, []Kind{KindNonlinearLoad}
		case LowPassRC:
			needs["rOhm"], needs["cUF"], target = m.ROhm, m.CUF, []Kind{KindLoad}
		case LowPassLC:
			needs["lMH"], needs["cUF"], target = m.LMH, m.CUF, []Kind{KindLoad}
		}
		for _, f := range described[KindMeasure] {
			if v, ok := needs[f.Key]; ok && v == 0 {
				c.add(m.Name, f.Key, "is missing", f.remedy())
			}
		}
		if (IsFilter(m.Kind) || m.Kind == ActiveFilter) && m.Bus == "" {
			c.add(m.Name, "bus", "is missing", "name the bus where it stands")
		}
		if target != nil && !slices.Contains(target, c.kind[m.Target]) {
			c.add(m.Name, "target", fmt.Sprintf("%q is not %s", m.Target, a(InfoOf(target[0]).Singular)), "name the "+InfoOf(target[0]).Singular+" that it changes")
		}
	}
	if len(c.found) > 0 {
		return
	}
	for i := range c.study.Measures {
		if _, err := c.study.apply([]string{c.study.Measures[i].Name}); err != nil {
			if f, ok := err.(*FieldError); ok {
				c.found = append(c.found, f)
			}
		}
	}
	if len(c.found) == 0 {
		for _, x := range c.study.Conflicts(c.study.OnMeasures()) {
			c.add(x.B, "on", fmt.Sprintf("it and %s are both on, but %s", x.A, x.Reason), "switch one of them off")
		}
	}
}

func (c *checker) senses(m *Measure) {
	for i := range c.study.NonlinearLoads {
		l := &c.study.NonlinearLoads[i]
		if m.sensesLoad(l) {
			if c.kv[l.Bus] != c.kv[m.Bus] {
				c.add(m.Name, "senses", l.Name+" stands on another voltage level", "put the active filter on the voltage level of the loads it senses")
			}
			return
		}
	}
	c.add(m.Name, "senses", "there is no non-linear load for it to sense", "name the loads it senses, or put it on their bus")
}

// wiring builds the network without measures and with each by itself: vector
// groups that disagree, a neutral without earth, a low-pass between phases and
// the like.
func (c *checker) wiring() {
	if len(c.found) > 0 {
		return
	}
	sets := [][]string{nil}
	for i := range c.study.Measures {
		sets = append(sets, []string{c.study.Measures[i].Name})
	}
	for _, on := range sets {
		p, err := c.study.apply(on)
		if err == nil {
			_, err = p.build()
		}
		if err == nil {
			continue
		}
		var f *FieldError
		if errors.As(err, &f) {
			c.found = append(c.found, f)
		} else {
			c.add("study", "", err.Error(), "correct the connections")
		}
		return
	}
	c.wired()
}

// Warnings returns values that are possible but unusual, in plain sentences
// by item and field.
func (s *Study) Warnings() []*FieldError {
	c := &checker{study: s}
	for _, k := range kinds {
		for _, item := range s.Items(k.Kind) {
			v := reflect.ValueOf(item).Elem()
			for _, f := range described[k.Kind] {
				if f.Type != Number || f.Pointer {
					continue
				}
				x := v.FieldByIndex(f.index).Float()
				if x != 0 && !f.Typical.Holds(x) {
					c.add(NameOf(item), f.Key, fmt.Sprintf("%g%s is unusual", x, f.withUnit()), fmt.Sprintf("typical is %s%s; check it", f.Typical, f.withUnit()))
				}
			}
		}
	}
	return c.found
}

// assessment checks that a point's set is there and that what it assesses suits
// the set.
func (c *checker) assessment(a *Assessment) {
	set, ok := c.study.LimitSetOf(a.Set)
	if !ok {
		c.add(a.Name, "set", fmt.Sprintf("%q is no limit set, neither published nor of the study", a.Set), "choose one from the list")
		return
	}
	isLoad := c.kind[a.Current] == KindNonlinearLoad
	switch {
	case set.LimitsEquipment() && !isLoad:
		c.add(a.Name, "current", set.Title+" limits a piece of equipment, and none is named", "name the non-linear load that it is")
	case !set.LimitsEquipment() && isLoad:
		c.add(a.Name, "current", fmt.Sprintf("%s limits currents at a point of the network, and %s is a load", set.Title, a.Current), "name the branch that feeds the point, or choose a set for equipment")
	}
}
