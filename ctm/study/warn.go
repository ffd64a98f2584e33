package study

import (
	"fmt"
	"math"

	"example.org/tailback/ctm/observe"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// longest finds the longest standing queue.
func (r *Result) longest() {
	for i := range r.Queues.Bottlenecks {
		b := &r.Queues.Bottlenecks[i]
		if b.MaxQueue > r.Totals.MaxQueue {
			r.Totals.MaxQueue, r.Totals.MaxQueueLink, r.Totals.MaxQueueTime = b.MaxQueue, b.Place.Link, b.MaxQueueTime
		}
	}
}

func (r *Result) say(format string, args ...any) {
	r.Warnings = append(r.Warnings, fmt.Sprintf(format, args...))
}

// warn collects what a reader of the results must know.
func (r *Result) warn() {
	r.Warnings = append(r.Warnings, r.Grid.Notes...)
	n := r.Scenario.Network
	r.warnShapes()
	for i, link := range r.Entries.Links {
		r.warnWaiting(i, &n.Links[link])
	}
	for i := range r.Queues.Bottlenecks {
		if b := &r.Queues.Bottlenecks[i]; math.IsNaN(b.Clearance) {
			r.say("queue %d (link `%s`) still stands at the end of the study period: extend it to see the queue clear", b.Queue, n.Links[b.Place.Link].Name)
		}
	}
}

// warnShapes says what the shapes in use cannot do, where that bears on a queue: those without a jam density, and
// the one whose flow jumps.
func (r *Result) warnShapes() {
	used := make(map[string]bool)
	for i := range r.Scenario.Network.Links {
		used[r.Scenario.Network.Links[i].Shape] = true
	}
	for _, s := range diagram.Shapes() {
		switch {
		case !used[s.Name]:
		case s.Name == "underwood" || s.Name == "drake" || s.Name == "inverse-lambda":
			r.say("shape `%s`: %s", s.Name, s.Notes)
		}
	}
}

// leastWaiting is how many vehicles must wait outside at once to be worth a warning: fewer come and go within a
// step.
const leastWaiting = 1

// warnWaiting says how many vehicles waited outside an entry and how much more road and time would hold them: the
// road at the density that stood at the entry's first cell, the time at the flow that then entered.
func (r *Result) warnWaiting(entry int, link *network.Link) {
	worst, hours, at := 0.0, 0.0, 0
	for k, rows := range r.Entries.Rows {
		hours += rows[entry].WaitingSeconds / 3600
		if rows[entry].Waiting > worst {
			worst, at = rows[entry].Waiting, k
		}
	}
	if worst < leastWaiting {
		return
	}
	row := &r.Entries.Rows[at][entry]
	span := r.Links.Times[at+1] - r.Links.Times[at]
	density := r.queuedDensity(link, row.Entered/span)
	r.say("a queue leaves the map at entry `%s`: up to %.0f vehicles wait outside (at %s), %.1f vehicle-hours in all; the study needs about %.1f km (%.1f mi) more road upstream",
		link.Name, worst, unit.Clock(r.Links.Times[at+1]), hours, worst/density/unit.Kilometre, worst/density/unit.Mile)
	if last := r.Entries.Rows[len(r.Entries.Rows)-1][entry]; last.Waiting >= leastWaiting {
		rate := last.Entered / span
		more := math.Inf(1)
		if rate > 0 {
			more = last.Waiting / rate / 60
		}
		r.say("%.0f vehicles still wait at entry `%s` at the end of the study period: it needs at least %.0f min more", last.Waiting, link.Name, more)
	}
}

// queuedDensity is the density, all lanes, at which a link carries a flow (veh/s) when queued, by bisection on the
// congested branch; the critical density where it cannot.
func (r *Result) queuedDensity(link *network.Link, flow float64) float64 {
	low, high := link.Diagram.Critical(), link.Diagram.Jam()
	if math.IsInf(high, 1) || flow >= link.Lanes*diagram.Capacity(link.Diagram) {
		return link.Lanes * low
	}
	for range 60 {
		mid := (low + high) / 2
		if link.Lanes*link.Diagram.Flow(mid) > flow {
			low = mid
		} else {
			high = mid
		}
	}
	return link.Lanes * low
}

// Bottleneck finds the activation with the most delay, nil where nothing queued.
func (r *Result) Bottleneck() *observe.Bottleneck {
	var worst *observe.Bottleneck
	for i := range r.Queues.Bottlenecks {
		if b := &r.Queues.Bottlenecks[i]; worst == nil || b.Delay > worst.Delay {
			worst = b
		}
	}
	return worst
}
