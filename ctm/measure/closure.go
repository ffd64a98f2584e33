package measure

import (
	"fmt"
	"strings"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// LaneClosure takes lanes away over a stretch of road. Each lane left carries at most Capacity until a queue
// stands before the closure, and Discharge out of that queue: both numbers are needed where they are known, since
// a work zone discharges less than it carried before it broke down (Dixon, Hummer & Lorscheider 1996,
// Transportation Research Record 1529). What is on the stretch when it closes stays and drains; nothing is pushed
// together. Where every lane is taken nothing enters the stretch, and what is inside drains.
type LaneClosure struct {
	Stretch    []Span  // from upstream to downstream
	Lanes      float64 // lanes taken, > 0
	Start, End float64 // s after midnight
	Capacity   float64 // of each lane left when it breaks down, veh/s; 0 the diagram's
	Discharge  float64 // of each lane left out of a queue, veh/s; 0 the capacity less the diagram's drop
	Speed      float64 // speed limit or free speed, m/s; 0 none
	Source     string  // where the numbers come from, for reports
}

// Check says what is wrong with the closure on a network, or returns nil.
func (c *LaneClosure) Check(n *network.Network) error {
	if !(c.Lanes > 0) {
		return fmt.Errorf("takes %g lanes: it must take more than 0", c.Lanes)
	}
	for i := range c.Stretch {
		s := &c.Stretch[i]
		if err := checkSpan(s, n); err != nil {
			return err
		}
		if l := &n.Links[s.Link]; c.Lanes > l.Lanes {
			return fmt.Errorf("takes %g lanes, but link `%s` has %g", c.Lanes, l.Name, l.Lanes)
		}
	}
	return checkTimes(c.Start, c.End)
}

// Cuts lists where segments must begin or end.
func (c *LaneClosure) Cuts(n *network.Network, cell float64) []ctm.Cut {
	return cuts(c.Stretch, n, cell)
}

// Times lists the moments at which it begins and ends.
func (c *LaneClosure) Times() []float64 { return []float64{c.Start, c.End} }

// Apply tightens the segments whose midpoint lies in the stretch.
func (c *LaneClosure) Apply(v ctm.View, lim *ctm.Limits) {
	if !within(v.Time(), c.Start, c.End) {
		return
	}
	tighten(v, lim, c.Stretch, func(s *ctm.SegmentLimits) {
		s.LanesTaken = max(s.LanesTaken, c.Lanes)
		s.Capacity = lower(s.Capacity, c.Capacity)
		s.Discharge = lower(s.Discharge, c.Discharge)
		s.Speed = lower(s.Speed, c.Speed)
	})
	for i := range c.Stretch {
		if c.Lanes >= v.Scenario().Network.Links[c.Stretch[i].Link].Lanes {
			seal(v, lim)
			return
		}
	}
}

// Text describes the closure.
func (c *LaneClosure) Text(n *network.Network, sys unit.System) string {
	var b strings.Builder
	lanes := n.Links[c.Stretch[0].Link].Lanes
	fmt.Fprintf(&b, "%g of %g lanes closed %s, %s", c.Lanes, lanes, place(n, c.Stretch, sys), period(c.Start, c.End))
	if c.Lanes >= lanes {
		b.WriteString("; nothing enters, what is inside drains")
		return b.String()
	}
	if c.Capacity > 0 {
		fmt.Fprintf(&b, ", %s per open lane", hourly(c.Capacity))
	}
	if c.Discharge > 0 {
		fmt.Fprintf(&b, " before a queue forms and %s out of it", hourly(c.Discharge))
	}
	if c.Speed > 0 {
		fmt.Fprintf(&b, ", at most %s", speed(c.Speed, sys))
	}
	if c.Source != "" {
		b.WriteString("; " + c.Source)
	}
	return b.String()
}
