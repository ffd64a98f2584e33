package study

import (
	"math"
	"slices"

	"example.org/tailback/ctm/observe"
	"example.org/tailback/network"
)

// caused lists the queues at each report time, and at the longest moment of each activation (numbered -1), that do
// not lie within a queue of the base at about the same time. Without a base it lists all.
func caused(r, base *Result) []observe.QueueRow {
	var normal []observe.QueueRow
	if base != nil {
		normal = snapshots(base)
	}
	var list []observe.QueueRow
	first := 0
	for _, q := range snapshots(r) {
		for first < len(normal) && normal[first].Time < q.Time-r.interval() {
			first++
		}
		if !r.normal(&q, normal[first:]) {
			list = append(list, q)
		}
	}
	return list
}

// interval is the length of a report interval, s.
func (r *Result) interval() float64 { return float64(r.Grid.PerReport) * r.Grid.Step }

// tolerance is how far apart two places may be that count as one: a target cell, m.
func (r *Result) tolerance() float64 {
	longest := 0.0
	for i := range r.Grid.Segments {
		longest = max(longest, r.Grid.Segments[i].Dx)
	}
	return longest
}

// snapshots lists the rows of all queues and the longest moments of activations, in the order of time.
func snapshots(r *Result) []observe.QueueRow {
	list := slices.Clone(r.Queues.Rows)
	for i := range r.Queues.Bottlenecks {
		b := &r.Queues.Bottlenecks[i]
		peak := observe.QueueRow{Time: b.MaxQueueTime, Queue: -1, Head: b.Place, Tail: b.Place, Length: b.MaxQueue}
		if near := r.around(b.Queue, b.MaxQueueTime); near != nil {
			peak.Head, peak.Tail, peak.Links = near.Head, near.Tail, near.Links
		} else {
			peak.Links = []network.LinkID{b.Place.Link}
		}
		list = append(list, peak)
	}
	slices.SortStableFunc(list, func(a, b observe.QueueRow) int {
		switch {
		case a.Time < b.Time:
			return -1
		case a.Time > b.Time:
			return 1
		}
		return 0
	})
	return list
}

// around is the row of a queue nearest to a time, nil where it has none.
func (r *Result) around(queue int, t float64) *observe.QueueRow {
	var best *observe.QueueRow
	for i := range r.Queues.Rows {
		q := &r.Queues.Rows[i]
		if q.Queue == queue && (best == nil || math.Abs(q.Time-t) < math.Abs(best.Time-t)) {
			best = q
		}
	}
	return best
}

// normal reports whether one of the base's queues of about the same time covers a queue. The list is sorted by time.
func (r *Result) normal(q *observe.QueueRow, base []observe.QueueRow) bool {
	for i := range base {
		if base[i].Time > q.Time+r.interval() {
			return false
		}
		if covered(q, &base[i], r.tolerance()) {
			return true
		}
	}
	return false
}

// covered reports whether a queue lies within another: on its links, its head no farther downstream, its tail no
// farther upstream, and no longer, up to a tolerance in metres.
func covered(q, by *observe.QueueRow, tolerance float64) bool {
	for _, l := range q.Links {
		if !slices.Contains(by.Links, l) {
			return false
		}
	}
	if q.Head.Link == by.Head.Link && q.Head.At > by.Head.At+tolerance {
		return false
	}
	if q.Tail.Link == by.Tail.Link && q.Tail.At < by.Tail.At-tolerance {
		return false
	}
	return q.Length <= by.Length+tolerance
}

// reached gives the moment at which a queue first reached each node from downstream, times at which one stands there
// in the base left out, give or take a report interval.
func reached(r, base *Result) map[network.NodeID]float64 {
	at := make(map[network.NodeID]float64)
	for _, s := range r.Queues.Spillbacks {
		t, ok := beyond(&s, r, base)
		node := r.Scenario.Network.Links[s.Link].From
		if old, known := at[node]; ok && (!known || t < old) {
			at[node] = t
		}
	}
	return at
}

// beyond is the first moment of a spillback that the base's spillbacks of the same link leave over.
func beyond(s *observe.Spillback, r, base *Result) (float64, bool) {
	t, until := s.Reached, s.Left
	if math.IsNaN(until) {
		until = r.Grid.Time(r.Grid.Steps)
	}
	if base == nil {
		return t, true
	}
	slack := r.interval()
	var same []observe.Spillback
	for _, b := range base.Queues.Spillbacks {
		if b.Link == s.Link {
			same = append(same, b)
		}
	}
	slices.SortStableFunc(same, func(a, b observe.Spillback) int {
		if a.Reached < b.Reached {
			return -1
		}
		return 1
	})
	for _, b := range same {
		if b.Reached-slack <= t {
			left := b.Left
			if math.IsNaN(left) {
				return 0, false
			}
			t = max(t, left+slack)
		}
	}
	return t, t < until
}
