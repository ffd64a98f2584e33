package diagram

import "fmt"

// inverseLambdaCurve has a free branch that reaches above the congested one (Koshi, Iwasaki and Ohkura 1983, Some
// findings and an overview on vehicular flow characteristics):
//
//	q = vf k         for k <= k1 = Q1/vf
//	q = w (kj - k)   for k >  k1
//
// The branches meet at k2 = w kj/(vf + w) <= k1, with Q2 = vf k2 <= Q1. Published, both flows exist between k2 and
// k1, and which one holds depends on the past. This one has no memory: the flow jumps down at k1. So that the problem
// stays well-posed, what leaves a queue is Q2:
//
//	sending   = vf k for k <= k1, Q2 beyond
//	receiving = Q1 for k <= k1, w (kj - k) beyond
//
// It needs free_speed, capacity (Q1), jam_density and wave_speed.
type inverseLambdaCurve struct {
	curve
	q2 float64 // flow out of a queue, veh/s
}

func inverseLambda() Shape {
	return Shape{
		Name:   "inverse-lambda",
		Source: "Koshi, Iwasaki and Ohkura 1983",
		Notes:  "the flow jumps at the critical density: a queue discharges where the two branches meet, below capacity, and results near the jump depend on the cell length; other shapes with discharge_drop do not have this fault",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | capacity | jamDensity | waveSpeed, asGiven},
			{freeSpeed | criticalDensity | jamDensity | waveSpeed, func(p Params) (Params, error) {
				p.Capacity = p.FreeSpeed * p.CriticalDensity
				return p, nil
			}},
		},
		make: newInverseLambda,
	}
}

func newInverseLambda(p Params) (Diagram, Params, error) {
	vf, w, kj := p.FreeSpeed, p.WaveSpeed, p.JamDensity
	q2 := tip(vf, w, kj)
	if p.Capacity < q2*(1-tolerance) || p.Capacity >= vf*kj {
		return nil, p, fmt.Errorf("capacity is %s: it must lie between the %s at which the branches meet and %s",
			say(capacity, p.Capacity), say(capacity, q2), say(capacity, vf*kj))
	}
	p.Capacity = max(p.Capacity, q2)
	p.CriticalDensity = p.Capacity / vf
	return &inverseLambdaCurve{curve{vf, p.Capacity, p.CriticalDensity, kj, w}, q2}, p, nil
}

// Flow implements Diagram.
func (d *inverseLambdaCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	if k <= d.kc {
		return d.vf * k
	}
	return d.down * (d.kj - k)
}

// Fill implements Filler.
func (d *inverseLambdaCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		if x <= d.kc {
			sending[i], receiving[i] = max(0, d.vf*x), d.q
		} else {
			sending[i], receiving[i] = d.q2, max(0, d.down*(d.kj-x))
		}
	}
}
