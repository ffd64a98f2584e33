package diagram

import (
	"fmt"
	"math"
)

// newellFranklinCurve is the exponential relation of Newell (1961, Nonlinear effects in the dynamics of car following)
// and Franklin (1961); del Castillo and Benitez (1995) derive it too, as their exponential curve:
//
//	v = vf (1 - E),  E = exp(-(w kj/vf) (1/k - 1/kj)),  dq/dk = vf (1 - E (1 + w kj/(vf k)))
//
// With z the positive root of z - ln(1+z) = w/vf:
//
//	kc = w kj/(vf z),  Q = w kj/(1+z),  vc = vf z/(1+z)
//
// (z = -1 - W(-exp(-1-w/vf)) on the lower branch of Lambert's function). It needs free_speed, jam_density and
// wave_speed.
type newellFranklinCurve struct {
	curve
	a, b float64 // E = exp(b - a/k): a = w kj/vf, b = a/kj
}

func newellFranklin() Shape {
	return Shape{
		Name:   "newell-franklin",
		Source: "Newell 1961; Franklin 1961; del Castillo and Benitez 1995, exponential curve",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | jamDensity | waveSpeed, asGiven},
			{freeSpeed | capacity | jamDensity, func(p Params) (Params, error) {
				// Q/(vf kj) = (z - ln(1+z))/(1+z)
				return newellFranklinWave(p, capacity, p.Capacity, p.FreeSpeed*p.JamDensity, func(z float64) float64 { return 1 + z })
			}},
			{freeSpeed | criticalDensity | jamDensity, func(p Params) (Params, error) {
				// kc/kj = (z - ln(1+z))/z
				return newellFranklinWave(p, criticalDensity, p.CriticalDensity, p.JamDensity, func(z float64) float64 { return z })
			}},
		},
		make: newNewellFranklin,
	}
}

// newellFranklinWave finds w = vf (z - ln(1+z)) from x = unit (z - ln(1+z))/below(z), whose right side rises from 0
// to unit with z.
func newellFranklinWave(p Params, key keys, x, unit float64, below func(z float64) float64) (Params, error) {
	const most = 1e4 // of z
	if top := unit * excess(most) / below(most); x >= top {
		return p, fmt.Errorf("%s is %s: with the other parameters it must be below %s", key, say(key, x), say(key, top))
	}
	_, z := bisect(0, most, func(z float64) bool { return unit*excess(z)/below(z) >= x })
	p.WaveSpeed = p.FreeSpeed * excess(z)
	return p, nil
}

// excess is z - ln(1+z).
func excess(z float64) float64 { return z - math.Log1p(z) }

func newNewellFranklin(p Params) (Diagram, Params, error) {
	vf, w, kj := p.FreeSpeed, p.WaveSpeed, p.JamDensity
	r := w / vf
	// z - ln(1+z) >= r where z = r + 2 sqrt(r) + 1, and <= r where z = r.
	_, z := bisect(r, r+2*math.Sqrt(r)+1, func(z float64) bool { return excess(z) >= r })
	p.CriticalDensity = r * kj / z
	p.Capacity = w * kj / (1 + z)
	a := r * kj
	return &newellFranklinCurve{curve{vf, p.Capacity, p.CriticalDensity, kj, w}, a, a / kj}, p, nil
}

// Flow implements Diagram.
func (d *newellFranklinCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *newellFranklinCurve) at(k float64) float64 { return d.vf * k * (1 - math.Exp(d.b-d.a/k)) }

// Fill implements Filler.
func (d *newellFranklinCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		x = max(0, x)
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
