package diagram

import (
	"math"
)

// underwoodCurve is the exponential speed-density relation (Underwood 1961, Speed, volume and density relationships):
//
//	v = vf exp(-k/k0),  kc = k0,  Q = vf k0/e,  dq/dk = vf exp(-k/k0) (1 - k/k0)
//
// Its flow never falls to zero: there is no jam density. Beyond 2 k0 it is convex; the largest upstream wave speed,
// vf/e^2, is there. It needs free_speed and critical_density.
type underwoodCurve struct{ curve }

// boundless is the note on shapes without a jam density.
const boundless = "it has no jam density: a stopped queue keeps taking in vehicles, storage is not bounded and queues come out too short"

func underwood() Shape {
	return Shape{
		Name:   "underwood",
		Source: "Underwood 1961",
		Notes:  boundless + "; not concave beyond twice the critical density",
		lacks:  jamDensity | waveSpeed | exponent | points,
		ways: []way{
			{freeSpeed | criticalDensity, asGiven},
			{freeSpeed | capacity, func(p Params) (Params, error) {
				p.CriticalDensity = math.E * p.Capacity / p.FreeSpeed
				return p, nil
			}},
		},
		make: newUnderwood,
	}
}

func newUnderwood(p Params) (Diagram, Params, error) {
	p.Capacity = p.FreeSpeed * p.CriticalDensity / math.E
	return &underwoodCurve{curve{p.FreeSpeed, p.Capacity, p.CriticalDensity, math.Inf(1), p.FreeSpeed / (math.E * math.E)}}, p, nil
}

// Flow implements Diagram.
func (d *underwoodCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *underwoodCurve) at(k float64) float64 { return d.vf * k * math.Exp(-k/d.kc) }

// Fill implements Filler.
func (d *underwoodCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
