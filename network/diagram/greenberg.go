package diagram

import (
	"fmt"
	"math"
)

// greenbergCurve is the logarithmic speed-density relation (Greenberg 1959, An analysis of traffic flow), capped at
// the free speed:
//
//	v = min(vf, c ln(kj/k)),  dq/dk = vf, then c (ln(kj/k) - 1)
//	vf >  c:  kc = kj/e,            Q = c kj/e
//	vf <= c:  kc = kj exp(-vf/c),   Q = vf kc   (the corner)
//
// c is the wave speed in standing traffic. Without the cap the wave speed of the empty road is infinite and no time
// step is short enough. It needs free_speed, wave_speed and jam_density.
type greenbergCurve struct {
	curve
	c float64 // m/s
}

func greenberg() Shape {
	return Shape{
		Name:   "greenberg",
		Source: "Greenberg 1959; the cap at the free speed is common practice",
		Notes:  "free_speed is always required: uncapped, speed and wave speed of the empty road are infinite",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | jamDensity | waveSpeed, asGiven},
			{freeSpeed | criticalDensity | waveSpeed, greenbergJam},
			{freeSpeed | capacity | waveSpeed, greenbergJam},
			{freeSpeed | capacity | jamDensity, greenbergWave},
			{freeSpeed | capacity | criticalDensity, greenbergRound},
		},
		make: newGreenberg,
	}
}

// greenbergJam finds the jam density from the wave speed and the critical density or the capacity.
func greenbergJam(p Params) (Params, error) {
	vf, c := p.FreeSpeed, p.WaveSpeed
	if p.CriticalDensity == 0 {
		p.CriticalDensity = p.Capacity / min(vf, c)
	}
	p.JamDensity = p.CriticalDensity * math.Exp(min(1, vf/c))
	return p, nil
}

// greenbergWave finds the wave speed from the capacity and the jam density.
func greenbergWave(p Params) (Params, error) {
	vf, kj, q := p.FreeSpeed, p.JamDensity, p.Capacity
	switch {
	case q >= vf*kj:
		return p, fmt.Errorf("capacity is %s: with this free_speed and jam_density it must be below %s", say(capacity, q), say(capacity, vf*kj))
	case q < vf*kj/math.E:
		p.WaveSpeed = math.E * q / kj
	default:
		p.WaveSpeed = vf / math.Log(vf*kj/q)
	}
	return p, nil
}

// greenbergRound finds the other two where the peak is on the logarithm; at a corner they do not follow.
func greenbergRound(p Params) (Params, error) {
	c := p.Capacity / p.CriticalDensity
	if c >= p.FreeSpeed {
		return p, fmt.Errorf("speed at capacity is %s, which is not below the free_speed: give jam_density or wave_speed too", say(freeSpeed, c))
	}
	p.WaveSpeed, p.JamDensity = c, math.E*p.CriticalDensity
	return p, nil
}

func newGreenberg(p Params) (Diagram, Params, error) {
	vf, c, kj := p.FreeSpeed, p.WaveSpeed, p.JamDensity
	p.CriticalDensity = kj * math.Exp(-min(1, vf/c))
	p.Capacity = min(vf, c) * p.CriticalDensity
	return &greenbergCurve{curve{vf, p.Capacity, p.CriticalDensity, kj, c}, c}, p, nil
}

// Flow implements Diagram.
func (d *greenbergCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *greenbergCurve) at(k float64) float64 { return k * min(d.vf, d.c*math.Log(d.kj/k)) }

// Fill implements Filler.
func (d *greenbergCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		x = max(0, x)
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
