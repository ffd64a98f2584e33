package junction

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

// crowded makes a node whose last way out is too small.
func crowded(n, m int) *Problem {
	r := rand.New(rand.NewPCG(1, 2))
	p := &Problem{}
	total := 0.0
	for range n {
		p.Sending = append(p.Sending, .5+r.Float64())
		p.Priority = append(p.Priority, 1+r.Float64())
		total += p.Sending[len(p.Sending)-1]
		row, sum := make([]float64, m), 0.0
		for j := range row {
			row[j] = r.Float64()
			sum += row[j]
		}
		for _, x := range row {
			p.Turn = append(p.Turn, x/sum)
		}
	}
	for range m {
		p.Receiving = append(p.Receiving, total/float64(m)*(.8+.8*r.Float64()))
	}
	p.Receiving[m-1] = total / float64(m) * .5
	return p
}

var sizes = [][2]int{{1, 2}, {2, 1}, {2, 2}, {4, 4}, {6, 6}}

func models() map[string]Model {
	return map[string]Model{"oriented": &Oriented{}, "movement": &Movement{}}
}

func TestFlowsDoNotAllocate(t *testing.T) {
	for name, model := range models() {
		for _, s := range sizes {
			p := crowded(s[0], s[1])
			in, out := make([]float64, s[0]), make([]float64, s[1])
			model.Flows(in, out, p)
			if n := testing.AllocsPerRun(100, func() { model.Flows(in, out, p) }); n != 0 {
				t.Errorf("%s %v: %v allocations per call, want none", name, s, n)
			}
		}
	}
	p, q := crowded(4, 4), make([]float64, 16)
	var o Oriented
	var v Movement
	o.Movements(q, p)
	v.Movements(q, p)
	if n := testing.AllocsPerRun(100, func() { o.Movements(q, p); v.Movements(q, p) }); n != 0 {
		t.Errorf("movements: %v allocations per call, want none", n)
	}
}

func BenchmarkFlows(b *testing.B) {
	for _, name := range []string{"oriented", "movement"} {
		for _, s := range sizes {
			b.Run(fmt.Sprintf("model=%s/in=%d/out=%d", name, s[0], s[1]), func(b *testing.B) {
				model, p := models()[name], crowded(s[0], s[1])
				in, out := make([]float64, s[0]), make([]float64, s[1])
				b.ReportAllocs()
				for b.Loop() {
					model.Flows(in, out, p)
				}
			})
		}
	}
}
