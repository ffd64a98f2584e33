package observe

import (
	"maps"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
)

// nearStart is how close to a link's upstream end, as a share of its first cell, a tail counts as there: the scheme
// fills the last of a cell only slowly.
const nearStart = 0.1

// spill notes the links whose upstream end the queue reached or left since the last look.
func (q *queue) spill(v ctm.View, before float64) {
	t := v.Time()
	tails := make(map[network.LinkID][2]float64, len(q.now.runs)) // tail position and time
	there := make(map[network.LinkID]bool)
	for i := range q.now.runs {
		r := &q.now.runs[i]
		tails[r.Link] = [2]float64{r.Tail, t}
		if r.AtStart && (q.joined(v, r.Link) || r.Tail <= nearStart*v.Grid().Segments[v.Grid().Links[r.Link].FirstSegment].Dx) {
			there[r.Link] = true
		}
	}
	for _, r := range q.now.runs {
		if _, open := q.touching[r.Link]; !open && there[r.Link] {
			q.touching[r.Link] = len(q.spillbacks)
			q.spillbacks = append(q.spillbacks, Spillback{Link: r.Link, Reached: q.reached(r.Link, before, t)})
		}
	}
	for link, row := range q.touching {
		if !there[link] {
			q.spillbacks[row].Left = t
			delete(q.touching, link)
		}
	}
	q.tailsBefore, q.tails = q.tails, tails
}

// joined reports whether the queue goes on upstream of a link's start.
func (q *queue) joined(v ctm.View, link network.LinkID) bool {
	n := v.Scenario().Network
	from := n.Links[link].From
	for i := range q.now.runs {
		if r := &q.now.runs[i]; r.AtEnd && n.Links[r.Link].To == from {
			return true
		}
	}
	return false
}

// reached is when the tail came to the link's start, between two looks: at the speed at which it was last seen
// to move, else at the later look.
func (q *queue) reached(link network.LinkID, before, now float64) float64 {
	a, known := q.tails[link]
	b, earlier := q.tailsBefore[link]
	if !known || !earlier || b[0] <= a[0] {
		return now
	}
	speed := (b[0] - a[0]) / (a[1] - b[1])
	return min(now, max(before, a[1]+a[0]/speed))
}

// closeSpillbacks ends the open rows at time t, which is NaN at the end of the run.
func (q *queue) closeSpillbacks(t float64) {
	for _, row := range q.touching {
		q.spillbacks[row].Left = t
	}
	maps.DeleteFunc(q.touching, func(network.LinkID, int) bool { return true })
}
