package demand

import (
	"fmt"

	"example.org/tailback/network"
)

// Class is a kind of vehicle. The zero value of a Demand's Classes means one class of passenger cars.
type Class struct {
	Name string
	PCE  float64 // passenger-car equivalent, > 0
}

// ClassID numbers the classes of a Demand from 0.
type ClassID int

// AllClasses stands for every class where one could be named.
const AllClasses ClassID = -1

// Entry is traffic that wants to begin at the upstream end of a link.
type Entry struct {
	Link network.LinkID
	Mix  []float64 // share of each class, sums to 1; len(Mix) == number of classes
	Flow Profile   // veh/s, all classes
}

// Turning says which share of what arrives at the end of link From goes on into each link To.
type Turning struct {
	Node  network.NodeID
	From  network.LinkID
	To    []network.LinkID
	Class ClassID // AllClasses or one class; one class wins over all classes
	Start float64 // s, begin of the first row
	Every float64 // s, length of a row; 0 means one row for all time
	// Fractions[row][k] is the share of To[k] in row row; rows sum to 1. The last row holds on.
	Fractions [][]float64
}

// At gives the fractions in force at time t, aligned with To.
func (t *Turning) At(time float64) []float64 { return t.Fractions[t.Row(time)] }

// Row is the index of the row in force at a time: the first before Start, the last after the end.
func (t *Turning) Row(time float64) int {
	if t.Every <= 0 || time < t.Start {
		return 0
	}
	return min(int((time-t.Start)/t.Every+1e-9), len(t.Fractions)-1)
}

// Demand is everything that wants to travel.
type Demand struct {
	Classes  []Class
	Entries  []Entry
	Turnings []Turning
}

// PCE is the passenger-car equivalent of a mix of classes.
func (d *Demand) PCE(mix []float64) float64 {
	sum := 0.0
	for c, share := range mix {
		sum += share * d.Classes[c].PCE
	}
	return sum
}

// EntryLinks lists the links at which traffic begins, in the order of the entries.
func (d *Demand) EntryLinks() []network.LinkID {
	links := make([]network.LinkID, len(d.Entries))
	for i := range d.Entries {
		links[i] = d.Entries[i].Link
	}
	return links
}

// Turns finds turning fractions by approach.
type Turns map[network.LinkID][]*Turning

// Turns indexes the turning fractions.
func (d *Demand) Turns() Turns {
	index := make(Turns, len(d.Turnings))
	for i := range d.Turnings {
		t := &d.Turnings[i]
		index[t.From] = append(index[t.From], t)
	}
	return index
}

// Lookup returns the turning fractions for (from, class): those of the class where given, else those of all
// classes, else nil.
func (t Turns) Lookup(from network.LinkID, class ClassID) *Turning {
	var all *Turning
	for _, turn := range t[from] {
		switch turn.Class {
		case class:
			return turn
		case AllClasses:
			all = turn
		}
	}
	return all
}

// Lookup is Turns().Lookup for a single question.
func (d *Demand) Lookup(from network.LinkID, class ClassID) *Turning {
	index := Turns{}
	for i := range d.Turnings {
		if t := &d.Turnings[i]; t.From == from {
			index[from] = append(index[from], t)
		}
	}
	return index.Lookup(from, class)
}

// CheckTurns returns a fault for every approach of a node with two or more ways out that lacks turning
// fractions for some class.
func (d *Demand) CheckTurns(n *network.Network) network.Problems {
	var faults network.Problems
	turns := d.Turns()
	for i := range n.Nodes {
		ways := len(n.Out(network.NodeID(i)))
		if ways < 2 {
			continue
		}
		for _, from := range n.In(network.NodeID(i)) {
			if d.turnsAll(turns, from) {
				continue
			}
			faults = append(faults, network.Problem{
				Link: from, Node: network.NodeID(i),
				Text: fmt.Sprintf("node `%s` has %d ways out, but no turning fractions say where the traffic of link `%s` goes", n.Nodes[i].Name, ways, n.Links[from].Name),
				Hint: fmt.Sprintf("add [[turning]] with node = %q, from = %q", n.Nodes[i].Name, n.Links[from].Name),
			})
		}
	}
	return faults
}

// turnsAll reports whether every class has turning fractions at the end of a link.
func (d *Demand) turnsAll(turns Turns, from network.LinkID) bool {
	for c := range d.Classes {
		if turns.Lookup(from, ClassID(c)) == nil {
			return false
		}
	}
	return true
}
