package ctm

import (
	"math"

	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// SegmentLimits is what measures do to one segment. The zero value changes nothing; where measures overlap,
// the tightest wins.
type SegmentLimits struct {
	LanesTaken float64 // lanes closed
	Speed      float64 // speed limit, m/s; 0 none
	Capacity   float64 // of each lane left, what may flow into the segment, veh/s; 0 the diagram's
	Discharge  float64 // of each lane left while a queue stands before it, veh/s; 0 the capacity less the diagram's drop
	Share      float64 // share of the capacity lost, 0..1
	Shut       bool    // nothing may enter the segment; what is in it drains
}

// Limits is what is in force during a step.
type Limits struct {
	Segments []SegmentLimits
	// LinkEnd is the largest flow out of each link's downstream end in veh/s, +Inf without a limit. It holds
	// for meters, signals and exits.
	LinkEnd []float64
}

// NewLimits returns limits that change nothing.
func newLimits(g *Grid) *Limits {
	l := &Limits{Segments: make([]SegmentLimits, len(g.Segments)), LinkEnd: make([]float64, len(g.Links))}
	l.reset()
	return l
}

func (l *Limits) reset() {
	clear(l.Segments)
	for i := range l.LinkEnd {
		l.LinkEnd[i] = math.Inf(1)
	}
}

// Road is what a segment is like at present.
type Road struct {
	Lanes   float64
	Diagram diagram.Diagram // per lane, with the speed limit in force
	// Entry is the largest flow into the segment, all lanes, veh/s: the capacity of the diagram or what a measure
	// leaves of it. It acts at the upstream end, where a queue then stands; inside the segment traffic flows by
	// the diagram, so that vehicles which were there when a lane closed drain.
	Entry float64
	Drop  float64 // share of Entry lost while a queue discharges into it
}

// road applies a segment's limits to its link. A segment whose every lane is taken keeps its lanes: it is shut
// at its upstream end and drains.
func road(link *network.Link, lim *SegmentLimits) Road {
	r := Road{Lanes: link.Lanes, Diagram: link.Diagram, Drop: link.Drop}
	if lim.LanesTaken > 0 && lim.LanesTaken < link.Lanes {
		r.Lanes -= lim.LanesTaken
	}
	if lim.Speed > 0 && lim.Speed < link.Diagram.FreeSpeed() {
		r.Diagram = diagram.Limit(link.Diagram, lim.Speed, math.Inf(1))
	}
	perLane := diagram.Capacity(r.Diagram)
	if lim.Capacity > 0 {
		perLane = min(perLane, lim.Capacity)
	}
	r.Entry = r.Lanes * min(perLane, (1-lim.Share)*diagram.Capacity(link.Diagram))
	if lim.Discharge > 0 {
		r.Drop = max(0, 1-lim.Discharge*r.Lanes/r.Entry)
	}
	if lim.Shut {
		r.Entry, r.Drop = 0, 0
	}
	return r
}
