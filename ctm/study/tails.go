package study

import (
	"math"
	"slices"

	works "example.org/tailback/ctm/measure"
	"example.org/tailback/ctm/observe"
	"example.org/tailback/network"
)

// quarter is the time in which a row of tails finds the farthest one, s.
const quarter = 15 * 60

// TailRow is the farthest tail along a corridor in one quarter of an hour, of queues that stand upstream of the
// closure or through it. Nothing in it is rounded.
type TailRow struct {
	Start, End float64
	Corridor   int
	Seen       float64       // s after midnight: when the tail was there
	Tail       observe.Place // on the corridor
	X          float64       // m from the corridor's first point
	Upstream   float64       // m from the closure's upstream end back to the tail; NaN where the corridor has no closure
	Growth     float64       // m/s, greatest speed upstream between two report times of the quarter, 0 where it only shrinks
	Approach   float64       // m/s, greatest speed of the traffic within approachZone upstream of the tail
	Exits      []ExitBefore  // the last two upstream of the tail, the nearer one first
	Joining    []network.LinkID
	OffMap     bool // the queue fills the corridor to its first point: the true tail lies beyond, unknown
	Spread     bool // the tail's longest branch leaves the corridor: the corridor's whole link counts as queued
}

// ExitBefore is a way off a corridor and how far it lies upstream of a tail.
type ExitBefore struct {
	Link     network.LinkID
	Distance float64 // m
}

// approachZone is how far upstream of a tail the approach speed is looked for, m: the scheme spreads the tail itself over a
// cell or two.
const approachZone = 500

// Tails finds, for every corridor and quarter of an hour, the farthest tail of the queues of a run.
func Tails(r *Result) []TailRow {
	var list []TailRow
	for c := range r.Corridors.Chains {
		list = append(list, tailsAlong(r, c)...)
	}
	return list
}

// tailsAlong finds the tails of one corridor.
func tailsAlong(r *Result, corridor int) []TailRow {
	chain := &r.Corridors.Chains[corridor]
	var rows []TailRow
	closure := closureAt(r, chain)
	last, lastTime := math.NaN(), math.NaN() // tail at the report time before
	for k, t := range r.Links.Times {
		x, spread, ok := farthest(r, chain, t, closure)
		if !ok {
			last = math.NaN()
			continue
		}
		begin := r.Grid.Start + math.Floor((t-r.Grid.Start-1e-6)/quarter)*quarter
		if k == 0 {
			begin = t
		}
		if len(rows) == 0 || rows[len(rows)-1].Start != begin {
			rows = append(rows, TailRow{Start: begin, End: begin + quarter, Corridor: corridor, X: math.Inf(1)})
		}
		row := &rows[len(rows)-1]
		if !math.IsNaN(last) {
			row.Growth = max(row.Growth, (last-x)/(t-lastTime))
		}
		if x < row.X {
			row.X, row.Seen, row.Spread = x, t, spread
		}
		last, lastTime = x, t
	}
	for i := range rows {
		rows[i].between(r, chain)
		rows[i].describe(r, chain, closure)
	}
	return rows
}

// between moves a row's tail farther where a queue's farthest moment lies between two report times.
func (row *TailRow) between(r *Result, chain *network.Corridor) {
	for i := range r.Queues.Bottlenecks {
		b := &r.Queues.Bottlenecks[i]
		if b.FarthestTime <= row.Start || b.FarthestTime > row.End {
			continue
		}
		if x, on := along(r, chain, b.FarthestAt.Link, b.FarthestAt.At); on && x < row.X {
			row.X, row.Seen, row.Spread = x, b.FarthestTime, false
		}
	}
}

// closureAt is the upstream end of the first closure or incident on a corridor, m from its first point, NaN without
// one.
func closureAt(r *Result, chain *network.Corridor) float64 {
	first := math.NaN()
	see := func(link network.LinkID, at float64) {
		if x, ok := along(r, chain, link, at); ok && !(x >= first) {
			first = x
		}
	}
	for _, m := range r.Scenario.Measures {
		switch c := m.(type) {
		case *works.LaneClosure:
			for i := range c.Stretch {
				see(c.Stretch[i].Link, c.Stretch[i].From)
			}
		case *works.Incident:
			see(c.Link, c.At)
		}
	}
	return first
}

// along is a place in metres from a corridor's first point, and whether the corridor holds its link.
func along(r *Result, chain *network.Corridor, link network.LinkID, at float64) (float64, bool) {
	plain := network.Corridor{Links: chain.Links}
	return plain.Place(r.Scenario.Network, link, at)
}

// farthest is the most upstream tail at a report time among queues on a corridor that reach upstream of a closure (all
// where it has none), and whether the queue's longest branch ends off the corridor.
func farthest(r *Result, chain *network.Corridor, t, closure float64) (x float64, spread, ok bool) {
	x = math.Inf(1)
	for i := range r.Queues.Rows {
		q := &r.Queues.Rows[i]
		if q.Time != t {
			continue
		}
		if at, on := along(r, chain, q.Tail.Link, q.Tail.At); on {
			if at < x {
				x, spread = at, false
			}
			continue
		}
		for _, l := range q.Links { // the tail is on a side road: every link of the corridor that it stands on counts whole
			if at, on := along(r, chain, l, 0); on && at < x {
				x, spread = at, true
			}
		}
	}
	return x, spread, !math.IsInf(x, 1) && !(x > closure)
}

// describe fills in what follows from the tail's place.
func (row *TailRow) describe(r *Result, chain *network.Corridor, closure float64) {
	n := r.Scenario.Network
	row.Tail = placeOn(r, chain, row.X)
	row.Upstream = closure - row.X
	row.Approach = r.Corridors.FastestAt(row.Corridor, row.X-approachZone, row.X, row.Seen)
	row.OffMap = row.X <= r.tolerance() && offMap(r, chain.Links[0], row.Seen)
	x := 0.0
	for i, l := range chain.Links {
		if i > 0 { // the node at the link's start, x metres along
			from := n.Links[l].From
			switch {
			case x <= row.X:
				for _, out := range n.Out(from) {
					if out != l {
						row.Exits = append(row.Exits, ExitBefore{out, row.X - x})
					}
				}
			case !(x > closure):
				for _, in := range n.In(from) {
					if in != chain.Links[i-1] {
						row.Joining = append(row.Joining, in)
					}
				}
			}
		}
		x += n.Links[l].Length
	}
	slices.Reverse(row.Exits)
	row.Exits = row.Exits[:min(2, len(row.Exits))]
}

// placeOn is the link and place at metres from a corridor's first point.
func placeOn(r *Result, chain *network.Corridor, x float64) observe.Place {
	n := r.Scenario.Network
	for i, l := range chain.Links {
		if length := n.Links[l].Length; x <= length || i == len(chain.Links)-1 {
			return observe.Place{Link: l, At: x}
		}
		x -= n.Links[l].Length
	}
	return observe.Place{}
}

// offMap reports whether vehicles wait outside a link at a report time, or traffic would come to it from elsewhere.
func offMap(r *Result, link network.LinkID, t float64) bool {
	k, _ := slices.BinarySearch(r.Links.Times, t)
	for i, entry := range r.Entries.Links {
		if entry == link && k > 0 && k <= len(r.Entries.Rows) {
			return r.Entries.Rows[k-1][i].Waiting >= leastWaiting
		}
	}
	return true
}
