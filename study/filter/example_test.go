package filter_test

import (
	"fmt"
	"math"

	"quietbus/study/filter"
	"quietbus/study/phasor"
)

func ExampleSingleTuned() {
	f, err := filter.SingleTuned(300e3, 400, 50, 4.8, 40) // 300 kvar at 400 V
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, p := range f.Parts() {
		fmt.Printf("%s: %s = %.4g\n", p.Name, p.Symbol, p.Value)
	}
	fmt.Printf("order %.2f, gives %.0f kvar\n", f.TunedOrder(), f.Output(400)/1000)

	_, err = filter.SingleTuned(300e3, 400, 50, 1, 40)
	fmt.Println(err)
	// Output:
	// capacitor: C = 0.005709
	// reactor: L = 7.703e-05
	// reactor resistance: R = 0.002904
	// order 4.80, gives 300 kvar
	// tuned order is 1; it must be above 1, or the branch is tuned to nothing
}

func ExampleBranch_Bear() {
	f, _ := filter.Detuned(50e3, 400, 50, 0.07, 50, 0.0002)
	current := phasor.New(50)
	current[1] = complex(400/math.Sqrt(3), 0) * f.Admittance(1)
	current[5] = 15
	d := f.Bear(phasor.Balanced(current), true)
	fmt.Printf("%.1f A, %.0f V on each capacitor, %.0f W\n", d.Current, d.Voltage, d.Loss)
	fmt.Printf("rated %.0f V\n", filter.PreferredVoltage(filter.NeededVoltage(f.DutyOf(current))))
	// Output:
	// 73.7 A, 430 V on each capacitor, 90 W
	// rated 480 V
}

func ExampleLowPass() {
	p, _ := filter.LowPassRC(30, 100e-6, 50)
	for _, h := range []float64{1, 5, 11} {
		g := p.Ratio(h)
		fmt.Printf("order %.0f: gain %.3f, lag %.1f degrees\n", h, math.Hypot(real(g), imag(g)), p.Lag(h))
	}
	// Output:
	// order 1: gain 0.728, lag 43.3 degrees
	// order 5: gain 0.208, lag 78.0 degrees
	// order 11: gain 0.096, lag 84.5 degrees
}
