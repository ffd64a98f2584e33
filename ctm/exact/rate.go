package exact

import "math"

// Step begins a stretch of time with one flow.
type Step struct {
	At   float64 // s
	Flow float64 // veh/s, >= 0, from At until the next step
}

// Rate is a flow that is constant between steps, which are in ascending order of time; it is 0 before the first and
// that of the last for ever after.
type Rate []Step

// At is the flow at time t in veh/s; at a step it is that which begins.
func (r Rate) At(t float64) float64 {
	flow := 0.0
	for _, s := range r {
		if s.At > t {
			break
		}
		flow = s.Flow
	}
	return flow
}

// Until is the number of vehicles up to time t, counted from the first step.
func (r Rate) Until(t float64) float64 {
	n := 0.0
	for i, s := range r {
		if s.At >= t {
			break
		}
		end := t
		if i+1 < len(r) {
			end = min(t, r[i+1].At)
		}
		n += s.Flow * (end - s.At)
	}
	return n
}

// Later is the rate some seconds later.
func (r Rate) Later(seconds float64) Rate {
	later := make(Rate, len(r))
	for i, s := range r {
		later[i] = Step{s.At + seconds, s.Flow}
	}
	return later
}

// next is the first step after t, +Inf for none.
func (r Rate) next(t float64) float64 {
	for _, s := range r {
		if s.At > t {
			return s.At
		}
	}
	return math.Inf(1)
}
