package diagram

import "fmt"

// triangular is made of two straight lines (Newell 1993, A simplified theory of kinematic waves; Daganzo 1994):
//
//	q = min(vf k, w (kj - k)),  kc = w kj/(vf + w),  Q = vf kc
//
// It needs free_speed, wave_speed and jam_density.
func triangular() Shape {
	return Shape{
		Name:   "triangular",
		Source: "Newell 1993; Daganzo 1994",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | capacity | jamDensity, fromPeak},
			{freeSpeed | capacity | waveSpeed, fromPeak},
			{freeSpeed | jamDensity | waveSpeed, fromPeak},
			{freeSpeed | criticalDensity | jamDensity, fromPeak},
			{freeSpeed | criticalDensity | waveSpeed, fromPeak},
			{capacity | criticalDensity | jamDensity, fromPeak},
			{capacity | criticalDensity | waveSpeed, fromPeak},
		},
		make: newTriangular,
	}
}

// fromPeak finds the third side of a triangle: the peak (kc, Q) from the free branch, then the congested branch
// through the peak and whichever of jam density and wave speed is given.
func fromPeak(p Params) (Params, error) {
	switch {
	case p.FreeSpeed == 0:
		p.FreeSpeed = p.Capacity / p.CriticalDensity
	case p.CriticalDensity != 0:
		p.Capacity = p.FreeSpeed * p.CriticalDensity
	case p.Capacity != 0:
		p.CriticalDensity = p.Capacity / p.FreeSpeed
	}
	switch {
	case p.JamDensity == 0:
		p.JamDensity = p.CriticalDensity + p.Capacity/p.WaveSpeed
	case p.WaveSpeed == 0:
		if p.CriticalDensity >= p.JamDensity {
			return p, fmt.Errorf("the capacity is reached at %s, which is not below the jam_density of %s",
				say(criticalDensity, p.CriticalDensity), say(jamDensity, p.JamDensity))
		}
		p.WaveSpeed = p.Capacity / (p.JamDensity - p.CriticalDensity)
	}
	return p, nil
}

func newTriangular(p Params) (Diagram, Params, error) {
	p.Capacity = tip(p.FreeSpeed, p.WaveSpeed, p.JamDensity)
	p.CriticalDensity = p.Capacity / p.FreeSpeed
	return linear{p.FreeSpeed, p.Capacity, p.WaveSpeed, p.JamDensity}, p, nil
}
