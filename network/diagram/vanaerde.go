package diagram

import (
	"fmt"
	"math"
)

// vanAerdeCurve is the four-parameter relation of Van Aerde (1995) and Van Aerde and Rakha (1995, Multivariate
// calibration of single regime speed-flow-density relationships):
//
//	1/k = c1 + c2/(vf - v) + c3 v
//	m = (2 vc - vf)/(vf - vc)^2,  c2 = 1/(kj (m + 1/vf)),  c1 = m c2,  c3 = (vc/Q - c1 - c2/(vf - vc))/vc
//	dq/dk at kj = -1/(kj (c2/vf^2 + c3))
//
// with vc = Q/kc, vf/2 <= vc < vf and c3 > 0. Solved for the speed, with b = 1 + k (c3 vf - c1) and
// c = vf (1 - k/kj), the root that loses no digits at small k is
//
//	v = 2 c/(b + sqrt(b^2 - 4 c3 k c))
//
// dq/dk = v - h/h' with h(v) = 1/k rises with v, since h is convex: the curve is concave. It needs free_speed, capacity,
// critical_density and jam_density.
type vanAerdeCurve struct {
	curve
	c3, rise float64 // rise = c3 vf - c1
}

func vanAerde() Shape {
	return Shape{
		Name:   "van-aerde",
		Source: "Van Aerde 1995; Van Aerde and Rakha 1995",
		Notes:  "the speed at capacity must lie between half the free speed and the free speed",
		lacks:  exponent | points,
		ways:   []way{{freeSpeed | capacity | criticalDensity | jamDensity, asGiven}},
		make:   newVanAerde,
	}
}

func newVanAerde(p Params) (Diagram, Params, error) {
	vf, q, kc, kj := p.FreeSpeed, p.Capacity, p.CriticalDensity, p.JamDensity
	vc := q / kc
	if vc >= vf {
		return nil, p, tooFast(p)
	}
	if vc < vf/2*(1-1e-9) { // room for the rounding of exactly one half
		return nil, p, fmt.Errorf("speed at capacity (capacity/critical_density) is %s: it must be at least half the free_speed, %s", say(freeSpeed, vc), say(freeSpeed, vf/2))
	}
	m := max(0, (2*vc-vf)/((vf-vc)*(vf-vc)))
	c2 := 1 / (kj * (m + 1/vf))
	c1 := m * c2
	c3 := (vc/q - c1 - c2/(vf-vc)) / vc
	if !(c3 > 0) {
		least := q / vc * (m + 1/(vf-vc)) / (m + 1/vf)
		return nil, p, fmt.Errorf("jam_density is %s: with the other parameters it must be above %s", say(jamDensity, kj), say(jamDensity, least))
	}
	p.WaveSpeed = 1 / (kj * (c2/(vf*vf) + c3))
	return &vanAerdeCurve{curve{vf, q, kc, kj, p.WaveSpeed}, c3, c3*vf - c1}, p, nil
}

// Flow implements Diagram.
func (d *vanAerdeCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *vanAerdeCurve) at(k float64) float64 {
	b, c := 1+k*d.rise, d.vf*(1-k/d.kj)
	return k * 2 * c / (b + math.Sqrt(b*b-4*d.c3*k*c))
}

// Fill implements Filler.
func (d *vanAerdeCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
