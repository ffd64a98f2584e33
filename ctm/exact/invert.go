package exact

import (
	"math"

	"example.org/tailback/network/diagram"
)

// tangent finds the density in [lo, hi] where f(k) - slope k is largest, f concave.
func tangent(d diagram.Diagram, slope, lo, hi float64) float64 {
	if c, ok := d.(closedForm); ok {
		return min(max(c.tangent(slope), lo), hi)
	}
	// Golden section. The largest value is then right to rounding, its place to the root of that.
	const golden = 0.6180339887498949
	g := func(k float64) float64 { return d.Flow(k) - slope*k }
	a, b := lo, hi
	x, y := b-golden*(b-a), a+golden*(b-a)
	gx, gy := g(x), g(y)
	for range 80 {
		if gx > gy {
			b, y, gy = y, x, gx
			x = b - golden*(b-a)
			gx = g(x)
		} else {
			a, x, gx = x, y, gy
			y = a + golden*(b-a)
			gy = g(y)
		}
	}
	best := (a + b) / 2
	for _, k := range []float64{lo, hi, d.Critical()} { // ends and the corner of a shape that has one
		if k >= lo && k <= hi && g(k) > g(best) {
			best = k
		}
	}
	return best
}

// leftSlope and rightSlope are the wave speeds just below and just above k; span is how far the shape is known to be
// smooth. Without a closed form they are second-order differences.
func leftSlope(d diagram.Diagram, k, span float64) float64 {
	if c, ok := d.(closedForm); ok {
		left, _ := c.slopes(k)
		return left
	}
	h := min(span/4, 1e-5*d.Critical())
	return (3*d.Flow(k) - 4*d.Flow(k-h) + d.Flow(k-2*h)) / (2 * h)
}

func rightSlope(d diagram.Diagram, k, span float64) float64 {
	if c, ok := d.(closedForm); ok {
		_, right := c.slopes(k)
		return right
	}
	h := min(span/4, 1e-5*d.Critical())
	return (-3*d.Flow(k) + 4*d.Flow(k+h) - d.Flow(k+2*h)) / (2 * h)
}

// freeDensity is the density up to the critical one with flow q.
func freeDensity(d diagram.Diagram, q float64) float64 {
	if c, ok := d.(closedForm); ok {
		return c.free(q)
	}
	return bisect(func(k float64) bool { return d.Flow(k) < q }, 0, d.Critical())
}

// congestedDensity is the density from the critical one on with flow q. The shape must have a jam density.
func congestedDensity(d diagram.Diagram, q float64) float64 {
	if c, ok := d.(closedForm); ok {
		return c.congested(q)
	}
	if math.IsInf(d.Jam(), 1) {
		panic("exact: a shape without a jam density has no standing queue")
	}
	return bisect(func(k float64) bool { return d.Flow(k) > q }, d.Critical(), d.Jam())
}

// bisect finds where below turns from true to false in [a, b].
func bisect(below func(float64) bool, a, b float64) float64 {
	for range 200 {
		c := (a + b) / 2
		if c == a || c == b {
			break
		}
		if below(c) {
			a = c
		} else {
			b = c
		}
	}
	return (a + b) / 2
}
