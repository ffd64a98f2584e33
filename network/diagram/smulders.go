package diagram

import (
	"fmt"
	"math"
)

// smuldersCurve is Greenshields' line up to a density kb and a straight congested branch beyond it (Smulders 1990,
// Control of freeway traffic flow by variable speed signs):
//
//	k <= kb:  v = vf (1 - k/kj)
//	k >  kb:  v = vf kb (1/k - 1/kj), that is q = w (kj - k) with w = vf kb/kj
//	kb <= kj/2:  kc = kb,    Q = vf kb (1 - kb/kj)
//	kb >  kj/2:  kc = kj/2,  Q = vf kj/4
//
// kb is what the parameter critical_density gives. It needs free_speed, critical_density and jam_density.
type smuldersCurve struct {
	curve
	kb float64 // where the branches meet, veh/m
}

func smulders() Shape {
	return Shape{
		Name:   "smulders",
		Source: "Smulders 1990",
		Notes:  "with critical_density above half the jam density the largest flow lies at half the jam density",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | criticalDensity | jamDensity, asGiven},
			{freeSpeed | capacity | jamDensity, smuldersFromCapacity},
			{freeSpeed | jamDensity | waveSpeed, func(p Params) (Params, error) {
				if p.WaveSpeed >= p.FreeSpeed {
					return p, fmt.Errorf("wave_speed is %s: it must be below the free_speed of %s", say(waveSpeed, p.WaveSpeed), say(freeSpeed, p.FreeSpeed))
				}
				p.CriticalDensity = p.JamDensity * p.WaveSpeed / p.FreeSpeed
				return p, nil
			}},
		},
		make: newSmulders,
	}
}

// smuldersFromCapacity solves Q = vf kb (1 - kb/kj) for its smaller root.
func smuldersFromCapacity(p Params) (Params, error) {
	most := p.FreeSpeed * p.JamDensity / 4
	if p.Capacity > most*(1+tolerance) {
		return p, fmt.Errorf("capacity is %s: with this free_speed and jam_density it can be at most %s", say(capacity, p.Capacity), say(capacity, most))
	}
	// kj/2 (1 - sqrt(1-x)) without its loss of digits at small x
	x := min(1, p.Capacity/most)
	p.CriticalDensity = p.JamDensity / 2 * x / (1 + math.Sqrt(1-x))
	return p, nil
}

func newSmulders(p Params) (Diagram, Params, error) {
	vf, kb, kj := p.FreeSpeed, p.CriticalDensity, p.JamDensity
	if kb >= kj {
		return nil, p, belowJam(p)
	}
	p.WaveSpeed = vf * kb / kj // the parabola's steepest fall, vf (2 kb/kj - 1), is less
	kc := min(kb, kj/2)
	p.Capacity = vf * kc * (1 - kc/kj)
	return &smuldersCurve{curve{vf, p.Capacity, kc, kj, p.WaveSpeed}, kb}, p, nil
}

// belowJam is the error for a critical density that is not below the jam density.
func belowJam(p Params) error {
	return fmt.Errorf("critical_density is %s: it must be below the jam_density of %s",
		say(criticalDensity, p.CriticalDensity), say(jamDensity, p.JamDensity))
}

// Flow implements Diagram.
func (d *smuldersCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *smuldersCurve) at(k float64) float64 { return d.vf * min(k, d.kb) * (1 - k/d.kj) }

// Fill implements Filler.
func (d *smuldersCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
