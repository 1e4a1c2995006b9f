package explore

import (
	"context"

	"quietbus/study"
)

// Worth is what one measure buys: the highest share of any limit in any
// operating state, with it and without.
type Worth struct {
	Name  string
	Base  float64 // no measure at all
	Alone float64 // this one alone
	Now   float64 // those that are on
	Flip  float64 // those that are on with this one flipped; what it cannot be together with goes off
	Off   []study.Conflict
	Loses []Loss // what stops working without it: limits kept now and not without; nil while it is off
}

// Loss is a limit that is kept with a measure and not without it.
type Loss struct {
	Point, Row string
	Share      float64 // without the measure
	State      string  // worst operating state
}

// Worth works out what each measure is worth beside those that are on, in file
// order. Shares are NaN where nothing was assessed or nothing solved.
func (e *Explorer) Worth(ctx context.Context, on []string) ([]Worth, error) {
	mask := e.Mask(on)
	type want struct{ alone, flip uint64 }
	masks := []uint64{0, mask}
	wants := make([]want, len(e.study.Measures))
	out := make([]Worth, len(wants))
	for i := range out {
		name := e.study.Measures[i].Name
		next, off := e.study.Switched(e.Names(mask), name)
		out[i].Name, out[i].Off = name, off
		wants[i] = want{1 << i, e.Mask(next)}
		masks = append(masks, wants[i].alone, wants[i].flip)
	}
	if _, err := e.sets(ctx, masks, nil); err != nil {
		return nil, err
	}
	share := func(m uint64) float64 { s, _ := e.Known(m); return s.Share }
	for i := range out {
		w := &out[i]
		w.Base, w.Now, w.Alone, w.Flip = share(0), share(mask), share(wants[i].alone), share(wants[i].flip)
		if mask>>i&1 == 1 {
			var err error
			if w.Loses, err = e.loses(ctx, mask, wants[i].flip); err != nil {
				return nil, err
			}
		}
	}
	return out, nil
}

// loses lists the limits that are kept in one set and not in another, each at
// its worst state.
func (e *Explorer) loses(ctx context.Context, with, without uint64) ([]Loss, error) {
	b, err := e.take()
	if err != nil {
		return nil, err
	}
	defer e.give(b)
	kept, err := e.briefs(ctx, b, with)
	if err != nil {
		return nil, ctx.Err() // a set without a solution keeps nothing
	}
	lost, err := e.briefs(ctx, b, without)
	if err != nil {
		return nil, ctx.Err()
	}
	type key struct{ point, row string }
	over := map[key]bool{}
	for _, x := range kept {
		for i := range x.Points {
			for _, r := range x.Points[i].Rows {
				if !r.Meets() {
					over[key{x.Points[i].Name, study.RowName(r)}] = true
				}
			}
		}
	}
	var list []Loss
	at := map[key]int{}
	for _, x := range lost {
		for i := range x.Points {
			for _, r := range x.Points[i].Rows {
				k := key{x.Points[i].Name, study.RowName(r)}
				if r.Meets() || over[k] {
					continue
				}
				n, there := at[k]
				if !there {
					at[k] = len(list)
					list = append(list, Loss{k.point, k.row, r.Share, x.State})
				} else if r.Share > list[n].Share {
					list[n].Share, list[n].State = r.Share, x.State
				}
			}
		}
	}
	return list, nil
}
