package measure

import (
	"fmt"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// Incident takes away a share of a link's capacity at a point, from its beginning until it is cleared. On the grid
// it acts on the stretch of one target cell that begins at the point. The shares that remain by lanes and
// severity are in the literature (HCM 2010, exhibit 10-17: with one of three lanes blocked 0.49 remains).
type Incident struct {
	Link         network.LinkID
	At           float64 // m from the link's start
	CapacityLeft float64 // share of the link's capacity that remains, 0..1; 0 stops the link
	Start, End   float64 // s after midnight
}

// Check says what is wrong with the incident on a network, or returns nil.
func (c *Incident) Check(n *network.Network) error {
	l := &n.Links[c.Link]
	switch {
	case !(c.CapacityLeft >= 0 && c.CapacityLeft <= 1):
		return fmt.Errorf("leaves a share of %g of the capacity: it must lie in 0..1", c.CapacityLeft)
	case c.At < 0 || c.At >= l.Length:
		return fmt.Errorf("lies at %s, outside link `%s`, which is %s long", metres(c.At), l.Name, metres(l.Length))
	}
	return checkTimes(c.Start, c.End)
}

// span is one target cell from the point, moved upstream where the link ends before.
func (c *Incident) span(length, cell float64) []Span {
	if cell <= 0 {
		cell = defaultCell
	}
	from := max(0, min(c.At, length-cell))
	return []Span{{c.Link, from, from + cell}}
}

// Cuts lists where segments must begin or end.
func (c *Incident) Cuts(n *network.Network, cell float64) []ctm.Cut {
	return cuts(c.span(n.Links[c.Link].Length, cell), n, cell)
}

// Times lists the moments at which it begins and ends.
func (c *Incident) Times() []float64 { return []float64{c.Start, c.End} }

// Apply takes the share of capacity away, of each lane that closures leave.
func (c *Incident) Apply(v ctm.View, lim *ctm.Limits) {
	if !within(v.Time(), c.Start, c.End) {
		return
	}
	length := v.Grid().Links[c.Link].Length
	tighten(v, lim, c.span(length, v.Scenario().Horizon.Cell), func(s *ctm.SegmentLimits) {
		s.Share = max(s.Share, 1-c.CapacityLeft)
	})
}

// Text describes the incident.
func (c *Incident) Text(n *network.Network, sys unit.System) string {
	return fmt.Sprintf("incident at %s of link `%s`, %s: %s of the capacity left", length(c.At, sys), n.Links[c.Link].Name, period(c.Start, c.End), percent(c.CapacityLeft))
}
