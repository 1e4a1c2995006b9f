package study

import (
	"math"
	"math/cmplx"
	"reflect"
	"slices"

	"quietbus/study/filter"
)

// A Variation is a study as it might really be: with other values for what is
// not known for sure. It shares with the study what it leaves alone.
type Variation struct {
	Study *Study // with the values changed; as the file has it, before any state

	turns     map[string]map[int]complex128 // by non-linear load and order
	drift     map[string]filter.Drift       // by bank, filter or measure
	frequency float64                       // deviation as a fraction
	rebuilt   bool                          // more differs than an update can express
}

// Vary returns the study with a value for each unknown. Banks and filters that
// vary have to be named to Quick: see Varying.
func (s *Study) Vary(unknowns []Unknown, values []float64) *Variation {
	t := *s
	v := &Variation{Study: &t}
	own := map[Kind]bool{}
	list := func(kind Kind) reflect.Value {
		l := t.list(kind)
		if !own[kind] {
			own[kind] = true
			next := reflect.MakeSlice(l.Type(), l.Len(), l.Len())
			reflect.Copy(next, l)
			l.Set(next)
		}
		return l
	}
	backgrounds := map[int]bool{}
	background := func(i int) []BackgroundLine {
		x := list(KindSupply).Index(i).Addr().Interface().(*Supply)
		if !backgrounds[i] {
			backgrounds[i] = true
			x.Background = slices.Clone(x.Background)
		}
		return x.Background
	}
	for i := range unknowns {
		u, x := &unknowns[i], values[i]
		switch u.Kind {
		case RangeFrequency:
			v.frequency = x/s.FrequencyHz - 1
		case RangeValue:
			list(u.kind).Index(u.index).FieldByIndex(FieldOf(u.kind, u.Field).index).SetFloat(x)
			v.rebuilt = v.rebuilt || !slices.Contains(updated, u.kind)
		case RangePower:
			list(u.kind).Index(u.index).Addr().Interface().(interface{ times(float64) }).times(x / 100)
			v.rebuilt = v.rebuilt || u.kind != KindNonlinearLoad
		case RangeBackground:
			for k := range background(u.index) {
				background(u.index)[k].Percent *= x / 100
			}
		case RangeAngle:
			if u.kind == KindSupply {
				lines := background(u.index)
				for k := range lines {
					if lines[k].Order == u.Order {
						deg := x
						if lines[k].AngleDeg != nil {
							deg += *lines[k].AngleDeg
						}
						lines[k].AngleDeg = &deg
					}
				}
				continue
			}
			if v.turns == nil {
				v.turns = map[string]map[int]complex128{}
			}
			if v.turns[u.Item] == nil {
				v.turns[u.Item] = map[int]complex128{}
			}
			v.turns[u.Item][u.Order] = cmplx.Rect(1, x*math.Pi/180)
		case RangeCapacitance, RangeInductance:
			if v.drift == nil {
				v.drift = map[string]filter.Drift{}
			}
			d := v.drift[u.Item]
			if u.Kind == RangeCapacitance {
				d.Capacitance = x / 100
			} else {
				d.Inductance = x / 100
			}
			v.drift[u.Item] = d
		}
	}
	return v
}

// updated are the kinds whose values an update of the reduced network can
// express.
var updated = []Kind{KindSupply, KindNonlinearLoad, KindBank, KindFilter, KindMeasure, KindAssessment}

// Varying names the banks and filters among the unknowns, for Quick.
func Varying(unknowns []Unknown) []string {
	var names []string
	for i := range unknowns {
		if u := &unknowns[i]; (u.kind == KindBank || u.kind == KindFilter) && !slices.Contains(names, u.Item) {
			names = append(names, u.Item)
		}
	}
	return names
}

// number returns a number of an item.
func (s *Study) number(kind Kind, index int, f *Field) float64 {
	return s.list(kind).Index(index).FieldByIndex(f.index).Float()
}

func valueOf(item any, f *Field) reflect.Value {
	return reflect.ValueOf(item).Elem().FieldByIndex(f.index)
}

// turn turns a load's spectrum.
func (v *Variation) turn(load string, lines []line) {
	if v == nil || v.turns[load] == nil {
		return
	}
	for i := range lines {
		if by, ok := v.turns[load][lines[i].order]; ok {
			lines[i].share *= by
		}
	}
}

// drifted returns a branch as its components and the frequency make it.
func (v *Variation) drifted(name string, b *filter.Branch) *filter.Branch {
	if v == nil {
		return b
	}
	d := v.drift[name]
	d.Frequency = v.frequency
	if d == (filter.Drift{}) {
		return b
	}
	return b.Drifted(d)
}

// ratio returns the system frequency over nominal, 0 when it is nominal.
func (v *Variation) ratio() float64 {
	if v == nil || v.frequency == 0 {
		return 0
	}
	return 1 + v.frequency
}
