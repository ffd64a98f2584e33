package diagram

import "fmt"

// piecewiseCurve joins given points (density, flow) by straight lines:
//
//	q = q_i + b_i (k - k_i) for k_i <= k <= k_(i+1),  b_i = (q_(i+1) - q_i)/(k_(i+1) - k_i)
//
// A concave one is the least of its lines, min_i(a_i + b_i k) (Daganzo 1994, section on general piecewise linear
// relations, from memory); here the flow need only rise to one maximum and then fall, and the speed must not rise
// with density. It needs points, from (0, 0) to the jam density.
type piecewiseCurve struct {
	curve
	ks, qs []float64 // of the points
	slopes []float64 // b, of the line that begins at each point but the last
}

func piecewise() Shape {
	return Shape{
		Name:   "piecewise",
		Source: "the user's points; piecewise linear relations: Daganzo 1994",
		Notes:  "need not be concave: where it is not, waves may be compound",
		lacks:  exponent,
		ways:   []way{{points, asGiven}},
		make:   newPiecewise,
	}
}

func newPiecewise(p Params) (Diagram, Params, error) {
	if err := checkPoints(p.Points); err != nil {
		return nil, p, err
	}
	d := &piecewiseCurve{}
	last := len(p.Points) - 1
	for i, point := range p.Points {
		d.ks, d.qs = append(d.ks, point[0]), append(d.qs, point[1])
		if point[1] > d.q {
			d.kc, d.q = point[0], point[1]
		}
		if i < last {
			next := p.Points[i+1]
			d.slopes = append(d.slopes, (next[1]-point[1])/(next[0]-point[0]))
			d.down = max(d.down, -d.slopes[i])
		}
	}
	d.vf, d.kj = d.slopes[0], d.ks[last]
	p.FreeSpeed, p.Capacity, p.CriticalDensity, p.JamDensity, p.WaveSpeed = d.vf, d.q, d.kc, d.kj, -d.slopes[last-1]
	return d, p, nil
}

// checkPoints returns an error for the first point that cannot follow those before it.
func checkPoints(points [][2]float64) error {
	last := len(points) - 1
	if last < 2 {
		return fmt.Errorf("points has %d points: it needs at least three, from (0, 0) to a flow of 0 at the jam density", len(points))
	}
	if points[0] != [2]float64{} {
		return fmt.Errorf("point 1 is %s: the first point must be (0, 0)", sayPoint(points[0]))
	}
	falls := false
	for i := 1; i <= last; i++ {
		at, before := points[i], points[i-1]
		k, q := at[0], at[1]
		switch {
		case k-k != 0 || q-q != 0 || q < 0: // NaN or infinite
			return fmt.Errorf("point %d is %s: densities and flows must be positive and finite", i+1, sayPoint(at))
		case k <= before[0]:
			return fmt.Errorf("point %d is %s: its density must be above that of the point before, %s", i+1, sayPoint(at), sayPoint(before))
		case i == last && q != 0:
			return fmt.Errorf("point %d is %s: the last point must have flow 0 at the jam density", i+1, sayPoint(at))
		case i < last && q == 0:
			return fmt.Errorf("point %d is %s: only the first and the last point have flow 0", i+1, sayPoint(at))
		case falls && q > before[1]:
			return fmt.Errorf("point %d is %s: the flow rises again after it has fallen: it may have only one maximum", i+1, sayPoint(at))
		case i > 1 && q/k > before[1]/before[0]*(1+1e-9): // room for the rounding of equal speeds
			return fmt.Errorf("point %d is %s: its speed of %s is above the %s of the point before: speed must not rise with density",
				i+1, sayPoint(at), say(freeSpeed, q/k), say(freeSpeed, before[1]/before[0]))
		}
		falls = falls || q < before[1]
	}
	return nil
}

func sayPoint(point [2]float64) string {
	return "(" + say(jamDensity, point[0]) + ", " + say(capacity, point[1]) + ")"
}

// Flow implements Diagram.
func (d *piecewiseCurve) Flow(k float64) float64 {
	if d.outside(k) {
		return 0
	}
	return d.at(k)
}

// at looks for the line from the first one: there are few. The first is taken from its beginning and the others from
// their end, so that the flow is 0 at both ends of the road's densities.
func (d *piecewiseCurve) at(k float64) float64 {
	i := 0
	for i < len(d.slopes)-1 && k > d.ks[i+1] {
		i++
	}
	if i == 0 {
		return d.vf * k
	}
	return d.qs[i+1] + d.slopes[i]*(k-d.ks[i+1])
}

// Fill implements Filler.
func (d *piecewiseCurve) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i], receiving[i] = d.split(x, d.at(x))
	}
}
