package converter

import (
	"math"
	"math/cmplx"
	"sort"
)

// SwitchingLine is one line of a switched converter about a multiple of its
// carrier.
type SwitchingLine struct {
	FrequencyHz float64
	Order       float64 // over the fundamental; need not be whole
	BridgeV     float64 // phase voltage of the bridge, V rms
	CurrentA    float64 // in the line, A rms
}

// carrierLines returns the lines of a three-phase bridge with sinusoidal
// modulation against a triangular carrier of carrier Hz: about m times the
// carrier the leg voltage has side lines n fundamentals away, of the peak
//
//	(2 Vd / (pi m)) Jn(m pi M / 2) sin((m + n) pi / 2)
//
// with M the peak of the phase voltage over Vd/2. Side lines with n divisible
// by three are alike in all legs and drive no current. Source: Holmes and
// Lipo, Pulse Width Modulation for Power Converters, 2003 (from memory).
// Lines below 1 % of the largest are left out.
func carrierLines(directV, depth, carrier, fundamental float64) []SwitchingLine {
	var out []SwitchingLine
	var big float64
	for m := 1; m <= 2; m++ {
		for n := -8; n <= 8; n++ {
			if n%3 == 0 || (m+n)%2 == 0 {
				continue
			}
			peak := 2 * directV / (math.Pi * float64(m)) * math.Abs(math.Jn(n, float64(m)*math.Pi*depth/2))
			f := float64(m)*carrier + float64(n)*fundamental
			if f <= 0 {
				continue
			}
			big = math.Max(big, peak)
			out = append(out, SwitchingLine{FrequencyHz: f, Order: f / fundamental, BridgeV: peak / math.Sqrt2})
		}
	}
	kept := out[:0]
	for _, l := range out {
		if l.BridgeV*math.Sqrt2 >= 0.01*big {
			kept = append(kept, l)
		}
	}
	sort.Slice(kept, func(i, j int) bool { return kept[i].FrequencyHz < kept[j].FrequencyHz })
	return kept
}

// switching returns the lines of an active front end behind its filter: the
// control does not act there, only inductances and capacitor.
func (m *frontState) switching(depth, fundamental float64) []SwitchingLine {
	lines := carrierLines(m.f.DirectV, depth, m.f.SwitchingHz, fundamental)
	for i := range lines {
		x := 2 * math.Pi * lines[i].FrequencyHz
		_, capacitor, series, _ := m.branches(x)
		own := complex(m.f.InductorOhm, x*m.f.InductorH)
		// voltage divider bridge -> capacitor -> line
		lines[i].CurrentA = lines[i].BridgeV * cmplx.Abs(1/(own*(1+capacitor*series)+series))
	}
	return lines
}
