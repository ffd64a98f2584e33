package study

import (
	"cmp"
	"math"
	"slices"

	"example.org/tailback/ctm/observe"
)

// What became of a bottleneck between the base and an alternative.
const (
	Unchanged = "unchanged"
	Worsened  = "worsened" // more delay in its queues
	Eased     = "eased"    // less delay in its queues
	Appeared  = "appeared"
	Vanished  = "vanished"
	MovedTo   = "moved" // its place is another one in the alternative
)

// Attribution is one bottleneck in the base and in an alternative: all activations of one place together.
type Attribution struct {
	What       string
	Place      observe.Place // in the base where it has one there, else in the alternative
	To         observe.Place // where it moved, else Place
	Base, Alt  float64       // vehicle-seconds of delay in its queues
	Onset      float64       // s after midnight, first one in the alternative; NaN for none
	Clearance  float64       // of the last one in the alternative; NaN for none, or where it still stands at the end
	TakesOver  bool          // it is the one that holds most of the traffic back once the alternative's measures have ended
	takesDelay float64
}

// sameDelay and sameShare say from which change of delay on a bottleneck counts as worsened or eased: a vehicle-hour and a hundredth.
const (
	sameDelay = 3600.0
	sameShare = 0.01
)

// Attribute matches the bottlenecks of an alternative with those of its base by place (within one cell), in the order
// of place. A bottleneck that vanished has moved where one appeared inside its queue, or its place lies inside that
// one's queue, at the same time of day. Among the queues of the alternative that begin once its last measure has
// ended (give or take a report interval), the one with the most delay takes over.
func Attribute(base, alt *Result) []Attribution {
	var list []Attribution
	for i := range base.Queues.Bottlenecks {
		b := &base.Queues.Bottlenecks[i]
		at(&list, base, b.Place).Base += b.Delay
	}
	known := len(list)
	end := alt.lastEnd()
	for i := range alt.Queues.Bottlenecks {
		b := &alt.Queues.Bottlenecks[i]
		a := at(&list, alt, b.Place)
		if a.Alt == 0 {
			a.Onset = b.Onset
		}
		a.Alt += b.Delay
		a.Clearance = b.Clearance
		if b.Onset >= end-alt.interval() {
			a.takesDelay = max(a.takesDelay, b.Delay)
		}
	}
	for i := range list {
		list[i].name(i < known)
	}
	list = moved(list, base, alt)
	takeOver(list)
	slices.SortStableFunc(list, func(a, b Attribution) int {
		return cmp.Or(cmp.Compare(a.Place.Link, b.Place.Link), cmp.Compare(a.Place.At, b.Place.At))
	})
	return list
}

// at finds the entry of a place, or makes one.
func at(list *[]Attribution, r *Result, p observe.Place) *Attribution {
	for i := range *list {
		if r.near((*list)[i].Place, p) {
			return &(*list)[i]
		}
	}
	*list = append(*list, Attribution{Place: p, To: p, Onset: math.NaN(), Clearance: math.NaN()})
	return &(*list)[len(*list)-1]
}

// near reports whether two places count as one.
func (r *Result) near(a, b observe.Place) bool {
	return a.Link == b.Link && math.Abs(a.At-b.At) <= r.tolerance()
}

// name says what became of a bottleneck.
func (a *Attribution) name(inBase bool) {
	d := a.Alt - a.Base
	switch {
	case !inBase:
		a.What = Appeared
	case math.IsNaN(a.Onset):
		a.What = Vanished
	case math.Abs(d) <= max(sameDelay, sameShare*a.Base):
		a.What = Unchanged
	case d > 0:
		a.What = Worsened
	default:
		a.What = Eased
	}
}

// lastEnd is when the last measure ends within the period, or its end.
func (r *Result) lastEnd() float64 {
	h := &r.Scenario.Horizon
	last := math.Inf(-1)
	for _, m := range r.Scenario.Measures {
		for _, t := range m.Times() {
			last = max(last, t)
		}
	}
	if math.IsInf(last, -1) {
		return h.End
	}
	return min(last, h.End)
}

// moved joins a bottleneck that vanished with one that appeared in the same queue.
func moved(list []Attribution, base, alt *Result) []Attribution {
	for i := range list {
		if list[i].What != Vanished {
			continue
		}
		for k := range list {
			if list[k].What != Appeared || !inQueue(base, alt, list[i].Place, list[k].Place) {
				continue
			}
			a := &list[i]
			a.What, a.To, a.Alt, a.Onset, a.Clearance, a.takesDelay = MovedTo, list[k].Place, list[k].Alt, list[k].Onset, list[k].Clearance, list[k].takesDelay
			list = slices.Delete(list, k, k+1)
			return moved(list, base, alt)
		}
	}
	return list
}

// inQueue reports whether the queue at one place of the base and that at another one of the alternative stand on each
// other's place at some time.
func inQueue(base, alt *Result, from, to observe.Place) bool {
	for _, t := range base.Links.Times {
		a, b := queueAt(base, from, t), queueAt(alt, to, t)
		if a != nil && b != nil && (slices.Contains(a.Links, to.Link) || slices.Contains(b.Links, from.Link)) {
			return true
		}
	}
	return false
}

// queueAt is the queue of a place at a report time, nil for none.
func queueAt(r *Result, p observe.Place, t float64) *observe.QueueRow {
	i, _ := slices.BinarySearchFunc(r.Queues.Rows, t, func(q observe.QueueRow, t float64) int { return cmp.Compare(q.Time, t) })
	for ; i < len(r.Queues.Rows) && r.Queues.Rows[i].Time == t; i++ {
		q := &r.Queues.Rows[i]
		for k := range r.Queues.Bottlenecks {
			if b := &r.Queues.Bottlenecks[k]; b.Queue == q.Queue && r.near(b.Place, p) {
				return q
			}
		}
	}
	return nil
}

// takeOver marks the bottleneck that holds most of the traffic back after the measures have ended.
func takeOver(list []Attribution) {
	best := -1
	for i := range list {
		if list[i].takesDelay > 0 && (best < 0 || list[i].takesDelay > list[best].takesDelay) {
			best = i
		}
	}
	if best >= 0 {
		list[best].TakesOver = true
	}
}
