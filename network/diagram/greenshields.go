package diagram

// greenshieldsCurve is the linear speed-density relation (Greenshields 1935, A study of traffic capacity):
//
//	v = vf (1 - k/kj),  kc = kj/2,  Q = vf kj/4,  dq/dk = vf (1 - 2 k/kj)
//
// The wave speed in standing traffic is the free speed. It needs free_speed and jam_density.
type greenshieldsCurve struct{ curve }

func greenshields() Shape {
	fromCritical := func(p Params) (Params, error) {
		p.JamDensity = 2 * p.CriticalDensity
		return p, nil
	}
	fromCapacity := func(p Params) (Params, error) {
		switch {
		case p.FreeSpeed != 0:
			p.JamDensity = 4 * p.Capacity / p.FreeSpeed
		case p.JamDensity != 0:
			p.FreeSpeed = 4 * p.Capacity / p.JamDensity
		default:
			p.JamDensity = 2 * p.CriticalDensity
			p.FreeSpeed = 4 * p.Capacity / p.JamDensity
		}
		return p, nil
	}
	return Shape{
		Name:   "greenshields",
		Source: "Greenshields 1935",
		Notes:  "the wave speed in standing traffic equals the free speed, far above what roads show: queues are too short and clear too fast",
		lacks:  exponent | points,
		ways: []way{
			{freeSpeed | jamDensity, asGiven},
			{freeSpeed | criticalDensity, fromCritical},
			{freeSpeed | capacity, fromCapacity},
			{capacity | jamDensity, fromCapacity},
			{capacity | criticalDensity, fromCapacity},
		},
		make: newGreenshields,
	}
}

func newGreenshields(p Params) (Diagram, Params, error) {
	p.Capacity = p.FreeSpeed * p.JamDensity / 4
	p.CriticalDensity = p.JamDensity / 2
	p.WaveSpeed = p.FreeSpeed
	return &greenshieldsCurve{curve{p.FreeSpeed, p.Capacity, p.CriticalDensity, p.JamDensity, p.WaveSpeed}}, p, nil
}

// Flow implements Diagram.
func (d *greenshieldsCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *greenshieldsCurve) at(k float64) float64 { return d.vf * k * (1 - k/d.kj) }

// Fill implements Filler.
func (d *greenshieldsCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
