package diagram

import "math"

// delCastillo has two curves, by what is given. From free_speed, jam_density and wave_speed alone it is the
// maximum-sensitivity curve (del Castillo and Benitez 1995, On the functional form of the speed-density
// relationship):
//
//	v = vf (1 - G),  G = exp(1 - E),  E = exp((w/vf) (kj/k - 1)),  dq/dk = vf (1 - G) - w kj G E/k
//
// With an exponent n as well, or with a capacity from which it is solved, it is the negative power curve (del
// Castillo 2012, Three new models for the flow-density relationship), which nears the triangle as n grows:
//
//	q = ((vf k)^-n + (w (kj - k))^-n)^(-1/n),  kc = kj/(1 + (vf/w)^(n/(n+1)))
//
// In both vf and -w are the wave speeds of the empty road and of standing traffic.
func delCastillo() Shape {
	return Shape{
		Name:   "del-castillo",
		Source: "del Castillo and Benitez 1995, maximum-sensitivity curve; with exponent or capacity: del Castillo 2012, negative power curve",
		Notes:  "two curves: the one of 1995 where neither exponent nor capacity is given, else the one of 2012",
		lacks:  points,
		ways: []way{
			{freeSpeed | jamDensity | waveSpeed | exponent, asGiven},
			{freeSpeed | capacity | jamDensity | waveSpeed, func(p Params) (Params, error) {
				return solveExponent(p, capacity, p.Capacity, 1, func(n float64) float64 {
					q := newNegativePower(p, n)
					return q.at(q.kc)
				})
			}},
			{freeSpeed | jamDensity | waveSpeed, asGiven},
		},
		make: newDelCastillo,
	}
}

func newDelCastillo(p Params) (Diagram, Params, error) {
	if p.Exponent == 0 {
		d := newMaxSensitivity(p)
		p.Capacity, p.CriticalDensity = d.q, d.kc
		return d, p, nil
	}
	if err := checkExponent(p.Exponent); err != nil {
		return nil, p, err
	}
	d := newNegativePower(p, p.Exponent)
	p.Capacity, p.CriticalDensity = d.q, d.kc
	return d, p, nil
}

// maxSensitivityCurve is the curve of 1995.
type maxSensitivityCurve struct {
	curve
	a, b float64 // E = exp(a/k - b): a = w kj/vf, b = a/kj
}

func newMaxSensitivity(p Params) *maxSensitivityCurve {
	a := p.WaveSpeed * p.JamDensity / p.FreeSpeed
	d := &maxSensitivityCurve{curve{vf: p.FreeSpeed, kj: p.JamDensity, down: p.WaveSpeed}, a, a / p.JamDensity}
	d.kc, _ = bisect(0, d.kj, func(k float64) bool {
		e := math.Exp(d.a/k - d.b)
		g := math.Exp(1 - e)
		return 1-g < g*e*d.a/k // false for the 0 times infinity of small k
	})
	d.q = d.at(d.kc)
	return d
}

// Flow implements Diagram.
func (d *maxSensitivityCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

func (d *maxSensitivityCurve) at(k float64) float64 {
	return d.vf * k * (1 - math.Exp(1-math.Exp(d.a/k-d.b)))
}

// Fill implements Filler.
func (d *maxSensitivityCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		x = max(0, x)
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}

// negativePowerCurve is the curve of 2012.
type negativePowerCurve struct {
	curve
	n, inverse float64 // exponent and 1/n
}

func newNegativePower(p Params, n float64) *negativePowerCurve {
	vf, w, kj := p.FreeSpeed, p.WaveSpeed, p.JamDensity
	kc := kj / (1 + math.Pow(vf/w, n/(n+1)))
	d := &negativePowerCurve{curve{vf: vf, kc: kc, kj: kj, down: w}, n, 1 / n}
	d.q = d.at(kc)
	return d
}

// Flow implements Diagram.
func (d *negativePowerCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

// at divides both branches by the lower one, so that no power overflows.
func (d *negativePowerCurve) at(k float64) float64 {
	free, jammed := d.vf*k, max(0, d.down*(d.kj-k))
	low, high := min(free, jammed), max(free, jammed)
	power := d.n * math.Log(low/high)
	if power < -37 { // exp(-37) < 2^-53: it is lost in 1 + exp(power)
		return low
	}
	return low * math.Exp(-d.inverse*math.Log(1+math.Exp(power)))
}

// Fill implements Filler.
func (d *negativePowerCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		x = max(0, x)
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
