package kernel

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

// fill makes a run of cells between empty and full.
func fill(n int, nj float64, r *rand.Rand) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = r.Float64() * nj
	}
	return x
}

// The one-pass kernels must do to the last bit what the two-pass ones do: same formula, other loop.
func TestOnePassEqualsTwoPasses(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	const a, q, b, nj = 0.9, 1.7, 0.2, 12.0
	for _, size := range []int{1, 2, 3, 7, 64, 501} {
		for range 20 {
			n := fill(size, nj, r)
			in, out := r.Float64(), min(1, n[size-1])*r.Float64()
			want := slices.Clone(n)
			y := make([]float64, size)
			LinearFaces(y, want, a, q, b, nj, out)
			Advance(want, y, in)
			over := slices.Clone(n)
			LinearOverfull(over, a, q, b, nj, in, out)
			Linear(n, a, q, b, nj, in, out)
			if !slices.Equal(n, over) {
				t.Fatalf("size %d: the overfull kernel differs within bounds", size)
			}
			for i := range n {
				if math.Abs(n[i]-want[i]) > 1e-14*nj {
					t.Fatalf("size %d cell %d: one pass %v, two passes %v", size, i, n[i], want[i])
				}
			}
		}
	}
}

// Godunov fluxes of theory.md section 2, triangular diagram with free speed 100, wave 20, jam 120 (km, h): the
// interface flux of 10|80 is 800 and that of 80|10 is 2000 veh/h. One cell of 1 km, step 1 s.
func TestInterfaceFlux(t *testing.T) {
	const step = 1.0 / 3600
	a, q, b := 100*step, 2000*step, 20*step
	for _, c := range []struct{ left, right, want float64 }{
		{10, 80, 800}, {80, 10, 2000}, {10, 10, 1000}, {120, 120, 0}, {0, 50, 0}, {20, 20, 2000},
	} {
		y := make([]float64, 2)
		LinearFaces(y, []float64{c.left, c.right}, a, q, b, 120, 0)
		if got := y[0] / step; math.Abs(got-c.want) > 1e-9 {
			t.Errorf("%v|%v: flux %v veh/h, want %v", c.left, c.right, got, c.want)
		}
	}
}

func TestOverfullCellDrains(t *testing.T) {
	n := []float64{4, 15, 1} // the middle cell holds more than the 12 that fit
	LinearOverfull(n, 0.9, 2, 0.2, 12, 1, 0.5)
	if n[0] != 5 {
		t.Errorf("first cell %v, want 5: nothing may flow into the overfull one", n[0])
	}
	if n[1] != 13 {
		t.Errorf("overfull cell %v, want 13: it drains at capacity", n[1])
	}
}

func TestCarryKeepsComposition(t *testing.T) {
	n := []float64{2, 4}
	share := make([]float64, 2)
	Shares(share, []float64{1, 1}, n)
	x := []float64{1, 3}
	out := Carry(x, share, 0.5)
	// half of the first cell and a quarter of the second leave
	if x[0] != 1 || x[1] != 2.75 || out != 0.75 {
		t.Errorf("cells %v and out %v, want [1 2.75] and 0.75", x, out)
	}
}

func TestFlush(t *testing.T) {
	n := []float64{1, 1e-101, 0, 5e-324}
	Flush(n, 1e-100)
	if !slices.Equal(n, []float64{1, 0, 0, 0}) {
		t.Errorf("got %v", n)
	}
}

func BenchmarkLinear(b *testing.B) {
	n := make([]float64, 4096)
	for i := range n {
		n[i] = 1.5
		if i%1000 < 300 {
			n[i] = 4 + 0.1*float64(i%7)
		}
	}
	for b.Loop() {
		Linear(n, 0.99, 2, 0.2, 12, 1.2, 1.2)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(n)), "ns/cell-step")
}

// BenchmarkDenormal shows what flushing spares: the same loop over contents that have decayed into denormal
// numbers against contents of zero.
func BenchmarkDenormal(b *testing.B) {
	for _, c := range []struct {
		name    string
		content float64
	}{{"content=zero", 0}, {"content=denormal", 1e-310}} {
		b.Run(c.name, func(b *testing.B) {
			n := make([]float64, 4096)
			for b.Loop() {
				for i := range n {
					n[i] = c.content
				}
				Linear(n, 0.9, 2, 0.2, 12, 0, 0)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(n)), "ns/cell-step")
		})
	}
}
