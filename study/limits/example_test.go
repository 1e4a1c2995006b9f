package limits_test

import (
	"fmt"
	"strings"

	"quietbus/study/limits"
	"quietbus/study/phasor"
)

func ExampleSet_Current() {
	set, _ := limits.Lookup("ieee519-2022")
	line := phasor.New(50)
	line[1], line[5], line[11] = 380, 32, 9
	p := limits.Point{NominalV: 13800, Current: [3]phasor.Spectrum{line, line, line}, IscA: 10000}

	_, err := set.Current(p)
	fmt.Println(err)

	p.DemandA = 400
	rows, _ := set.Current(p)
	for _, r := range rows {
		if r.Value > 0 {
			fmt.Printf("order %d%s: %.2f %% of %.2f %%, %v\n", r.Order, r.Index, r.Value, r.Limit, r.Meets())
		}
	}
	fmt.Println(rows[9].Rule)
	// Output:
	// currents: no maximum demand load current IL is stated, which every current limit of IEEE 519-2022 is a percentage of
	// order 5: 8.00 % of 7.00 %, false
	// order 11: 2.25 % of 3.50 %, true
	// order 0TDD: 8.31 % of 8.00 %, false
	// IEEE 519-2022 Table 2, 0.12 to 69 kV, Isc/IL 20<50, 11<=h<17, of IL
}

func ExampleParseSet() {
	_, err := limits.ParseSet(strings.NewReader(`{
	  "format": 1, "id": "letter", "title": "Invented letter",
	  "voltage": {"classes": [{"rows": [{"orders": "5", "percent": "3 %"}]}]}}`))
	fmt.Println(err)
	// Output: limit file: voltage, class 1, row 1, column percent: is "3 %"; write a number without a unit
}
