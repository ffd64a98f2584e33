package diagram

import (
	"fmt"
	"math"
)

// pipesMunjalCurve is the power speed-density relation (Pipes 1967, Car following models and the fundamental diagram
// of road traffic; Munjal and Pipes 1971):
//
//	v = vf (1 - (k/kj)^n),  kc = kj (1+n)^(-1/n),  Q = vf kc n/(1+n)
//	dq/dk = vf (1 - (n+1) (k/kj)^n),  w = n vf
//
// n = 1 is `greenshields`, n + 1/2 in its place is Drew's (1968). For n > 1 waves in standing traffic outrun the free
// speed. It needs free_speed, jam_density and exponent.
type pipesMunjalCurve struct {
	curve
	n float64
}

// leastExponent and mostExponent bound the exponents that are accepted and solved for.
const leastExponent, mostExponent = 0.01, 1000.0

func pipesMunjal() Shape {
	return Shape{
		Name:   "pipes-munjal",
		Source: "Pipes 1967; Munjal and Pipes 1971",
		Notes:  "the wave speed in standing traffic is exponent times free speed: above 1 it is faster than any vehicle and shortens the time step",
		lacks:  points,
		ways: []way{
			{freeSpeed | jamDensity | exponent, asGiven},
			{freeSpeed | jamDensity | waveSpeed, func(p Params) (Params, error) {
				p.Exponent = p.WaveSpeed / p.FreeSpeed
				return p, nil
			}},
			{freeSpeed | criticalDensity | jamDensity, func(p Params) (Params, error) {
				return solveExponent(p, criticalDensity, p.CriticalDensity, p.JamDensity, pipesMunjalCritical)
			}},
			{freeSpeed | capacity | jamDensity, func(p Params) (Params, error) {
				return solveExponent(p, capacity, p.Capacity, p.FreeSpeed*p.JamDensity, func(n float64) float64 {
					return pipesMunjalCritical(n) * n / (1 + n)
				})
			}},
		},
		make: newPipesMunjal,
	}
}

// pipesMunjalCritical is kc/kj.
func pipesMunjalCritical(n float64) float64 { return math.Pow(1+n, -1/n) }

// solveExponent finds the exponent n with unit*f(n) = x, where f rises with n.
func solveExponent(p Params, key keys, x, unit float64, f func(n float64) float64) (Params, error) {
	lo, hi := unit*f(leastExponent), unit*f(mostExponent)
	if !(x >= lo && x <= hi) {
		return p, fmt.Errorf("%s is %s: with the other parameters it must lie between %s and %s", key, say(key, x), say(key, lo), say(key, hi))
	}
	_, p.Exponent = bisect(leastExponent, mostExponent, func(n float64) bool { return unit*f(n) >= x })
	return p, nil
}

// checkExponent returns an error for an exponent out of bounds.
func checkExponent(n float64) error {
	if n < leastExponent || n > mostExponent {
		return fmt.Errorf("exponent is %s: it must lie between %v and %v", number(n), leastExponent, mostExponent)
	}
	return nil
}

func newPipesMunjal(p Params) (Diagram, Params, error) {
	n := p.Exponent
	if err := checkExponent(n); err != nil {
		return nil, p, err
	}
	p.CriticalDensity = p.JamDensity * pipesMunjalCritical(n)
	p.Capacity = p.FreeSpeed * p.CriticalDensity * n / (1 + n)
	p.WaveSpeed = n * p.FreeSpeed
	c := curve{p.FreeSpeed, p.Capacity, p.CriticalDensity, p.JamDensity, p.WaveSpeed}
	return &pipesMunjalCurve{c, n}, p, nil
}

// Flow implements Diagram.
func (d *pipesMunjalCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

// at takes the power by way of the logarithm, at a third of math.Pow's cost.
func (d *pipesMunjalCurve) at(k float64) float64 {
	return d.vf * k * (1 - math.Exp(d.n*math.Log(k/d.kj)))
}

// Fill implements Filler.
func (d *pipesMunjalCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		x = max(0, x)
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
