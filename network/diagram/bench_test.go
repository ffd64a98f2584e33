package diagram_test

import (
	"testing"

	"example.org/tailback/network/diagram"
)

// One run of 512 cells, half of them queued, in stretches of 32.
func BenchmarkFill(b *testing.B) {
	for _, c := range checks {
		d := build(b, c.shape, c.p)
		bench(b, "shape="+c.name, d)
		if c.name == "triangular" || c.name == "drake" {
			bench(b, "shape="+c.name+"-limited", diagram.Limit(d, 0.8*d.FreeSpeed(), 0.9*diagram.Capacity(d)))
		}
	}
}

func bench(b *testing.B, name string, d diagram.Diagram) {
	const n = 512
	k, sending, receiving := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range k {
		share := 0.2 + 0.7*float64(i%32)/32
		if i/32%2 == 1 {
			share = 1.1 + 2*float64(i%32)/32
		}
		k[i] = share * d.Critical()
	}
	b.Run(name, func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			diagram.Fill(d, sending, receiving, k)
		}
		b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/cell")
	})
}
