package diagram

import "fmt"

// trapezoidal is a triangle cut off at a capacity (Daganzo 1994, The cell transmission model, eq. 5):
//
//	q = min(vf k, Q, w (kj - k)),  kc = Q/vf,  Q <= vf w kj/(vf + w)
//
// The critical density is where the plateau begins. It needs free_speed, capacity, jam_density and wave_speed.
func trapezoidal() Shape {
	return Shape{
		Name:   "trapezoidal",
		Source: "Daganzo 1994",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | capacity | jamDensity | waveSpeed, asGiven},
			{freeSpeed | criticalDensity | jamDensity | waveSpeed, func(p Params) (Params, error) {
				p.Capacity = p.FreeSpeed * p.CriticalDensity
				return p, nil
			}},
		},
		make: newTrapezoidal,
	}
}

// asGiven is the way of a set that holds all that its maker needs.
func asGiven(p Params) (Params, error) { return p, nil }

func newTrapezoidal(p Params) (Diagram, Params, error) {
	top := tip(p.FreeSpeed, p.WaveSpeed, p.JamDensity)
	if p.Capacity > top*(1+tolerance) {
		return nil, p, fmt.Errorf("capacity is %s, above the %s at which its free branch and its congested branch meet",
			say(capacity, p.Capacity), say(capacity, top))
	}
	p.Capacity = min(p.Capacity, top)
	p.CriticalDensity = p.Capacity / p.FreeSpeed
	return linear{p.FreeSpeed, p.Capacity, p.WaveSpeed, p.JamDensity}, p, nil
}
