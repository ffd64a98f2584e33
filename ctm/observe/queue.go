package observe

import (
	"math"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
)

// queue is one standing queue through time.
type queue struct {
	place  Place // where its head stood when it began
	cell   int   // the cell before the place
	onset  float64
	seen   float64 // when it was last seen
	now    *cluster
	runs   []Run // of the last look
	branch []network.LinkID

	clearance float64
	active    bool    // the head still stands at the place
	gone      float64 // when it left
	headCell  int     // of the last look
	resting   float64 // since when the head has stood in that cell, away from the place

	begin, last, report0 float64 // vehicles that had passed the place: at the onset, at the last look, at the last report
	reportTime           float64
	held                 float64 // delay per second at the last look

	bottleneck  Bottleneck
	rows        []QueueRow
	throughput  []ThroughputRow
	spillbacks  []Spillback
	touching    map[network.LinkID]int // spillback rows that are still open
	tails       map[network.LinkID][2]float64
	tailsBefore map[network.LinkID][2]float64
}

func newQueue(v ctm.View, c *cluster) *queue {
	q := &queue{
		place: Place{c.head.Link, c.head.Head}, cell: c.head.Last, onset: v.Time(), now: c, active: true,
		touching: make(map[network.LinkID]int), clearance: math.NaN(), headCell: c.head.Last,
	}
	q.begin = passed(v, q.place, q.cell)
	q.last, q.report0, q.reportTime = q.begin, q.begin, v.Time()
	q.bottleneck = Bottleneck{Place: q.place, Onset: v.Time()}
	return q
}

// leads says which of two queues that have grown together goes on: the one whose place is the head of what they
// have become, else the larger one.
func (q *queue) leads(rival *queue, c *cluster) bool {
	mine, theirs := q.cell == c.head.Last, rival.cell == c.head.Last
	if mine != theirs {
		return mine
	}
	return overlap(q.runs, c.runs) > overlap(rival.runs, c.runs)
}

// settled reports that the queue's head has left its place and stands still elsewhere: at a bottleneck upstream
// that the queue had covered.
func (q *queue) settled(v ctm.View) bool {
	head := q.now.head.Last
	if holds(q.now.runs, q.cell) {
		q.headCell = head
		return false
	}
	if head != q.headCell {
		q.headCell, q.resting = head, v.Time()
		return false
	}
	return !q.active && v.Time()-q.resting >= leastStanding
}

// look updates the queue from its cluster; before is the time of the last look.
func (q *queue) look(v ctm.View, before float64) {
	c, t := q.now, v.Time()
	b := &q.bottleneck
	if q.seen > 0 || q.onset < t {
		b.Delay += (q.held + c.held) / 2 * (t - before)
	}
	q.held, q.seen, q.runs = c.held, t, c.runs
	holding := holds(c.runs, q.cell)
	if q.active {
		q.last = passed(v, q.place, q.cell)
		if holding {
			q.branch = c.branch
		} else {
			q.active, q.gone = false, t
			q.flush(t)
		}
	}
	if c.length > b.MaxQueue {
		b.MaxQueue, b.MaxQueueTime = c.length, t
	}
	b.MaxVehicles = max(b.MaxVehicles, c.vehicles)
	if far := c.length + q.dissolved(v); far > b.Farthest {
		b.Farthest, b.FarthestAt, b.FarthestTime = far, Place{c.tail.Link, c.tail.Tail}, t
	}
	q.spill(v, before)
}

// dissolved is the distance in metres from the place to the queue's head, along the branch that stood there.
func (q *queue) dissolved(v ctm.View) float64 {
	if q.active {
		return 0
	}
	x := 0.0
	for i, link := range q.branch {
		end := v.Scenario().Network.Links[link].Length
		if i == 0 {
			end = q.place.At
		}
		if link == q.now.head.Link {
			return max(0, x+end-q.now.head.Head)
		}
		x += end
	}
	return 0
}

// report adds the rows of a report interval.
func (q *queue) report(v ctm.View) {
	c, t := q.now, v.Time()
	q.rows = append(q.rows, QueueRow{
		Time: t, Head: Place{c.head.Link, c.head.Head}, Tail: Place{c.tail.Link, c.tail.Tail},
		Length: c.length, Vehicles: c.vehicles, Links: links(c.runs),
	})
	if q.active {
		q.flush(t)
	}
}

// flush closes a throughput row at time t.
func (q *queue) flush(t float64) {
	if span := t - q.reportTime; span > 0 {
		q.throughput = append(q.throughput, ThroughputRow{
			Start: q.reportTime, End: t, Place: q.place, Flow: (q.last - q.report0) / span,
		})
	}
	q.report0, q.reportTime = q.last, t
}

// end closes the queue at its clearance.
func (q *queue) end(v ctm.View) {
	t := v.Time()
	q.clearance = t
	q.bottleneck.Delay += q.held / 2 * (t - q.seen)
	if q.active {
		q.last = passed(v, q.place, q.cell)
		q.active, q.gone = false, t
		q.flush(t)
	}
	q.closeSpillbacks(t)
}

// write hands the queue's results over under its number.
func (q *queue) write(o *Queues, number int) {
	b := q.bottleneck
	b.Queue, b.Clearance = number, q.clearance
	until := q.gone
	if q.active {
		until = q.seen
	}
	if until > q.onset {
		b.Throughput = (q.last - q.begin) / (until - q.onset)
	}
	o.Bottlenecks = append(o.Bottlenecks, b)
	for _, r := range q.rows {
		r.Queue = number
		o.Rows = append(o.Rows, r)
	}
	for _, r := range q.throughput {
		r.Queue = number
		o.Throughput = append(o.Throughput, r)
	}
	for _, r := range q.spillbacks {
		r.Queue = number
		o.Spillbacks = append(o.Spillbacks, r)
	}
}
