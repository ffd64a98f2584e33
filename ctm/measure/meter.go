package measure

import (
	"errors"
	"fmt"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// Meter lets at most a fixed flow out of a link's downstream end, as a ramp meter does. The merge beyond it sees
// min(what the ramp sends, the rate) (theory of the cell scheme: a limit of the sending flow).
type Meter struct {
	Link       network.LinkID
	Rate       float64 // veh/s, all lanes, >= 0
	Start, End float64 // s after midnight
}

// Check says what is wrong with the meter, or returns nil.
func (c *Meter) Check(*network.Network) error {
	if !(c.Rate >= 0) {
		return errors.New("has a rate below 0")
	}
	return checkTimes(c.Start, c.End)
}

// Cuts is empty: a link's end needs no cut.
func (c *Meter) Cuts(*network.Network, float64) []ctm.Cut { return nil }

// Times lists the moments at which it begins and ends.
func (c *Meter) Times() []float64 { return []float64{c.Start, c.End} }

// Apply limits the flow out of the link.
func (c *Meter) Apply(v ctm.View, lim *ctm.Limits) {
	if within(v.Time(), c.Start, c.End) {
		lim.LinkEnd[c.Link] = min(lim.LinkEnd[c.Link], c.Rate)
	}
}

// Text describes the meter.
func (c *Meter) Text(n *network.Network, _ unit.System) string {
	return fmt.Sprintf("meter at the end of link `%s`, %s: at most %s", n.Links[c.Link].Name, period(c.Start, c.End), hourly(c.Rate))
}
