package study

import (
	"context"
	"testing"

	"quietbus/testdata"
)

// thirty is a radial site of 30 buses: two 11 kV boards, seven transformers of
// three vector groups, 21 sub-boards, loads of each kind, 7 measures.
func thirty() *Study {
	s, err := Parse(testdata.Thirty)
	if err != nil {
		panic(err)
	}
	return s
}

// BenchmarkFlip30 is the time from a flipped switch to numbers: 30 buses, 50
// orders, three sequences, all results and assessments.
func BenchmarkFlip30(b *testing.B) {
	p, err := Prepare(thirty())
	if err != nil {
		b.Fatal(err)
	}
	sets := [][]string{{"FB0"}, {"FB0", "FB3"}}
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if _, err := p.Evaluate(context.Background(), sets[i%2]); err != nil {
			b.Fatal(err)
		}
	}
}
