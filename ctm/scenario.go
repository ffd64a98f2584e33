package ctm

import (
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// Horizon says when and how finely to compute.
type Horizon struct {
	Start, End float64 // s after midnight of the first day
	Report     float64 // s, length of a result row; default 300
	Cell       float64 // m, target cell length; default 100 where Step is not given
	Step       float64 // s, target step; 0 means from Cell
	Stretch    bool    // lengthen links shorter than one cell to one cell
}

// Rule names how the approaches of a node share what lies beyond.
type Rule int

// The two junction rules.
const (
	FIFO       Rule = iota // first in, first out: a blocked exit holds back everyone behind
	ByMovement             // a blocked exit holds back only its own movement
)

// Junction overrides what happens at a node.
type Junction struct {
	Node     network.NodeID
	Priority map[network.LinkID]float64 // merge priority of approaches; default their capacities
	Rule     Rule
}

// Outflow limits what may leave at an exit, because a queue comes in from outside.
type Outflow struct {
	Link network.LinkID
	Flow demand.Profile // veh/s (passenger cars where classes have equivalents)
}

// Cut is a place where a segment must begin or end, because some measure does.
type Cut struct {
	Link network.LinkID
	At   float64 // m from the link's start
}

// Scenario is one thing to compute: a road, its demand, its rules and what is done to it.
type Scenario struct {
	Name      string
	Title     string
	Network   *network.Network
	Demand    *demand.Demand
	Horizon   Horizon
	Junctions []Junction
	Outflows  []Outflow
	Measures  []Measure
	// Cuts holds the places of all measures of the study, so that the base and every alternative stand on the
	// same grid.
	Cuts      []Cut
	Corridors []network.Corridor
}

// Measure is what an operator can change. It acts through limits, never on densities.
type Measure interface {
	// Times lists the moments (s after midnight) at which Apply could change its answer.
	Times() []float64
	// Apply tightens the limits in force from the view's time on. Limits start from the base each time.
	Apply(v View, lim *Limits)
}

// Observer is what may only look. Slices that a View hands out are valid until Observe returns.
type Observer interface {
	Observe(v View) error
}

// Watch is an observer and how often it looks: at every Every-th step, the first state and the last one
// included.
type Watch struct {
	Every    int // steps, at least 1
	Observer Observer
}
