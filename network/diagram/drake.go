package diagram

import "math"

// drakeCurve is the bell-shaped speed-density relation (Drake, Schofer and May 1967, A statistical analysis of speed
// density hypotheses):
//
//	v = vf exp(-(k/k0)^2/2),  kc = k0,  Q = vf k0 e^(-1/2),  dq/dk = vf exp(-(k/k0)^2/2) (1 - (k/k0)^2)
//
// Its flow never falls to zero: there is no jam density. Beyond sqrt(3) k0 it is convex; the largest upstream wave
// speed, 2 e^(-3/2) vf, is there. It needs free_speed and critical_density.
type drakeCurve struct{ curve }

func drake() Shape {
	return Shape{
		Name:   "drake",
		Source: "Drake, Schofer and May 1967",
		Notes:  boundless + "; not concave beyond 1.73 times the critical density",
		lacks:  jamDensity | waveSpeed | exponent | points,
		ways: []way{
			{freeSpeed | criticalDensity, asGiven},
			{freeSpeed | capacity, func(p Params) (Params, error) {
				p.CriticalDensity = math.Exp(0.5) * p.Capacity / p.FreeSpeed
				return p, nil
			}},
		},
		make: newDrake,
	}
}

func newDrake(p Params) (Diagram, Params, error) {
	p.Capacity = p.FreeSpeed * p.CriticalDensity * math.Exp(-0.5)
	return &drakeCurve{curve{p.FreeSpeed, p.Capacity, p.CriticalDensity, math.Inf(1), 2 * math.Exp(-1.5) * p.FreeSpeed}}, p, nil
}

// Flow implements Diagram.
func (d *drakeCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *drakeCurve) at(k float64) float64 {
	x := k / d.kc
	return d.vf * k * math.Exp(-x*x/2)
}

// Fill implements Filler.
func (d *drakeCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
