// Package exact holds closed-form answers of kinematic-wave theory, for the tests of other packages: Riemann
// problems on one road and across a change of lanes, point queues, spatial queues by wave tracking, queues at a stop
// line, and cumulative counts by the three-detector formula.
//
// Nothing here steps through cells or time, and the two shapes that have closed forms, [Triangular] and
// [Greenshields], are written out here again on purpose: an answer should not stand on the code that it checks.
//
// Units are metres, seconds and vehicles. Every formula is homogeneous, so any one consistent set, such as
// kilometres and hours, does as well.
package exact
