package converter

import (
	"encoding/csv"
	"errors"
	"math"
	"math/cmplx"
	"os"
	"strconv"
	"testing"

	"quietbus/study/phasor"
)

func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.9g, want %.9g", what, got, want)
	}
}

// thd returns the distortion of lines in per cent of order 1.
func thd(lines []Line) float64 {
	var sum float64
	for _, l := range lines {
		if l.Order > 1 {
			sum += l.Percent * l.Percent
		}
	}
	return math.Sqrt(sum)
}

// The 39 cases of testdata/six-pulse-overlap.csv to order 49 (derived there by
// two roads, closed form and direct Fourier integration).
func TestOverlapAgainstTable(t *testing.T) {
	f, err := os.Open("testdata/six-pulse-overlap.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	head, rows := rows[0], rows[1:]
	if len(rows) != 39 {
		t.Fatalf("%d cases, want 39", len(rows))
	}
	for _, row := range rows {
		v := make(map[string]float64, len(head))
		for k, name := range head {
			if v[name], err = strconv.ParseFloat(row[k], 64); err != nil {
				t.Fatal(err)
			}
		}
		rad := math.Pi / 180
		s, err := SixPulseOverlap(v["alpha_deg"]*rad, v["u_deg"]*rad, 49)
		if err != nil {
			t.Fatal(err)
		}
		name := "alpha " + row[0] + " u " + row[1]
		near(t, name+" I1", cmplx.Abs(s[1])/(math.Sqrt(6)/math.Pi), v["I1_pu"], 1e-6)
		near(t, name+" displacement", -cmplx.Phase(s[1])/rad, v["displacement_deg"], 1e-4)
		for h := 5; h <= 49; h += 2 {
			if h%3 != 0 {
				near(t, name+" order "+strconv.Itoa(h), 100*cmplx.Abs(s[h]/s[1]), v["I"+strconv.Itoa(h)+"_pct"], 1e-4)
			}
		}
		near(t, name+" THD", 100*phasor.THD(s), v["THD_pct_to_49"], 1e-4)
	}
}

// The phases too: the closed form against the samples of the current itself,
// phase a of a bridge that takes over u degrees.
func TestOverlapAgainstWaveform(t *testing.T) {
	const alpha, u, n = 0.3, 0.4, 1 << 16
	swing := math.Cos(alpha) - math.Cos(alpha+u)
	rise := func(x float64) float64 { // of the current that takes over, x after firing
		return (math.Cos(alpha) - math.Cos(alpha+min(max(x, 0), u))) / swing
	}
	x := make([]float64, n)
	block := func(d float64) float64 { return rise(d) - rise(d-2*math.Pi/3) }
	for k := range x {
		fired := 2*math.Pi*float64(k)/n - (alpha - math.Pi/3) // angle since phase a's positive thyristor fired
		for _, period := range []float64{-2 * math.Pi, 0, 2 * math.Pi} {
			x[k] += block(fired+period) - block(fired+period-math.Pi)
		}
	}
	want, err := phasor.Analyze(x, 1, 49)
	if err != nil {
		t.Fatal(err)
	}
	s, err := SixPulseOverlap(alpha, u, 49)
	if err != nil {
		t.Fatal(err)
	}
	for h := 1; h <= 49; h++ {
		if cmplx.Abs(s[h]-want[h]) > 1e-6 {
			t.Errorf("order %d: closed form %.6f, samples %.6f", h, s[h], want[h])
		}
	}
}

// No overlap leaves the ideal series: signs of the star-star position, I1 =
// sqrt(6)/pi Id (derived).
func TestNoOverlapIsIdeal(t *testing.T) {
	s, err := SixPulseOverlap(0, 0, 50)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "I1 over Id", cmplx.Abs(s[1]), 0.7796968, 1e-7)
	ideal, err := IdealPulse(6, 50)
	if err != nil {
		t.Fatal(err)
	}
	got := LinesOf(s)
	if len(got) != len(ideal) {
		t.Fatalf("%d orders, want %d", len(got), len(ideal))
	}
	for i := range ideal {
		d := math.Abs(wrapped(got[i].AngleDeg - ideal[i].AngleDeg))
		if got[i].Order != ideal[i].Order || math.Abs(got[i].Percent-ideal[i].Percent) > 1e-9 || d > 1e-6 {
			t.Errorf("%+v, want %+v", got[i], ideal[i])
		}
	}
	long, _ := SixPulseOverlap(0, 0, 20000)
	near(t, "rms over Id", phasor.RMS(long), 0.81649658, 1e-5)
}

// Orders kp+-1 at 1/h, and no even or triplen ones; THD over all orders is
// sqrt((x/sin x)^2 - 1), x = pi/p (derived).
func TestIdealPulse(t *testing.T) {
	want := map[int]float64{6: 31.0842, 12: 15.2194, 18: 10.1075, 24: 7.57047, 36: 5.04217}
	for p, v := range want {
		lines, err := IdealPulse(p, 60000)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "THD of "+strconv.Itoa(p)+" pulses", thd(lines), v, 1e-2)
	}
	six, _ := IdealPulse(6, 50)
	for _, l := range six {
		if l.Order%2 == 0 || l.Order%3 == 0 {
			t.Errorf("an ideal six-pulse current holds order %d", l.Order)
		}
	}
	if len(six) != 16 {
		t.Errorf("%d orders to 50, want 16", len(six))
	}
	near(t, "THD of a single-phase bridge", thd(SinglePhaseBridge(1<<17)), 48.3426, 1e-3)
	for _, p := range []int{0, -6, 5, 9} {
		var typed *InputError
		if _, err := IdealPulse(p, 50); !errors.As(err, &typed) {
			t.Errorf("pulse number %d: %v", p, err)
		}
	}
}

// The two bridges of a twelve-pulse group, one turned by 30 degrees of order
// 1, cancel 5, 7, 17 and 19 and double 11 and 13 (derived). The turned one
// feeds back its positive-sequence orders turned by -30 degrees, its negative
// ones by +30.
func TestTwelvePulseCancels(t *testing.T) {
	six, _ := IdealPulse(6, 25)
	for _, l := range six {
		a := cmplx.Rect(l.Percent, l.AngleDeg*math.Pi/180)
		deg := 30 * float64(l.Order) // angle typed plus order times the terminal voltage's angle
		if phasor.OfOrder(l.Order) == phasor.Positive {
			deg -= 30
		} else {
			deg += 30
		}
		sum := cmplx.Abs(a + a*cmplx.Rect(1, deg*math.Pi/180))
		want := 0.0
		if r := l.Order % 12; r == 1 || r == 11 {
			want = 2 * l.Percent
		}
		near(t, "order "+strconv.Itoa(l.Order), sum, want, 1e-9)
	}
}

// Half-wave series (derived): dc 1/pi, fundamental 1/2, even orders 2/(pi
// (h^2-1)), and nothing else.
func TestHalfWave(t *testing.T) {
	lines := HalfWave(50)
	peaks := map[int]float64{2: 0.21220659, 4: 0.042441318, 6: 0.018189136, 8: 0.010105076, 10: 0.0064305028}
	for _, l := range lines {
		if l.Order%2 == 1 {
			t.Errorf("order %d in a half-wave current", l.Order)
		}
		if want, ok := peaks[l.Order]; ok {
			near(t, "order "+strconv.Itoa(l.Order), l.Percent, 100*want/0.5, 1e-5)
			angle := 0.0
			if l.Order%4 == 0 {
				angle = 180
			}
			near(t, "its angle", l.AngleDeg, angle, 1e-9)
		}
	}
	near(t, "dc over rms of order 1", lines[0].Percent, 100*0.3183098862*2*math.Sqrt2, 1e-6)
	if len(lines) != 26 {
		t.Errorf("%d lines, want dc and 25 even orders", len(lines))
	}
}

// Six-pulse commutation: 480 V, 60 Hz, 0.05 mH a phase, 200 A, 30 degrees;
// constructed (derived).
func TestCommutate(t *testing.T) {
	c, err := Commutate(480, 0.05e-3, 200, math.Pi/6, 60)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "overlap", c.Overlap*180/math.Pi, 1.249301, 1e-6)
	near(t, "direct voltage", c.DirectV, 557.7817, 1e-3)
	near(t, "notch area in V us", c.NotchVs*1e6, 20000, 1e-6)
	near(t, "cos a - cos(a+u)", math.Cos(c.Alpha)-math.Cos(c.Alpha+c.Overlap), 0.01110721, 1e-8)
	for name, f := range map[string]func() error{
		"no voltage":      func() error { _, err := Commutate(0, 1e-3, 10, 0, 50); return err },
		"NaN current":     func() error { _, err := Commutate(400, 1e-3, math.NaN(), 0, 50); return err },
		"firing backward": func() error { _, err := Commutate(400, 1e-3, 10, -1, 50); return err },
		"too much":        func() error { _, err := Commutate(400, 1, 1e6, 0, 50); return err },
		"overlap":         func() error { _, err := SixPulseOverlap(0, 2, 50); return err },
		"firing":          func() error { _, err := SixPulseOverlap(math.NaN(), 0, 50); return err },
	} {
		var typed *InputError
		if err := f(); !errors.As(err, &typed) || typed.Field == "" {
			t.Errorf("%s: %v, want an *InputError", name, err)
		}
	}
}
