package handout

import (
	"math"
	"math/cmplx"

	"quietbus/study"
	"quietbus/study/limits"
	"quietbus/study/phasor"
)

// sample returns an invented study with outcomes made by hand: the layout and
// the results document do not need a solver to be tested.
func sample() Input {
	s := &study.Study{
		Format:      1,
		FrequencyHz: 50,
		MaxOrder:    25,
		Title: study.Title{
			Study: "Harmonics of the press hall, “Σ-line” extension", Client: "Nobody & Sons (invented)", Site: "Nowhere 7",
			Author: "A. Nonymous", Revision: "B", Date: "2 February 2031", Invented: true,
			Remarks: "Planned extension with 630 kW of drives. The bank at board B is 20 years old; 45 °C hall, 35 mm² tails, Ω-rated earth – see letter.",
		},
		Supplies: []study.Supply{{Named: study.Named{Name: "Grid"}, Bus: "PCC", FaultMVA: 180, XOverR: 8,
			Noted: study.Noted{Provenance: map[string]study.Provenance{"faultMVA": {Origin: study.Given, Note: "letter of the network operator, 3 May"}, "xOverR": {Origin: study.Assumed, Note: "usual at this voltage"}}}}},
		Buses: []study.Bus{{Named: study.Named{Name: "PCC"}, NominalKV: 11}, {Named: study.Named{Name: "Board A"}, NominalKV: 0.4}, {Named: study.Named{Name: "Board B"}, NominalKV: 0.4}, {Named: study.Named{Name: "Spare"}, NominalKV: 0.4}},
		Transformers: []study.Transformer{{Named: study.Named{Name: "T1"}, HVBus: "PCC", LVBus: "Board A", RatedKVA: 1000, HVKV: 11, LVKV: 0.415, ImpedancePercent: 5.75, XOverR: 6, VectorGroup: "Dyn11",
			Noted: study.Noted{Provenance: map[string]study.Provenance{"ratedKVA": {Origin: study.Given, Note: "nameplate"}, "impedancePercent": {Origin: study.Measured, Note: "works test"}, "xOverR": {Origin: study.Assumed}}}}},
		NonlinearLoads: []study.NonlinearLoad{{Named: study.Named{Name: "Drives"}, Bus: "Board A", KW: 630, Spectrum: "typed", Lines: []study.SpectrumLine{{Order: 5, Percent: 32}, {Order: 7, Percent: 11}}}},
		Banks:          []study.Bank{{Named: study.Named{Name: "C1"}, Bus: "Board A", Kvar: 300}},
		Measures: []study.Measure{
			{Named: study.Named{Name: "Detune C1"}, Kind: study.DetuneBank, On: true, Target: "C1", Percent: 7, Cost: 4200},
			{Named: study.Named{Name: "Filter 5"}, Kind: study.SingleTuned, On: true, Bus: "Board A", Kvar: 120, Order: 4.8, Cost: 9800},
			{Named: study.Named{Name: "Outlet low-pass"}, Kind: study.LowPassRC, On: true, Target: "Instruments", ROhm: 30, CUF: 100, Cost: 150},
			{Named: study.Named{Name: "Active"}, Kind: study.ActiveFilter, Bus: "Board A", RatedA: 300, Cost: 38000},
		},
		Assessments: []study.Assessment{{Named: study.Named{Name: "PCC"}, Bus: "PCC", Set: "ieee519-2022", Current: "Grid"}, {Named: study.Named{Name: "Board A"}, Bus: "Board A", Set: "iec61000-2-4-class2"}},
	}
	return Input{Study: s, Before: sampleOutcome(s, nil, 1), After: sampleOutcome(s, s.OnMeasures(), 0.35), Version: "0.1-test"}
}

// sampleSpectrum returns a three-phase set with a fundamental of v and a
// rectifier's orders in level per cent.
func sampleSpectrum(order int, v, level float64) (phase [3]phasor.Spectrum) {
	for p := range phase {
		phase[p] = phasor.New(order)
		for h := 1; h <= order; h++ {
			turn := -2 * math.Pi / 3 * float64(p*h)
			switch {
			case h == 1:
				phase[p][1] = cmplx.Rect(v, turn)
			case h%6 == 5 || h%6 == 1:
				phase[p][h] = cmplx.Rect(v*level/100*5/float64(h)*(1+0.02*float64(p)), turn+0.3*float64(h))
			}
		}
	}
	return phase
}

func sampleOutcome(s *study.Study, on []string, level float64) *study.Outcome {
	o := &study.Outcome{Study: s, On: on, Check: study.Check{Residual: 3.2e-14, Balance: 1.1e-12, Rounds: 4}}
	n := s.Order()
	for i, b := range s.Buses {
		r := study.BusResult{Name: b.Name, NominalV: 1000 * b.NominalKV, Live: b.Name != "Spare"}
		if r.Live {
			r.Phase = sampleSpectrum(n, r.NominalV/math.Sqrt(3)*0.985, level*float64(1+2*i))
		} else {
			r.Phase = [3]phasor.Spectrum{phasor.New(n), phasor.New(n), phasor.New(n)}
		}
		for q := range r.Seq {
			r.Seq[q] = phasor.New(n)
			for h := 1; h <= n; h++ {
				a := cmplx.Rect(1, 2*math.Pi/3*float64(q))
				r.Seq[q][h] = (r.Phase[0][h] + a*r.Phase[1][h] + a*a*r.Phase[2][h]) / 3
			}
		}
		o.Buses = append(o.Buses, r)
	}
	line, heavy := sampleSpectrum(n, 37.25, 20*level), sampleSpectrum(n, 987.5, 22*level)
	neutral := phasor.New(n)
	neutral[3] = 1.25
	o.Elements = []study.ElementResult{
		{Name: "Grid", Kind: study.KindSupply, Ends: []study.EndResult{{Bus: "PCC", Phase: line}}},
		{Name: "T1", Kind: study.KindTransformer, Ends: []study.EndResult{{Bus: "PCC", Phase: line}, {Bus: "Board A", Phase: heavy, Neutral: neutral}}},
		{Name: "Drives", Kind: study.KindNonlinearLoad, Ends: []study.EndResult{{Bus: "Board A", Phase: heavy}}},
	}
	o.Points = []study.PointResult{samplePoint("PCC", "PCC", level, true), samplePoint("Board A", "Board A", 3*level, false)}
	for _, name := range []string{"PCC", "Board A"} {
		r := study.ScanResult{Name: "look into " + name, Bus: name, Sequence: phasor.Positive}
		for h := 1.0; h <= float64(n); h += 0.25 {
			r.Orders = append(r.Orders, h)
			r.Z = append(r.Z, 1/(1/complex(0.002, 0.01*h)+complex(0, h/(1.1+level))))
		}
		r.Peaks = []study.Peak{{Order: 11.2, Ohm: 0.21, Q: 9}}
		o.Scans = append(o.Scans, r)
	}
	if len(on) > 0 {
		o.Measures = sampleMeasures()
		o.Warnings = []string{"Filter 5 carries 4.1 % more than its rating at the highest supply voltage."}
	}
	return o
}

func samplePoint(name, bus string, level float64, current bool) study.PointResult {
	p := study.PointResult{Name: name, Bus: bus, Set: "invented-1", SetTitle: "Invented limits, edition 1"}
	add := func(quantity, index string, h int, value, limit float64, mark limits.Mark) {
		p.Rows = append(p.Rows, limits.Row{Unit: limits.Percent, Quantity: quantity, Index: index, Order: h, Phase: "b", Value: value, Limit: limit, Share: value / limit,
			Rule: "Invented limits, edition 1, Table " + map[string]string{"voltage": "1", "current": "2, Isc/IL 20<50"}[quantity], Mark: mark})
	}
	add("voltage", "THD", 0, 3.1*level, 5, limits.Memory)
	for h := 2; h <= 25; h++ {
		value := 0.01
		if h%6 == 5 || h%6 == 1 {
			value = 15 * level / float64(h)
		}
		add("voltage", "", h, value, 3, limits.Found)
	}
	if !current {
		p.NotAssessed = []string{"currents: no maximum demand current is stated"}
		return p
	}
	p.IscA, p.ILA = 9450, 41.5
	add("current", "TDD", 0, 9*level, 8, limits.Memory)
	add("current", "", 5, 8.1*level, 7, limits.Memory)
	return p
}

func sampleMeasures() []study.MeasureResult {
	duty := &study.Duty{CurrentA1: 173.2, CurrentA: 214.8, VoltageV1: 254.1, VoltageV: 262.7, PeakV: 398.2, RatedV: 277, LossW1: 210, LossW: 388, KvarRated: 157.3, KvarOutput: 118.2}
	return []study.MeasureResult{
		{Name: "Detune C1", Kind: study.DetuneBank, Bus: "Board A", Duty: duty,
			Components: []study.Component{{Part: "capacitor", Symbol: "C", Value: 1.82e-3, Note: "star equivalent; rated 0.48 kV"}, {Part: "reactor", Symbol: "L", Value: 3.9e-4, Note: "X/R 50 at order 1"}},
			Notes:      []string{"The capacitors of C1 stay; behind the reactor they see 7.53 % more voltage."}},
		{Name: "Filter 5", Kind: study.SingleTuned, Bus: "Board A", Duty: duty,
			Components: []study.Component{{Part: "capacitor", Symbol: "C", Value: 2.28e-3, Note: "three in star"}, {Part: "reactor", Symbol: "L", Value: 1.93e-4, Note: "X/R 40 at order 4.8"}, {Part: "winding resistance", Symbol: "R", Value: 7.27e-3}}},
		{Name: "Outlet low-pass", Kind: study.LowPassRC, Bus: "Board A",
			Components: []study.Component{{Part: "resistor", Symbol: "R", Value: 30}, {Part: "capacitor", Symbol: "C", Value: 1e-4, Note: "phase to neutral"}},
			Response:   []study.Gain{{Order: 1, Ratio: 0.728, LagDeg: 43.3}, {Order: 5, Ratio: 0.207, LagDeg: 78}, {Order: 7, Ratio: 0.15, LagDeg: 81.4}}},
	}
}
