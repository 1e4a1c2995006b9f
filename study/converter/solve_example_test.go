package converter_test

import (
	"context"
	"fmt"

	"quietbus/study/converter"
	"quietbus/study/phasor"
)

// A drive of 75 kW behind 3 % of line reactor, on a supply of 2 %. The site is
// invented.
func ExampleSolve() {
	n, assumed := converter.Suggest(converter.Nameplate{Kind: converter.KindDiodeBridge, VoltageV: 400, PowerW: 75e3}, 50)
	supply := converter.Balanced(400, 50, 0.004, converter.Inductance(2, 400, 75e3, 50))
	r, err := converter.Solve(context.Background(), n, supply, converter.Options{Order: 25})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%d values assumed\n", len(assumed))
	fmt.Printf("%s, %.0f V direct, THD %.0f %%\n", r.Conduction, r.DirectV, 100*phasor.THD(r.Current[0]))
	fmt.Printf("order 5: %.0f %%\n", 100*abs(r.Current[0][5])/abs(r.Current[0][1]))
	// Output:
	// 3 values assumed
	// continuous, 519 V direct, THD 33 %
	// order 5: 31 %
}

func abs(z complex128) float64 { return phasor.RMS(phasor.Spectrum{0, z}) }
