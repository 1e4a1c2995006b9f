package grid

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"testing"
)

// Both laws against the table of copper conductors (IEC 60228 resistances,
// from memory; IEC 60287-1-1 form, from memory; exact Bessel value, derived).
func TestSkinEffect(t *testing.T) {
	f, err := os.Open("testdata/skin-effect.csv")
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
	number := func(s string) float64 {
		v, err := strconv.ParseFloat(s, 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	if len(rows) < 50 {
		t.Fatalf("only %d rows", len(rows))
	}
	for _, row := range rows[1:] {
		ohm, hz := number(row[2])/1000, number(row[3])
		x := math.Sqrt(8 * math.Pi * hz * 1e-7 / ohm)
		if got, want := RoundSkin(x), number(row[6]); math.Abs(got-want) > 1e-5*want { // the table's resistances have six digits
			t.Errorf("%s mm2, %g Hz: exact %.6f, want %.6f", row[0], hz, got, want)
		}
		if got, want := IECSkin(x), number(row[5]); math.Abs(got-want) > 1e-5*want+6e-6 {
			t.Errorf("%s mm2, %g Hz: IEC form %.5f, want %.5f", row[0], hz, got, want)
		}
	}
	law := SkinLaw(RoundSkin, 0.0754e-3, 50, 50)
	for _, h := range []float64{1.1, 2.37, 5, 7.6, 24.99, 49.9, 63} {
		x := math.Sqrt(8 * math.Pi * 50 * 1e-7 / 0.0754e-3)
		if want := RoundSkin(x*math.Sqrt(h)) / RoundSkin(x); math.Abs(law(h)-want) > 1e-5*want {
			t.Errorf("order %g: %.7f, want %.7f", h, law(h), want)
		}
	}
	if law(1) != 1 || math.Abs(law(7)-law(7.0000001)) > 1e-6 || law(50) < law(49) {
		t.Error("the law is not one at order 1, smooth and rising")
	}
}
