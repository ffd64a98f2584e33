package measure

import (
	"errors"
	"fmt"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// SpeedLimit holds links to a speed. A limit u changes a flow-density curve f of any shape to
//
//	q(k) = min(f(k), u k)
//
// per lane: nobody drives faster than u, and where f is slower than that already, nothing changes. For the
// triangular shape this is min(u k, w (kj - k)) with critical density w kj/(u + w) and capacity
// u w kj/(u + w), the usual form in the literature (restated in the design notes, section 7, with check values
// 1920 and 1800 veh/h for 80 and 60 km/h at w = 20 km/h and kj = 120 veh/km). A limit below the speed at capacity
// therefore costs capacity; a gain arises only with a capacity drop. Above the speed at capacity only the free
// branch changes. The forms in which the congested branch shifts too (Hegyi et al. 2005; Carlson et al. 2010)
// need parameters that a study rarely has, and are not used.
type SpeedLimit struct {
	Links      []network.LinkID
	Limit      float64 // m/s, > 0
	Start, End float64 // s after midnight
}

// Check says what is wrong with the limit, or returns nil.
func (c *SpeedLimit) Check(*network.Network) error {
	if !(c.Limit > 0) {
		return errors.New("has a limit of 0: it must be positive")
	}
	return checkTimes(c.Start, c.End)
}

// Cuts is empty: whole links need no cut.
func (c *SpeedLimit) Cuts(*network.Network, float64) []ctm.Cut { return nil }

// Times lists the moments at which it begins and ends.
func (c *SpeedLimit) Times() []float64 { return []float64{c.Start, c.End} }

// Apply limits the speed on every segment of the links.
func (c *SpeedLimit) Apply(v ctm.View, lim *ctm.Limits) {
	if !within(v.Time(), c.Start, c.End) {
		return
	}
	for _, link := range c.Links {
		l := v.Grid().Links[link]
		for s := l.FirstSegment; s <= l.Last(); s++ {
			lim.Segments[s].Speed = lower(lim.Segments[s].Speed, c.Limit)
		}
	}
}

// Text describes the limit.
func (c *SpeedLimit) Text(n *network.Network, sys unit.System) string {
	return fmt.Sprintf("speed limit of %s on %s, %s", speed(c.Limit, sys), names(n, c.Links), period(c.Start, c.End))
}
