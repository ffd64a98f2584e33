// Package diagram holds the fundamental diagrams: how much flow a lane carries at each density.
//
// Each shape stands in one file with its formula and source. New builds one by name from whichever parameters
// determine it; Shapes lists them all. A solver asks a Diagram for whole runs of cells at once with Fill, or sees
// a piecewise-linear one through AsLinear. Limit lowers a diagram to a speed or capacity in force.
//
// All flows and densities are per lane: veh/s and veh/m.
package diagram
