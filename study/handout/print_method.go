package handout

import (
	"fmt"
	"strings"

	"gonum.org/v1/plot/vg"

	"quietbus/study"
	"quietbus/study/converter"
)

// methodParts is the method in the order in which a study is computed. Each
// part closes with the document it follows, where there is one.
var methodParts = [][2]string{
	{"Phasors", "Values are rms, angles against a cosine: x(t) = X0 + sum of √2 |Xh| cos(hωt + arg Xh). Currents are positive into the item they are stated for. A load's spectrum refers to the fundamental voltage at its own terminals: the current's angle at order h is the typed angle plus h times the angle of that voltage."},
	{"Sequences", "Passive items are balanced, loads need not be. Each order is solved in three separate networks (positive, negative, zero sequence), so that single-phase loads, triplen orders and neutral currents come out phase by phase. Method of symmetrical components: C. L. Fortescue, Trans. AIEE 37 (1918)."},
	{"Vector groups", "Clock number n: the low-voltage positive sequence lags the high-voltage one by n × 30°, the negative sequence leads by as much. The zero sequence follows windings and neutral connections. Notation of IEC 60076-1."},
	{"Order 1", "A power flow: each supply is an EMF behind its fault impedance; linear loads draw constant impedance, power or current as stated; converters draw their power and displacement factor at the solved voltage."},
	{"Orders above 1", "Nodal admittance Y(h) V = I order by order, with the non-linear loads as current sources and the supply's background voltage behind its impedance. Frequency models: transformer and motor leakage reactance in proportion to the order, resistance by the stated exponent; cables with their skin-effect law (Bessel functions for round conductors, or the form of IEC 60287-1-1); linear loads by the stated passive model. After J. Arrillaga and N. R. Watson, Power System Harmonics, 2nd ed. (2003), and the load models of CIGRE WG 36-05, Electra 77 (1981)."},
	{"Several sources at one order", "Added as phasors with the angles stated, an angle left out counting as 0; or by the second summation law Uh = (Σ |Uhi|^α)^(1/α) of IEC/TR 61000-3-6:2008 clause 7.2.1, or arithmetically (α = 1), for each voltage and current from what every non-linear load and every background makes of it alone. An active filter counts with the loads it answers to. Angles are then those of the phasor sum."},
	{"Impedance scans", "Driving-point impedance with the EMFs shorted and the non-linear loads open. A peak is a parallel resonance, a valley a series one."},
	{"Filters", "Stated kvar are the output of the whole branch at order 1. Single-tuned: XL = XC/n², Q = n XL/R at the tuned order n. Second-order high-pass: the same L and C with R = Q n XL beside L. Detuning by p per cent tunes to n = 10/√p and raises the capacitor's voltage by 1/(1 − p/100). Background: IEEE 1531."},
	{"Active filters", "Each removes its stated share of the sensed harmonic current up to its order ceiling; asked for more than its rating it scales all orders down alike, and the result says so."},
	{"Distortion", "Voltage per cent is of the bus's own solved fundamental unless the limit's rule names another base; THD = √(Σ Vh²)/V1 over orders 2 to the highest computed; TDD relates the same sum of currents to the maximum demand current IL. Definitions of IEEE 519 and IEC 61000-2-4."},
}

// method says how the numbers came about, and how well the solution satisfies
// its own equations.
func (p *printer) method() {
	p.section("Method", 40)
	for _, m := range methodParts {
		p.paragraph(span{p.small.bold(), m[0] + "  "}, span{p.small, m[1]})
		p.y -= 2
	}
	p.paragraph(span{p.small.bold(), "Used here  "}, span{p.small, "Several sources of one order: " + p.study.SummationWords() + "."})
	p.subsection("Check of the solution", 40)
	t := &table{columns: []column{
		{head: "", min: 60}, {head: "Residual", align: right}, {head: "Power balance", align: right}, {head: "Reciprocity", align: right}, {head: "Orders solved densely", align: right}, {head: "Rounds of order 1", align: right}, {head: "", flex: 1},
	}}
	add := func(name string, c study.Check) {
		t.add(plain(name, fmt.Sprintf("%.1e", c.Residual), fmt.Sprintf("%.1e", c.Balance), fmt.Sprintf("%.1e", c.Reciprocity), short(float64(c.Fallback)), short(float64(c.Rounds)), "")...)
	}
	if p.before != nil {
		add("Before", p.before.Check)
	}
	add(p.stated(), p.after.Check)
	p.table(t, 0)
	p.note("Residual: worst |YV − I| over all orders and sequences, relative. Power balance: worst complex power imbalance by order, relative. Reciprocity: difference of a transfer impedance from its reverse, relative.")
	p.spectra()
	p.sets()
}

// spectra lists the typical spectra that stand for loads, with their sources.
func (p *printer) spectra() {
	var order []string
	loads := map[string][]string{}
	for i := range p.study.NonlinearLoads {
		l := &p.study.NonlinearLoads[i]
		if l.Spectrum == study.Typed {
			continue
		}
		if loads[l.Spectrum] == nil {
			order = append(order, l.Spectrum)
		}
		loads[l.Spectrum] = append(loads[l.Spectrum], l.Name)
	}
	if len(order) == 0 {
		return
	}
	p.subsection("Typical spectra used", 24)
	for _, name := range order {
		text := name
		if m, ok := converter.Lookup(name); ok {
			text = fmt.Sprintf("%s (%s). Source: %s", m.Title, name, m.Source)
			if m.Mark != "" && !strings.Contains(m.Source, m.Mark) {
				text += "; mark of the magnitudes: " + m.Mark
			}
		}
		p.item(p.small, strings.Join(loads[name], ", ")+": "+text+".")
	}
	p.note("A typical spectrum stands for a measured one only in a first study.")
}

// sets lists the documents that the limits come from.
func (p *printer) sets() {
	seen := map[string]bool{}
	for _, pt := range p.after.Points {
		if !seen[pt.SetTitle] {
			if len(seen) == 0 {
				p.subsection("Limit sets applied", 24)
			}
			seen[pt.SetTitle] = true
			p.item(p.small, pt.SetTitle)
		}
	}
	if len(seen) > 0 {
		p.note("Limits are kept in this program as data. Those marked as from memory are not to be relied on for a claim of conformity before they are compared with the document.")
	}
}

var cautionTexts = []string{
	"This summary is an aid to an engineer, not a design. Its numbers are as good as the inputs listed above; assumed values come first there for that reason.",
	"Local codes, the network operator's rules and the manufacturers' instructions take precedence over anything printed here. A licensed engineer checks and signs before anything is built, bought or switched.",
	"Capacitors and filters hold a charge after they are switched off. Isolate, wait for the stated discharge time, prove dead and earth before touching; a failed discharge resistor gives no sign.",
	"Filters and detuned banks carry harmonic current all the time and run hot; capacitors close to their voltage rating, or above it, can fail violently. Component ratings need the manufacturer's confirmation.",
	"Work on electrical installations is for qualified persons, with the equipment dead and locked off.",
	"A filter changes the network's resonances. Compute again when a transformer, a cable, a bank or the supply changes, or when a filter is taken out for repair.",
	"Measure after commissioning: the installation, not the model, has to meet the limits.",
}

// cautions writes what a reader must not overlook, and room for a signature.
func (p *printer) cautions() {
	p.section("Cautions", 120)
	for _, text := range cautionTexts {
		p.item(p.body, text)
	}
	p.signature()
}

func (p *printer) signature() {
	const height = vg.Length(112)
	p.need(height + 14)
	p.skip(14)
	top := p.y
	x0, x1 := marginLeft, marginLeft+p.width()
	p.SetColor(p.palette.Ink)
	p.SetLineWidth(0.7)
	p.Stroke(rectangle(x0, top-height, x1, top))
	p.text(p.body.bold(), x0+10, top-16, "Checked by the responsible engineer")
	fields := [][2]string{{"Name", "Licence"}, {"Signature", "Date"}}
	half := (x1 - x0) / 2
	for i, pair := range fields {
		y := top - 50 - vg.Length(i)*38
		for k, label := range pair {
			x := x0 + 10 + half*vg.Length(k)
			p.rule(x, x+half-20, y, 0.5, p.palette.Ink)
			p.text(p.muted, x, y-9.5, label)
		}
	}
	p.y = top - height
	p.skip(8)
	p.paragraph(span{p.muted, "Digest (sha256) of the study file: " + p.doc.Study.SHA256})
}
