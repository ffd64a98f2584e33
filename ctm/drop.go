package ctm

// dropBand is how far above the critical density (as a share of it) a cell must be to count as queued for
// the capacity drop. It is well above round-off and well below the density of any standing queue.
const dropBand = 1e-3

// dropSite is a place where the head of a queue can stand, because more can arrive than fits beyond. While a
// queue stands before it, it discharges less than its capacity: flow <= (1-drop) capacity, from the queue's
// onset until no approach is queued any more. (A node switch with hysteresis; Jin, Gan & Lebacque 2015,
// Transportation Research B 81, with the memory of Srivastava & Geroliminis 2013.) The diagram itself stays
// continuous.
type dropSite struct {
	drop     float64 // share of capacity lost, 0 where the place is no bottleneck
	capacity float64 // pc per step
	active   bool
}

// set renews the site from the capacities (pc per step) of what can arrive and of what lies beyond.
func (d *dropSite) set(wanted, capacity, drop float64) {
	if wanted <= capacity*(1+1e-9) {
		drop = 0
	}
	d.drop, d.capacity = drop, capacity
	d.active = d.active && drop > 0
}

// limit is what the place beyond takes, given its receiving flow.
func (d *dropSite) limit(receiving float64) float64 {
	if d.active {
		return min(receiving, (1-d.drop)*d.capacity)
	}
	return receiving
}

// update switches the drop on where a queue stands before the place, the road beyond is free and the place is
// what binds; and off when the queue has gone or another one has come from beyond.
func (d *dropSite) update(queuedBefore, queuedBeyond, binding bool) {
	switch {
	case d.active:
		d.active = queuedBefore && !queuedBeyond
	case queuedBefore && !queuedBeyond && binding:
		d.active = true
	}
}
