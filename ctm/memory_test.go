package ctm_test

import (
	"runtime"
	"testing"

	"example.org/tailback/ctm"
)

// BenchmarkMemory is what a model holds per cell, the grid and the nodes included.
func BenchmarkMemory(b *testing.B) {
	for b.Loop() {
		sc := corridor(b, "triangular", 10, 1)
		var before, after runtime.MemStats
		runtime.GC()
		runtime.ReadMemStats(&before)
		m, err := ctm.New(sc)
		if err != nil {
			b.Fatal(err)
		}
		runtime.GC()
		runtime.ReadMemStats(&after)
		b.ReportMetric(float64(after.HeapAlloc-before.HeapAlloc)/float64(m.View().Grid().Cells), "B/cell")
		runtime.KeepAlive(m)
		runtime.KeepAlive(sc)
	}
}
