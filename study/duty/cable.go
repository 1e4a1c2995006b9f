package duty

import (
	"math"

	"quietbus/study/phasor"
)

// Conductor is one conductor of a cable with what IEC 60287-1-1 needs to tell
// its ac resistance.
type Conductor struct {
	DCOhmPerM float64 // at operating temperature
	Ks, Kp    float64 // skin and proximity coefficients; 0 means 1 (round stranded copper)
	Diameter  float64 // m; with Spacing it brings in the proximity effect
	Spacing   float64 // m between axes; 0 leaves the proximity effect out
	Cores     int     // 2, or 3 and more in trefoil or three-core; 0 means 3
}

// ACRatio returns the ac over the dc resistance at a frequency in Hz, 1 + ys +
// yp (IEC 60287-1-1 clause 2.1, memory, high; the form of ys above 2.8 is that
// since 2014, medium).
func (c Conductor) ACRatio(hz float64) float64 {
	ratio := 1 + skin(c.argument(hz, c.Ks))
	if c.Spacing > 0 && c.Diameter > 0 {
		ratio += c.proximity(hz)
	}
	return ratio
}

// argument returns xs = sqrt(8 pi f 1e-7 k/R').
func (c Conductor) argument(hz, k float64) float64 {
	if k == 0 {
		k = 1
	}
	return math.Sqrt(8 * math.Pi * hz * 1e-7 * k / c.DCOhmPerM)
}

// skin returns the skin effect factor ys.
func skin(x float64) float64 {
	switch {
	case x <= 2.8:
		return fourth(x)
	case x <= 3.8:
		return -0.136 - 0.0177*x + 0.0563*x*x
	}
	return 0.354*x - 0.733
}

func fourth(x float64) float64 {
	x4 := x * x * x * x
	return x4 / (192 + 0.8*x4)
}

func (c Conductor) proximity(hz float64) float64 {
	a := fourth(c.argument(hz, c.Kp))
	d2 := c.Diameter / c.Spacing * c.Diameter / c.Spacing
	if c.Cores == 2 {
		return 2.9 * a * d2
	}
	return a * d2 * (0.312*d2 + 1.18/(a+0.27))
}

// CableDerating returns the factor by which a cable's permissible rms current
// falls with this spectrum, so that the conductor's loss stays what it is with
// a sine: 1/sqrt(sum R_h/R_1 (I_h/I)^2) (derived; the neutral's loss is not in
// it). hz is the fundamental. It is 1 for a sine.
func CableDerating(current phasor.Spectrum, c Conductor, hz float64) float64 {
	first := c.ACRatio(hz)
	var loss, all float64
	for h := 1; h < len(current); h++ {
		i2 := square(current[h])
		if i2 == 0 {
			continue
		}
		all += i2
		loss += c.ACRatio(float64(h)*hz) / first * i2
	}
	if all == 0 {
		return 1
	}
	return math.Sqrt(all / loss)
}
