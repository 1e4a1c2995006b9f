package duty_test

import (
	"fmt"

	"quietbus/study/duty"
	"quietbus/study/phasor"
)

func ExamplePermissibleLoad() {
	s := phasor.New(13)
	s[1], s[5], s[7], s[11], s[13] = 100, 30, 12, 6, 4
	fmt.Printf("F_HL %.2f, permissible load %.1f %%\n", phasor.LossFactor(s), 100*duty.PermissibleLoad(s, duty.StrayLoss{Eddy: 0.1}))
	// Output: F_HL 4.20, permissible load 88.0 %
}

func ExampleNeutral() {
	n := duty.Neutral(39, 0.40)
	fmt.Printf("neutral %.1f A; the cable needs %.1f A (%s)\n", n.NeutralA, n.RequiredA, n.Rule)
	// Output: neutral 46.8 A; the cable needs 54.4 A (IEC 60364-5-52:2009 Table E.52.1)
}

func ExampleCapacitor_IEEE18() {
	c := duty.Capacitor{RatedV: 480, RatedVar: 50e3}
	v := phasor.New(7)
	v[1], v[5], v[7] = 480, 40, 15
	checks, err := c.IEEE18(c.Stress(v))
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, k := range checks {
		fmt.Printf("%s: %.3f of %.2f, %v\n", k.Quantity, k.Value, k.Limit, k.Meets())
	}
	_, err = duty.Capacitor{}.IEEE18(c.Stress(v))
	fmt.Println(err)
	// Output:
	// rms voltage, of rated: 1.004 of 1.10, true
	// crest voltage, of rated: 1.115 of 1.20, true
	// rms current, of rated: 1.105 of 1.35, true
	// kvar, of rated: 1.110 of 1.35, true
	// capacitor rating is not known (voltage and kvar); the duty cannot be compared with it
}
