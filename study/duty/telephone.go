package duty

import (
	_ "embed"
	"encoding/csv"
	"math"
	"sort"
	"strconv"
	"strings"
	"sync"

	"quietbus/study/phasor"
)

//go:embed data/telephone-weights.csv
var telephoneWeights string

// weight is one point of a weighting curve.
type weight struct{ hz, w float64 }

// curves holds the weighting curves by name. The table is embedded; one that
// does not read is a fault of the build, which a test catches.
var curves = sync.OnceValue(func() map[string][]weight {
	r := csv.NewReader(strings.NewReader(telephoneWeights))
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		panic("duty: " + err.Error())
	}
	m := map[string][]weight{}
	for _, row := range rows[1:] {
		hz, err1 := strconv.ParseFloat(row[1], 64)
		w, err2 := strconv.ParseFloat(row[4], 64)
		if err1 != nil || err2 != nil {
			panic("duty: telephone weights: " + strings.Join(row, ","))
		}
		m[row[0]] = append(m[row[0]], weight{hz, w})
	}
	return m
})

// at interpolates a curve linearly, from zero at 0 Hz and to zero above its
// last point.
func at(curve []weight, hz float64) float64 {
	i := sort.Search(len(curve), func(i int) bool { return curve[i].hz >= hz })
	switch {
	case i == len(curve):
		return 0
	case i == 0:
		return curve[0].w * hz / curve[0].hz
	}
	a, b := curve[i-1], curve[i]
	return a.w + (b.w-a.w)*(hz-a.hz)/(b.hz-a.hz)
}

// TIFWeight returns the single-frequency weight W_f of the 1960 telephone
// influence curve (IEEE 519-1992, memory, medium). Between its frequencies it
// is interpolated.
func TIFWeight(hz float64) float64 { return at(curves()["TIF1960"], hz) }

// PsophometricWeight returns the psophometric weight, 1 at 800 Hz (ITU-T O.41,
// memory, medium to high). Between its frequencies it is interpolated.
func PsophometricWeight(hz float64) float64 { return at(curves()["psophometric"], hz) / 1000 }

// TIF returns the telephone influence factor of a voltage or current with its
// fundamental at hz: sqrt(sum (X_f W_f)^2)/X (IEEE 519-1992; definition
// memory, high, weights medium).
func TIF(s phasor.Spectrum, hz float64) float64 {
	curve := curves()["TIF1960"]
	return phasor.Weighted(s, func(h int) float64 { return at(curve, float64(h)*hz) })
}

// IT returns the I times T product of a current in A: its rms value times its
// TIF. The same of a voltage in kV is the kV times T product.
func IT(s phasor.Spectrum, hz float64) float64 {
	ac := s
	if len(s) > 0 && s[0] != 0 {
		ac = append(phasor.Spectrum{0}, s[1:]...)
	}
	return phasor.RMS(ac) * TIF(s, hz)
}

// ITCategory says how likely an I times T product on a line between converter
// and supply is to disturb: below 10,000 unlikely, to 25,000 possible, above
// probable (IEEE 519-1992 Table 6.2, memory, medium).
func ITCategory(it float64) string {
	switch {
	case it < 10000:
		return "I, unlikely to interfere"
	case it <= 25000:
		return "II, might interfere"
	}
	return "III, probably interferes"
}

// Psophometric returns the psophometrically weighted rms value of a voltage or
// current, in its own unit: sqrt(sum (p_f X_f)^2) with p = 1 at 800 Hz.
func Psophometric(s phasor.Spectrum, hz float64) float64 {
	curve := curves()["psophometric"]
	var sum float64
	for h := 1; h < len(s); h++ {
		p := at(curve, float64(h)*hz) / 1000
		sum += p * p * square(s[h])
	}
	return math.Sqrt(sum)
}
