// Package measure holds what an operator can change: lane closures, incidents, speed limits, ramp meters, closed
// ramps. One file per measure, each with its source; a work zone's capacity by the published methods stands in
// workzone.go.
//
//  1. a reader fills a measure's fields (metres, seconds, vehicles) and calls its Check against the network;
//  2. Cuts says where the road must be cut into segments, so that the base and every alternative stand on one
//     grid;
//  3. a run asks Times once and calls Apply at those moments; Apply tightens the limits of segments or link ends
//     and never touches what is on the road;
//  4. Text describes the measure in one line for every report.
//
// Where measures overlap in time and place, the tightest wins, value by value: the most lanes taken, the lowest
// capacity, discharge and speed, the largest share of capacity lost, the lowest flow out of a link. Lanes taken do
// not add up, so that a taper and a work space may be described as two closures of the same lane.
package measure
