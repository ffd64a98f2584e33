// Package demand holds what wants to travel: vehicle classes, entries with their flows over time, and turning
// fractions at nodes.
//
//  1. a reader turns counts into a Profile for each Entry (Constant, Steps or Ramped), in vehicles per second;
//  2. CheckTurns says where a node has a choice but nobody said who goes where;
//  3. a run asks each Profile for the vehicles of a step, an exact integral, and each Turning for the fractions
//     in force;
//  4. for an alternative, a Revision scales traffic and moves it from closed links to others, and records every
//     vehicle that it moved, suppressed or added.
//
// Which turns exist is the network's matter; which are taken is this package's.
package demand
