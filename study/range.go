package study

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// A Range says between what bounds a value lies that is not known for sure.
type Range struct {
	Named
	Kind         string  `json:"kind" label:"What varies" choices:"value|power|angle|background|capacitance|inductance|frequency" need:"yes" help:"A value of an item; the power a load draws; the angle of each order of a load or background; the magnitude of a background; the capacitance or inductance of a bank, filter or measure; the system frequency."`
	Item         string  `json:"item,omitempty" label:"Item" ref:"supply|bus|transformer|cable|reactor|load|motor|generator|nonlinearLoad|bank|filter|measure|assessment" for:"value|power|angle|background|capacitance|inductance" default:"every item that has it, each by itself" help:"Item whose value it is."`
	Field        string  `json:"field,omitempty" label:"Field" for:"value" help:"Key of the value in the study file, such as faultMVA."`
	Low          float64 `json:"low" label:"Lowest" help:"In the value's own unit. Power and background: per cent of what is stated. Angle: degrees added to each order by itself. Capacitance and inductance: per cent off nominal. Frequency: Hz."`
	High         float64 `json:"high" label:"Highest" help:"As lowest."`
	Distribution string  `json:"distribution,omitempty" label:"Distribution" choices:"uniform|triangular|normal" default:"uniform" help:"Uniform; triangular with its top at the stated value; or normal, with 95 % between lowest and highest and nothing beyond three standard deviations."`
	Noted
}

// KindRange is the kind of the ranges.
const KindRange Kind = "range"

// The kinds of range.
const (
	RangeValue       = "value"
	RangePower       = "power"
	RangeAngle       = "angle"
	RangeBackground  = "background"
	RangeCapacitance = "capacitance"
	RangeInductance  = "inductance"
	RangeFrequency   = "frequency"
)

// rangeKinds lists the kinds of item that a kind of range may speak of.
var rangeKinds = map[string][]Kind{
	RangePower:       {KindLoad, KindMotor, KindNonlinearLoad},
	RangeAngle:       {KindNonlinearLoad, KindSupply},
	RangeBackground:  {KindSupply},
	RangeCapacitance: {KindBank, KindFilter, KindMeasure},
	RangeInductance:  {KindBank, KindFilter, KindMeasure},
}

// An Unknown is one quantity that a range leaves open: of one item, and for
// angles of one order.
type Unknown struct {
	Range        string // name of the range
	Kind         string // kind of the range
	Item         string // empty for the frequency
	Field        string // key in the study file; where provenance is looked up
	Order        int    // of an angle
	Low, High    float64
	Distribution string
	Stated       float64 // what the study has: the top of a triangle
	Unit         string
	Provenance   Provenance // of the field that it stands for
	kind         Kind
	index        int // of the item in its list
}

// Words names the quantity: "Grid, fault level", "Fast chargers, angle of
// order 5".
func (u *Unknown) Words() string {
	switch u.Kind {
	case RangeFrequency:
		return "system frequency"
	case RangeAngle:
		return fmt.Sprintf("%s, angle of order %d", u.Item, u.Order)
	}
	return u.Item + ", " + u.what()
}

func (u *Unknown) what() string {
	if f := FieldOf(u.kind, u.Field); u.Kind == RangeValue && f != nil {
		return strings.ToLower(f.Label[:1]) + f.Label[1:]
	}
	return u.Kind
}

// Group names the quantity without its order, for the angles of one item
// belong together.
func (u *Unknown) Group() string {
	if u.Kind == RangeAngle {
		return u.Item + ", angles"
	}
	return u.Words()
}

// Unknowns lists what the ranges of the study leave open, in file order.
func (s *Study) Unknowns() []Unknown {
	var list []Unknown
	for i := range s.Ranges {
		list = append(list, s.unknowns(&s.Ranges[i])...)
	}
	return list
}

func (s *Study) unknowns(r *Range) []Unknown {
	u := Unknown{Range: r.Name, Kind: r.Kind, Low: r.Low, High: r.High, Distribution: r.Distribution}
	if u.Distribution == "" {
		u.Distribution = "uniform"
	}
	switch r.Kind {
	case RangeFrequency:
		u.Stated, u.Unit = s.FrequencyHz, "Hz"
		return []Unknown{u}
	case RangeValue:
		kind, item := s.Find(r.Item)
		f := FieldOf(kind, r.Field)
		if f == nil {
			return nil
		}
		u.Item, u.Field, u.kind, u.Unit = r.Item, r.Field, kind, f.Unit
		u.index = slices.IndexFunc(s.Items(kind), func(x any) bool { return NameOf(x) == r.Item })
		u.Stated, u.Provenance = s.number(kind, u.index, f), ProvenanceOf(item)[r.Field]
		return []Unknown{u}
	}
	var list []Unknown
	for _, kind := range rangeKinds[r.Kind] {
		for n, item := range s.Items(kind) {
			if r.Item != "" && r.Item != NameOf(item) {
				continue
			}
			u.Item, u.kind, u.index = NameOf(item), kind, n
			list = append(list, s.openIn(u, item)...)
		}
	}
	return list
}

// openIn returns what is open in one item; nothing when the item has no such
// thing.
func (s *Study) openIn(u Unknown, item any) (list []Unknown) {
	u.Field = map[string]string{RangePower: "kW", RangeBackground: "background", RangeCapacitance: "kvar", RangeInductance: "kvar"}[u.Kind]
	switch u.Kind {
	case RangePower:
		u.Stated, u.Unit = 100, "%"
		if l, ok := item.(*NonlinearLoad); ok && l.CurrentA > 0 {
			u.Field = "currentA"
		}
	case RangeBackground:
		u.Stated, u.Unit = 100, "%"
		if len(item.(*Supply).Background) == 0 {
			return nil
		}
	case RangeAngle:
		u.Unit, u.Field = "deg", "background"
		var orders []int
		switch x := item.(type) {
		case *Supply:
			for _, b := range x.Background {
				orders = append(orders, b.Order)
			}
		case *NonlinearLoad:
			u.Field = "spectrum"
			lines, _ := (&plan{study: s}).spectrumOf(x)
			for _, t := range lines {
				if t.order > 1 && t.order <= s.Order() {
					orders = append(orders, t.order)
				}
			}
		}
		u.Provenance = ProvenanceOf(item)[u.Field]
		for _, h := range orders {
			u.Order = h
			list = append(list, u)
		}
		return list
	case RangeCapacitance, RangeInductance:
		u.Unit = "%"
		if m, ok := item.(*Measure); ok && !IsFilter(m.Kind) {
			return nil
		}
	}
	u.Provenance = ProvenanceOf(item)[u.Field]
	return []Unknown{u}
}

// ranges checks the ranges: what the tags cannot say.
func (c *checker) ranges() {
	s := c.study
	seen := map[string]string{}
	for i := range s.Ranges {
		r := &s.Ranges[i]
		switch {
		case math.IsNaN(r.Low) || math.IsNaN(r.High) || math.IsInf(r.Low, 0) || math.IsInf(r.High, 0):
			c.add(r.Name, "low", "is not a number", "give the lowest and the highest value")
			continue
		case r.Low > r.High:
			c.add(r.Name, "low", fmt.Sprintf("the range runs backwards, from %g to %g", r.Low, r.High), "give the lower value as lowest")
			continue
		case r.Low == r.High:
			c.add(r.Name, "low", fmt.Sprintf("the range has no width: both ends are %g", r.Low), "give the value to its item, or state between what bounds it lies")
			continue
		}
		before := len(c.found)
		c.oneRange(r)
		if len(c.found) > before {
			continue
		}
		list := s.unknowns(r)
		if len(list) == 0 {
			c.add(r.Name, "item", "nothing in the study varies by it", "name an item that has what varies, or remove the range")
		}
		for _, u := range list {
			key := fmt.Sprintf("%s\x00%s\x00%s\x00%d", u.Kind, u.Item, u.Field, u.Order)
			if other, twice := seen[key]; twice {
				c.add(r.Name, "item", fmt.Sprintf("%s varies in the range %s already", u.Words(), other), "leave one range for each value")
				break
			}
			seen[key] = r.Name
		}
	}
}

func (c *checker) oneRange(r *Range) {
	within := func(lo, hi float64, unit string) {
		if r.Low < lo || r.High > hi {
			c.add(r.Name, "low", fmt.Sprintf("the range runs from %g to %g%s", r.Low, r.High, unit), fmt.Sprintf("stay between %g and %g%s", lo, hi, unit))
		}
	}
	kind := c.kind[r.Item]
	if may := rangeKinds[r.Kind]; may != nil && r.Item != "" && !slices.Contains(may, kind) {
		words := make([]string, len(may))
		for i, k := range may {
			words[i] = InfoOf(k).Singular
		}
		c.add(r.Name, "item", fmt.Sprintf("%q is %s, which has no %s", r.Item, a(InfoOf(kind).Singular), r.Kind), "name "+a(strings.Join(words, " or ")))
		return
	}
	switch r.Kind {
	case RangeFrequency:
		within(0.8*c.study.FrequencyHz, 1.2*c.study.FrequencyHz, " Hz")
	case RangePower:
		within(1, 300, " %")
	case RangeBackground:
		within(0, 1000, " %")
	case RangeAngle:
		within(-360, 360, " deg")
	case RangeCapacitance, RangeInductance:
		within(-90, 100, " %")
	case RangeValue:
		if r.Item == "" {
			c.add(r.Name, "item", "is missing", "name the item whose value varies")
			return
		}
		f := FieldOf(kind, r.Field)
		switch {
		case f == nil || f.Type != Number || f.Pointer || r.Field == "cost" || r.Field == "nominalKV":
			var may []string
			for _, d := range described[kind] {
				if d.Type == Number && !d.Pointer && d.Key != "cost" && d.Key != "nominalKV" {
					may = append(may, d.Key)
				}
			}
			c.add(r.Name, "field", fmt.Sprintf("%q is no value of %s that can vary", r.Field, r.Item), "choose one of "+strings.Join(may, ", "))
		case !f.Range.Holds(r.Low) || !f.Range.Holds(r.High):
			c.add(r.Name, "low", fmt.Sprintf("the range runs from %g to %g%s; %s may be %s", r.Low, r.High, f.withUnit(), r.Field, f.Range), "stay within that")
		default:
			c.stated(r, kind, f)
		}
	}
}

// stated refuses a range of a value that the study does not state, since it may
// stand in place of another one (fault level or fault current).
func (c *checker) stated(r *Range, kind Kind, f *Field) {
	for _, item := range c.study.Items(kind) {
		if NameOf(item) == r.Item && f.text(valueOf(item, f)) == "" {
			c.add(r.Name, "field", fmt.Sprintf("%s states no %s", r.Item, r.Field), "state a value there first, or let another value vary")
		}
	}
}
