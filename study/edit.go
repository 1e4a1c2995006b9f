package study

import (
	"fmt"
	"maps"
	"reflect"
	"slices"
)

// list returns the slice of a kind, addressable.
func (s *Study) list(kind Kind) reflect.Value {
	return reflect.ValueOf(s).Elem().Field(InfoOf(kind).field)
}

// Items returns pointers to the study's items of a kind, in file order.
func (s *Study) Items(kind Kind) []any {
	list := s.list(kind)
	out := make([]any, list.Len())
	for i := range out {
		out[i] = list.Index(i).Addr().Interface()
	}
	return out
}

// NameOf returns an item's name.
func NameOf(item any) string {
	return item.(interface{ itemName() string }).itemName()
}

func (n *Named) itemName() string { return n.Name }

// ProvenanceOf returns an item's provenance by key; nil when none is stated.
func ProvenanceOf(item any) map[string]Provenance {
	return reflect.ValueOf(item).Elem().FieldByName("Provenance").Interface().(map[string]Provenance)
}

// SetProvenance states where a value of an item comes from; Unstated removes
// the statement.
func SetProvenance(item any, key string, p Provenance) {
	f := reflect.ValueOf(item).Elem().FieldByName("Provenance")
	next := maps.Clone(ProvenanceOf(item))
	if next == nil {
		next = map[string]Provenance{}
	}
	next[key] = p
	if p.Origin == Unstated {
		delete(next, key)
	}
	if len(next) == 0 {
		next = nil
	}
	f.Set(reflect.ValueOf(next))
}

// Find returns the item of a name with its kind; nil when there is none.
func (s *Study) Find(name string) (Kind, any) {
	for _, k := range kinds {
		for _, item := range s.Items(k.Kind) {
			if NameOf(item) == name {
				return k.Kind, item
			}
		}
	}
	return "", nil
}

// KindOf returns the kind of an item made by NewItem or found in a study.
func KindOf(item any) Kind {
	t := reflect.TypeOf(item).Elem()
	study := reflect.TypeFor[Study]()
	for _, k := range kinds {
		if study.Field(k.field).Type.Elem() == t {
			return k.Kind
		}
	}
	return ""
}

// Add puts an item (a pointer as NewItem returns it) at the end of its list.
// Its name must be new.
func (s *Study) Add(item any) error {
	name := NameOf(item)
	if kind, old := s.Find(name); old != nil {
		return &FieldError{Item: name, Field: "name", Problem: fmt.Sprintf("there is %s of this name already", a(InfoOf(kind).Singular)), Remedy: "choose another name"}
	}
	list := s.list(KindOf(item))
	list.Set(reflect.Append(list, reflect.ValueOf(item).Elem()))
	return nil
}

// FreeName returns a name for a new item that nothing in the study has yet:
// the base with the smallest number that is free.
func (s *Study) FreeName(base string) string {
	for i := 1; ; i++ {
		name := fmt.Sprintf("%s%d", base, i)
		if _, item := s.Find(name); item == nil {
			return name
		}
	}
}

// references calls f with each field of each item that holds names of other
// items; f returns the names to put there.
func (s *Study) references(f func(item any, field *Field, names []string) []string) {
	for _, k := range kinds {
		for _, item := range s.Items(k.Kind) {
			v := reflect.ValueOf(item).Elem()
			for i := range described[k.Kind] {
				d := &described[k.Kind][i]
				at := v.FieldByIndex(d.index)
				if d.Type == Rows {
					rowReferences(item, d, at, f)
				}
				if d.Ref == nil && !usesSet(k.Kind, d) {
					continue
				}
				if d.Type == Names {
					old := at.Interface().([]string)
					if next := f(item, d, old); !slices.Equal(next, old) {
						at.Set(reflect.ValueOf(next))
					}
				} else if next := f(item, d, []string{at.String()}); len(next) == 1 {
					at.SetString(next[0])
				}
			}
		}
	}
}

// rowReferences does the same for the columns of a list of rows.
func rowReferences(item any, d *Field, list reflect.Value, f func(item any, field *Field, names []string) []string) {
	for n := range d.Columns {
		col := &d.Columns[n]
		if col.Ref == nil {
			continue
		}
		for r := range list.Len() {
			at := list.Index(r).FieldByIndex(col.index)
			if next := f(item, col, []string{at.String()}); len(next) == 1 && next[0] != at.String() {
				at.SetString(next[0])
			}
		}
	}
}

// ReferencesTo returns the names of the items that refer to the named one.
func (s *Study) ReferencesTo(name string) []string {
	var out []string
	s.references(func(item any, _ *Field, names []string) []string {
		if slices.Contains(names, name) && !slices.Contains(out, NameOf(item)) {
			out = append(out, NameOf(item))
		}
		return names
	})
	return out
}

// Remove takes the named item out. Items that still refer to it are an error
// that names them, since the study could not be evaluated without it.
func (s *Study) Remove(name string) error {
	if users := s.ReferencesTo(name); len(users) > 0 {
		return &FieldError{Item: name, Problem: fmt.Sprintf("is still used by %s", join(users)), Remedy: "remove or reconnect those first"}
	}
	for _, k := range kinds {
		list := s.list(k.Kind)
		for i := range list.Len() {
			if NameOf(list.Index(i).Addr().Interface()) == name {
				next := reflect.AppendSlice(list.Slice3(0, i, i), list.Slice(i+1, list.Len()))
				list.Set(next)
				delete(s.Drawing, name)
				return nil
			}
		}
	}
	return &FieldError{Item: name, Field: "name", Problem: "there is no such item", Remedy: "choose an item of this study"}
}

// Rename gives an item another name everywhere it is used.
func (s *Study) Rename(old, next string) error {
	if old == next {
		return nil
	}
	if next == "" {
		return &FieldError{Item: old, Field: "name", Problem: "is empty", Remedy: "give it a name"}
	}
	if kind, item := s.Find(next); item != nil {
		return &FieldError{Item: old, Field: "name", Problem: fmt.Sprintf("%q is the name of %s already", next, a(InfoOf(kind).Singular)), Remedy: "choose another name"}
	}
	_, item := s.Find(old)
	if item == nil {
		return &FieldError{Item: old, Field: "name", Problem: "there is no such item", Remedy: "choose an item of this study"}
	}
	reflect.ValueOf(item).Elem().FieldByName("Name").SetString(next)
	s.references(func(_ any, _ *Field, names []string) []string {
		if !slices.Contains(names, old) {
			return names
		}
		names = slices.Clone(names)
		names[slices.Index(names, old)] = next
		return names
	})
	if p, ok := s.Drawing[old]; ok {
		s.Drawing = maps.Clone(s.Drawing)
		delete(s.Drawing, old)
		s.Drawing[next] = p
	}
	return nil
}

// Clone returns a deep copy that shares nothing with s.
func (s *Study) Clone() *Study {
	out := reflect.New(reflect.TypeFor[Study]())
	out.Elem().Set(deepCopy(reflect.ValueOf(s).Elem()))
	return out.Interface().(*Study)
}

// CloneItem returns a deep copy of an item.
func CloneItem(item any) any {
	v := reflect.ValueOf(item).Elem()
	out := reflect.New(v.Type())
	out.Elem().Set(deepCopy(v))
	return out.Interface()
}

func deepCopy(v reflect.Value) reflect.Value {
	switch v.Kind() {
	case reflect.Struct:
		out := reflect.New(v.Type()).Elem()
		for i := range v.NumField() {
			out.Field(i).Set(deepCopy(v.Field(i)))
		}
		return out
	case reflect.Slice:
		if v.IsNil() {
			return v
		}
		out := reflect.MakeSlice(v.Type(), v.Len(), v.Len())
		for i := range v.Len() {
			out.Index(i).Set(deepCopy(v.Index(i)))
		}
		return out
	case reflect.Map:
		if v.IsNil() {
			return v
		}
		out := reflect.MakeMapWithSize(v.Type(), v.Len())
		for it := v.MapRange(); it.Next(); {
			out.SetMapIndex(it.Key(), deepCopy(it.Value()))
		}
		return out
	case reflect.Pointer:
		if v.IsNil() {
			return v
		}
		out := reflect.New(v.Type().Elem())
		out.Elem().Set(deepCopy(v.Elem()))
		return out
	}
	return v
}

func join(names []string) string {
	switch n := len(names); n {
	case 0:
		return ""
	case 1:
		return names[0]
	default:
		text := names[0]
		for _, name := range names[1 : n-1] {
			text += ", " + name
		}
		return text + " and " + names[n-1]
	}
}
