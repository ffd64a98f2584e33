package ctm

import (
	"math"
	"sort"
)

// schedule lists the moments at which some measure changes its answer.
type schedule struct {
	times []float64
	next  int
}

func newSchedule(sc *Scenario) schedule {
	var p schedule
	for _, m := range sc.Measures {
		p.times = append(p.times, m.Times()...)
	}
	sort.Float64s(p.times)
	return p
}

// due reports whether a change lies at or before t (to a millisecond) and moves past it.
func (p *schedule) due(t float64) bool {
	start := p.next
	for p.next < len(p.times) && p.times[p.next] <= t+1e-3 {
		p.next++
	}
	return p.next > start
}

// nextTurn is the first moment after t at which a turning fraction of the demand changes, +Inf for never.
func (m *Model) nextTurn(t float64) float64 {
	next := math.Inf(1)
	for i := range m.demand.Turnings {
		turn := &m.demand.Turnings[i]
		if turn.Every <= 0 {
			continue
		}
		row := turn.Row(t)
		change := turn.Start + float64(row+1)*turn.Every
		if row+1 < len(turn.Fractions) && change > t {
			next = min(next, change)
		}
	}
	return next
}
