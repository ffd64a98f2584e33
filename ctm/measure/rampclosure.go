package measure

import (
	"fmt"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// RampClosure shuts a link at its upstream end: nothing enters, and what is on it drains. Where its traffic goes
// instead is a change of the demand (package demand, Revision), which the reader makes together with this one.
type RampClosure struct {
	Link       network.LinkID
	Start, End float64 // s after midnight
}

// Check says what is wrong with the closure, or returns nil.
func (c *RampClosure) Check(*network.Network) error { return checkTimes(c.Start, c.End) }

// Cuts is empty: a link's end needs no cut.
func (c *RampClosure) Cuts(*network.Network, float64) []ctm.Cut { return nil }

// Times lists the moments at which it begins and ends.
func (c *RampClosure) Times() []float64 { return []float64{c.Start, c.End} }

// Apply shuts the link's first segment.
func (c *RampClosure) Apply(v ctm.View, lim *ctm.Limits) {
	if within(v.Time(), c.Start, c.End) {
		lim.Segments[v.Grid().Links[c.Link].FirstSegment].Shut = true
	}
}

// Text describes the closure.
func (c *RampClosure) Text(n *network.Network, _ unit.System) string {
	return fmt.Sprintf("link `%s` closed, %s", n.Links[c.Link].Name, period(c.Start, c.End))
}
