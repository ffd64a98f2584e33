package diagram

import "fmt"

// quadraticLinearCurve is a parabola up to a density kb with speed vb, and a straight line beyond it. It generalises
// Smulders (1990) by a free choice of vb:
//
//	k <= kb:  v = vf - (vf - vb) k/kb,  dq/dk = vf - 2 (vf - vb) k/kb
//	k >  kb:  q = w (kj - k),  w = kb vb/(kj - kb)
//	vb >= vf/2:  kc = kb,                     Q = kb vb
//	vb <  vf/2:  kc = kb vf/(2 (vf - vb)),    Q = vf kc/2
//
// kb and kb vb are what the parameters critical_density and capacity give. It needs free_speed, capacity,
// critical_density and jam_density.
type quadraticLinearCurve struct {
	curve
	kb, bend, w float64 // bend is (vf - vb)/kb
}

func quadraticLinear() Shape {
	return Shape{
		Name:   "quadratic-linear",
		Source: "Smulders 1990, generalised",
		Notes:  "with a speed at capacity below half the free speed the largest flow lies below critical_density and above capacity; not concave where the parabola meets the line more steeply than the wave speed",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | capacity | criticalDensity | jamDensity, asGiven},
			{freeSpeed | capacity | criticalDensity | waveSpeed, func(p Params) (Params, error) {
				p.JamDensity = p.CriticalDensity + p.Capacity/p.WaveSpeed
				return p, nil
			}},
			{freeSpeed | capacity | jamDensity | waveSpeed, func(p Params) (Params, error) {
				p.CriticalDensity = p.JamDensity - p.Capacity/p.WaveSpeed
				if p.CriticalDensity <= 0 {
					return p, fmt.Errorf("capacity is %s, above the %s that wave_speed and jam_density allow", say(capacity, p.Capacity), say(capacity, p.WaveSpeed*p.JamDensity))
				}
				return p, nil
			}},
			{freeSpeed | criticalDensity | jamDensity | waveSpeed, func(p Params) (Params, error) {
				p.Capacity = p.WaveSpeed * (p.JamDensity - p.CriticalDensity)
				return p, nil
			}},
		},
		make: newQuadraticLinear,
	}
}

func newQuadraticLinear(p Params) (Diagram, Params, error) {
	vf, kb, kj := p.FreeSpeed, p.CriticalDensity, p.JamDensity
	if kb >= kj {
		return nil, p, belowJam(p)
	}
	vb := p.Capacity / kb
	if vb > vf*(1+tolerance) {
		return nil, p, tooFast(p)
	}
	vb = min(vb, vf)
	p.WaveSpeed = kb * vb / (kj - kb)
	kc, q := kb, kb*vb
	if vb < vf/2 {
		kc = kb * vf / (2 * (vf - vb))
		q = vf * kc / 2
	}
	c := curve{vf, q, kc, kj, max(p.WaveSpeed, vf-2*vb)}
	return &quadraticLinearCurve{c, kb, (vf - vb) / kb, p.WaveSpeed}, p, nil
}

// tooFast is the error for a speed at capacity above the free speed.
func tooFast(p Params) error {
	return fmt.Errorf("speed at capacity (capacity/critical_density) is %s: it must be below the free_speed of %s",
		say(freeSpeed, p.Capacity/p.CriticalDensity), say(freeSpeed, p.FreeSpeed))
}

// Flow implements Diagram.
func (d *quadraticLinearCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *quadraticLinearCurve) at(k float64) float64 {
	if k <= d.kb {
		return k * (d.vf - d.bend*k)
	}
	return d.w * (d.kj - k)
}

// Fill implements Filler.
func (d *quadraticLinearCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
