package ctm_test

import (
	"fmt"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
)

// corridor is a freeway of about 500 cells with ramps, lane drop and a peak that queues for part of the time: the
// benchmark network of DEVELOPERS.md. shape names the diagram of every link.
func corridor(b testing.TB, shapeName string, interchanges, classes int) *ctm.Scenario {
	b.Helper()
	d := triangular(b, 100, 20, 120)
	if shapeName == "greenshields" {
		d = greenshields(b, 100, 120)
	}
	var roads []road
	dem := &demand.Demand{}
	node := 0
	at := func(km, lanes float64) int {
		roads = append(roads, road{node, node + 1, km, lanes, d, 0})
		node++
		return len(roads) - 1
	}
	side := 1000 // outer ends of ramps, renumbered below
	main := at(2, 3)
	dem.Entries = append(dem.Entries, hourly(main, 3000, 4200, 4400, 3000, 1500))
	for i := range interchanges {
		off := len(roads)
		roads = append(roads, road{node, side, 0.4, 1, d, 0})
		side++
		before := main
		main = at(0.6, 3)
		dem.Turnings = append(dem.Turnings, turn(roads[main].from, before, map[int]float64{main: 0.9, off: 0.1}))
		on := len(roads)
		roads = append(roads, road{side, node, 0.4, 1, d, 0})
		side++
		dem.Entries = append(dem.Entries, hourly(on, 300, 480, 500, 300, 100))
		lanes := 3.0
		if i == interchanges-1 {
			lanes = 2
		}
		main = at(3.5, lanes)
	}
	at(2, 2)
	for i := range roads { // outer ends become the next numbers
		for _, end := range []*int{&roads[i].from, &roads[i].to} {
			if *end >= 1000 {
				*end += node + 1 - 1000
			}
		}
	}
	if classes > 1 {
		mix := make([]float64, classes)
		for c := range classes {
			dem.Classes = append(dem.Classes, demand.Class{Name: fmt.Sprintf("c%d", c), PCE: 1 + float64(c)/10})
			mix[c] = 1 / float64(classes)
		}
		for i := range dem.Entries {
			dem.Entries[i].Mix = mix
		}
	}
	return build(b, roads, dem, ctm.Horizon{End: 5 * hour, Cell: 100})
}

// BenchmarkStep is the time of one step per cell, nothing recorded, over the whole period.
func BenchmarkStep(b *testing.B) {
	for _, c := range []struct {
		shape   string
		classes int
	}{{"triangular", 1}, {"triangular", 2}, {"triangular", 10}, {"greenshields", 1}} {
		b.Run(fmt.Sprintf("net=corridor/shape=%s/classes=%d", c.shape, c.classes), func(b *testing.B) {
			sc := corridor(b, c.shape, 10, c.classes)
			var m *ctm.Model
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if m == nil || m.View().Step() == m.View().Grid().Steps {
					b.StopTimer()
					var err error
					if m, err = ctm.New(sc); err != nil {
						b.Fatal(err)
					}
					b.StartTimer()
				}
				m.Step()
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(m.View().Grid().Cells), "ns/cell-step")
		})
	}
}

// The step allocates nothing, with one class or several, straight or curved.
func TestStepDoesNotAllocate(t *testing.T) {
	for _, c := range []struct {
		shape   string
		classes int
	}{{"triangular", 1}, {"triangular", 3}, {"greenshields", 1}} {
		m, err := ctm.New(corridor(t, c.shape, 10, c.classes))
		if err != nil {
			t.Fatal(err)
		}
		for range 1000 {
			m.Step()
		}
		if n := testing.AllocsPerRun(200, m.Step); n != 0 {
			t.Errorf("%s, %d classes: %v allocations a step", c.shape, c.classes, n)
		}
	}
}
