package network

import "fmt"

// Corridor is a chain of links with an axis along it, for queue profiles and places an engineer can find.
type Corridor struct {
	Name       string
	Links      []LinkID
	StartAt    float64 // chainage of the first point, m
	Descending bool    // chainage falls in the direction of travel
	Chained    bool    // a chainage was given; otherwise places are metres from the first point
}

// Check says what is wrong with the chain, or returns nil: each link must begin where the last one ended, and
// no link may stand in it twice.
func (c *Corridor) Check(n *Network) error {
	if len(c.Links) == 0 {
		return fmt.Errorf("corridor `%s` has no links", c.Name)
	}
	seen := make(map[LinkID]bool, len(c.Links))
	for i, l := range c.Links {
		if seen[l] {
			return fmt.Errorf("corridor `%s` names link `%s` twice", c.Name, n.Links[l].Name)
		}
		seen[l] = true
		if i == 0 {
			continue
		}
		last := &n.Links[c.Links[i-1]]
		if last.To != n.Links[l].From {
			return fmt.Errorf("corridor `%s` breaks between `%s` and `%s`: the first ends at node `%s`, the second begins at node `%s`",
				c.Name, last.Name, n.Links[l].Name, n.Nodes[last.To].Name, n.Nodes[n.Links[l].From].Name)
		}
	}
	return nil
}

// Place gives the axis position in metres (chainage) of a point at metres along a link, and whether the
// corridor holds that link.
func (c *Corridor) Place(n *Network, link LinkID, at float64) (float64, bool) {
	x := 0.0
	for _, l := range c.Links {
		if l == link {
			return c.axis(x + at), true
		}
		x += n.Links[l].Length
	}
	return 0, false
}

// axis turns metres from the corridor's first point into chainage.
func (c *Corridor) axis(x float64) float64 {
	if c.Descending {
		return c.StartAt - x
	}
	return c.StartAt + x
}

// Length is the sum of the links' lengths in metres.
func (c *Corridor) Length(n *Network) float64 {
	sum := 0.0
	for _, l := range c.Links {
		sum += n.Links[l].Length
	}
	return sum
}
