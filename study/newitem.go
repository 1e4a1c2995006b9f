package study

import "reflect"

// NewItem returns a pointer to a new item of a kind with typical values, each
// marked as assumed. It has no name and stands on no bus yet.
func NewItem(kind Kind) any {
	var item any
	switch kind {
	case KindSupply:
		item = &Supply{FaultMVA: 250, XOverR: 10}
	case KindBus:
		item = &Bus{NominalKV: 0.4}
	case KindTransformer:
		// Regulation (EU) 548/2014 tier 1 load loss (from memory), IEC 60076-5 impedance (from memory)
		item = &Transformer{RatedKVA: 1000, HVKV: 11, LVKV: 0.4, ImpedancePercent: 6, LoadLossKW: 10.5, VectorGroup: "Dyn11"}
	case KindCable:
		// 240 mm2 copper at operating temperature, common practice
		item = &Cable{LengthM: 50, ROhmPerKm: 0.0961, XOhmPerKm: 0.075}
	case KindReactor:
		item = &Reactor{InductanceMH: 0.1}
	case KindCoupler:
		item = &Coupler{}
	case KindLoad:
		item = &Load{KW: 50, Kvar: 20}
	case KindMotor:
		item = &Motor{RatedKVA: 100, KW: 70, Kvar: 45, LockedRotorRatio: 6}
	case KindGenerator:
		item = &Generator{RatedKVA: 500, Subtransient: 15}
	case KindNonlinearLoad:
		item = &NonlinearLoad{KW: 100, Displacement: 0.95, Spectrum: "six-pulse-3pct"}
	case KindBank:
		item = &Bank{Kvar: 100}
	case KindFilter:
		item = &Filter{Kind: "single-tuned", Kvar: 100, Order: 4.8}
	case KindMeasure:
		item = &Measure{Kind: SingleTuned, Kvar: 100, Order: 4.8}
	case KindAssessment:
		item = &Assessment{Set: "iec61000-2-4-class2"}
	case KindLimitSet:
		item = &LimitSet{}
	case KindScan:
		item = &ScanRequest{}
	case KindState:
		item = &OperatingState{}
	case KindRange:
		item = &Range{Kind: RangeAngle, Low: -180, High: 180}
	default:
		return nil
	}
	v := reflect.ValueOf(item).Elem()
	for _, f := range Describe(kind) {
		if (f.Type == Number || f.Type == Whole) && !v.FieldByIndex(f.index).IsZero() && f.Key != "nominalKV" {
			SetProvenance(item, f.Key, Provenance{Origin: Assumed, Note: "typical value"})
		}
	}
	return item
}
