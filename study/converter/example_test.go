package converter_test

import (
	"fmt"

	"quietbus/study/converter"
)

func ExampleWithReactance() {
	for _, percent := range []float64{0.5, 3, 5} {
		fifth := converter.WithReactance(percent).Lines[0]
		fmt.Printf("%.1f %%: order %d at %.0f %%, %.0f degrees\n", percent, fifth.Order, fifth.Percent, fifth.AngleDeg)
	}
	// Output:
	// 0.5 %: order 5 at 80 %, 118 degrees
	// 3.0 %: order 5 at 40 %, 101 degrees
	// 5.0 %: order 5 at 32 %, 92 degrees
}

func ExampleLookup() {
	m, _ := converter.Lookup("half-wave")
	for _, l := range m.Lines[:3] {
		fmt.Printf("order %d: %.1f %% at %.0f degrees\n", l.Order, l.Percent, l.AngleDeg)
	}
	fmt.Println(m.Source)
	// Output:
	// order 0: 90.0 % at 0 degrees
	// order 2: 42.4 % at 0 degrees
	// order 4: 8.5 % at 180 degrees
	// Fourier series of the half-wave rectified sine, exact; it holds direct current
}

func ExampleCommutate() {
	c, err := converter.Commutate(480, 0.05e-3, 200, 0.5236, 60)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("overlap %.2f degrees, %.0f V dc\n", c.Overlap*57.29578, c.DirectV)
	// Output: overlap 1.25 degrees, 558 V dc
}
