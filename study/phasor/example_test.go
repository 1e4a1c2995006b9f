package phasor_test

import (
	"fmt"

	"quietbus/study/phasor"
)

func ExampleTHD() {
	s := phasor.New(13)
	s[1], s[5], s[7] = 100, 20, 14.3i
	fmt.Printf("THD %.2f %%, rms %.2f A\n", 100*phasor.THD(s), phasor.RMS(s))
	// Output: THD 24.59 %, rms 102.98 A
}

func ExampleSynthesize() {
	s := phasor.New(1)
	s[1] = 230
	x := phasor.Synthesize(s, 400, nil)
	fmt.Printf("at 0: %.1f V, at half the period: %.1f V\n", x[0], x[200])
	// Output: at 0: 325.3 V, at half the period: -325.3 V
}

func ExampleAnalyze() {
	square := []float64{1, 1, 1, 1, 1, -1, -1, -1, -1, -1, -1, -1, -1, -1, -1, 1, 1, 1, 1, 1}
	s, err := phasor.Analyze(square, 1, 5)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("even order 2: %.3f, 3rd over 1st: %.3f\n", real(s[2]), real(s[3])/real(s[1]))

	_, err = phasor.Analyze(square, 1, 50)
	fmt.Println(err)
	// Output:
	// even order 2: 0.000, 3rd over 1st: -0.311
	// samples: 20 samples over 1 cycle(s) reach only to order 9, not to 50; record more than 100 samples a cycle or ask for fewer orders
}

func ExampleToSequence() {
	oneLine := phasor.ToSequence([3]complex128{90, 0, 0})
	fmt.Println(oneLine[phasor.Zero], oneLine[phasor.Positive], oneLine[phasor.Negative])
	// Output: (30+0i) (30+0i) (30+0i)
}

func ExampleNeutral() {
	a := phasor.New(7)
	a[1], a[3], a[5] = 100, 30, 10
	n := phasor.Neutral(phasor.Balanced(a))
	fmt.Printf("order 1: %.0f A, order 3: %.0f A, order 5: %.0f A\n", real(n[1]), real(n[3]), real(n[5]))
	// Output: order 1: 0 A, order 3: 90 A, order 5: 0 A
}
