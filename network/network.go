package network

import (
	"fmt"
	"math"
	"strings"

	"example.org/tailback/network/diagram"
)

// NodeID numbers the nodes of a Network from 0, in the order given to New.
type NodeID int

// LinkID numbers the links of a Network from 0, in the order given to New.
type LinkID int

// Node is a place where links meet.
type Node struct {
	Name  string     // the user's id, unique
	Title string     // shown in reports; default the name
	At    [2]float64 // longitude, latitude in degrees, WGS 84
}

// Link is a one-way road between two nodes. Its diagram is per lane.
type Link struct {
	Name     string // the user's id, unique
	Title    string // shown in reports; default the name
	Kind     string // freeway, ramp, street or any word of the user's
	From, To NodeID
	Length   float64 // m, > 0
	Lanes    float64 // > 0
	Diagram  diagram.Diagram
	Shape    string         // name of the diagram's shape
	Params   diagram.Params // what Diagram was built from, per lane
	Drop     float64        // share of capacity lost while a queue discharges, 0..1
	Line     [][2]float64   // longitude, latitude in degrees, WGS 84, in the direction of travel
	// Properties holds every member of the feature that the reader was given, for result files.
	Properties map[string]any
}

// FreeTime is the travel time of the empty link in seconds.
func (l *Link) FreeTime() float64 { return l.Length / l.Diagram.FreeSpeed() }

// Capacity is the largest flow of all lanes in veh/s (passenger cars, where classes have equivalents).
func (l *Link) Capacity() float64 { return l.Lanes * diagram.Capacity(l.Diagram) }

// Network is a directed graph of links. It does not change once built.
type Network struct {
	Nodes []Node
	Links []Link
	in    [][]LinkID
	out   [][]LinkID
	links map[string]LinkID
	nodes map[string]NodeID
}

// Problem is one fault found by a check. Link and Node are -1 where the fault is not theirs.
type Problem struct {
	Link LinkID
	Node NodeID
	Text string
	Hint string
}

// Problems is a list of faults; as an error it prints one line each.
type Problems []Problem

func (p Problems) Error() string {
	lines := make([]string, len(p))
	for i, f := range p {
		lines[i] = f.Text
	}
	return strings.Join(lines, "\n")
}

// New builds a network from nodes and links. It returns Problems that name every unusable value: a name
// that is empty or stands twice, an end that is no node, a length or number of lanes that is not positive and
// finite, a missing diagram.
func New(nodes []Node, links []Link) (*Network, error) {
	n := &Network{
		Nodes: nodes, Links: links,
		in: make([][]LinkID, len(nodes)), out: make([][]LinkID, len(nodes)),
		links: make(map[string]LinkID, len(links)), nodes: make(map[string]NodeID, len(nodes)),
	}
	var faults Problems
	for i := range nodes {
		if first, twice := n.nodes[nodes[i].Name]; twice {
			faults = append(faults, Problem{-1, NodeID(i), fmt.Sprintf("node `%s` stands twice (first as node %d)", nodes[i].Name, first+1), ""})
			continue
		}
		n.nodes[nodes[i].Name] = NodeID(i)
	}
	for i := range links {
		if text := n.add(LinkID(i)); text != "" {
			faults = append(faults, Problem{LinkID(i), -1, text, ""})
		}
	}
	if len(faults) > 0 {
		return nil, faults
	}
	return n, nil
}

// add enters one link into the graph and says what is wrong with it, or "".
func (n *Network) add(id LinkID) string {
	l := &n.Links[id]
	if l.Name == "" {
		return "a link has no id"
	}
	if first, twice := n.links[l.Name]; twice {
		return fmt.Sprintf("link `%s` stands twice (first as link %d)", l.Name, first+1)
	}
	n.links[l.Name] = id
	for _, end := range []NodeID{l.From, l.To} {
		if end < 0 || int(end) >= len(n.Nodes) {
			return fmt.Sprintf("link `%s` ends at node number %d of %d", l.Name, end+1, len(n.Nodes))
		}
	}
	n.out[l.From] = append(n.out[l.From], id)
	n.in[l.To] = append(n.in[l.To], id)
	switch {
	case !(l.Length > 0) || math.IsInf(l.Length, 0):
		return fmt.Sprintf("link `%s` has length %g m: it must be positive", l.Name, l.Length)
	case !(l.Lanes > 0) || math.IsInf(l.Lanes, 0):
		return fmt.Sprintf("link `%s` has %g lanes: it must have more than 0", l.Name, l.Lanes)
	case l.Diagram == nil:
		return fmt.Sprintf("link `%s` has no fundamental diagram", l.Name)
	}
	return ""
}

// In returns the links that end at a node, in the order of their numbers. The caller must not change it.
func (n *Network) In(id NodeID) []LinkID { return n.in[id] }

// Out returns the links that begin at a node, in the order of their numbers. The caller must not change it.
func (n *Network) Out(id NodeID) []LinkID { return n.out[id] }

// Link finds a link by its name.
func (n *Network) Link(name string) (LinkID, bool) { id, ok := n.links[name]; return id, ok }

// Node finds a node by its name.
func (n *Network) Node(name string) (NodeID, bool) { id, ok := n.nodes[name]; return id, ok }

// IsExit reports whether the link's end node has no way out.
func (n *Network) IsExit(id LinkID) bool { return len(n.out[n.Links[id].To]) == 0 }

// CheckReach returns a Problem for every link that no entry reaches and for every link that reaches no exit.
// A turn that is never taken still counts as a way.
func (n *Network) CheckReach(entries []LinkID) Problems {
	fed := n.spread(entries, func(l LinkID) []LinkID { return n.out[n.Links[l].To] })
	var exits []LinkID
	for i := range n.Links {
		if n.IsExit(LinkID(i)) {
			exits = append(exits, LinkID(i))
		}
	}
	drained := n.spread(exits, func(l LinkID) []LinkID { return n.in[n.Links[l].From] })
	var faults Problems
	for i := range n.Links {
		if !fed[i] {
			faults = append(faults, Problem{LinkID(i), -1, fmt.Sprintf("link `%s` cannot be reached from any entry", n.Links[i].Name), "name an entry upstream of it in the demand, or take the link out"})
		}
		if !drained[i] {
			faults = append(faults, Problem{LinkID(i), -1, fmt.Sprintf("link `%s` does not lead to any exit", n.Links[i].Name), "an exit is a link whose end node has no way out"})
		}
	}
	return faults
}

// spread marks all links found from the first ones by following next.
func (n *Network) spread(first []LinkID, next func(LinkID) []LinkID) []bool {
	seen := make([]bool, len(n.Links))
	todo := append([]LinkID(nil), first...)
	for _, l := range first {
		seen[l] = true
	}
	for len(todo) > 0 {
		l := todo[len(todo)-1]
		todo = todo[:len(todo)-1]
		for _, m := range next(l) {
			if !seen[m] {
				seen[m] = true
				todo = append(todo, m)
			}
		}
	}
	return seen
}
