package diagram

import "math"

// Limited is a diagram under an operating limit. Its flow is
//
//	q = min(f(k), speed*k, capacity)
//
// so that drivers who would go slower at that density are not slowed further. This is the plain reading of a speed
// limit in kinematic-wave theory (a fan of free branches under one congested branch; Daganzo 1997, Fundamentals of
// Transportation and Traffic Operations, ch. 4, from memory): under a triangular diagram a lower limit also lowers
// the capacity.
type Limited struct {
	curve
	base  Diagram
	speed float64 // m/s, +Inf for none
	flow  float64 // veh/s per lane, +Inf for none
}

// Limit puts a posted speed in m/s and a capacity in veh/s per lane on a diagram; +Inf is no limit. A limit that
// changes nothing returns d itself, and a triangular or trapezoidal diagram stays one that AsLinear sees. It
// panics if a limit is negative or NaN.
func Limit(d Diagram, speed, capacity float64) Diagram {
	if !(speed >= 0) || !(capacity >= 0) {
		panic("diagram: a limit must not be negative or NaN")
	}
	if speed >= d.FreeSpeed() && capacity >= Capacity(d) {
		return d
	}
	switch base := d.(type) {
	case linear:
		v := min(base.v, speed)
		if v <= 0 {
			return linear{w: base.w, kj: base.kj}
		}
		return linear{v, min(base.q, capacity, tip(v, base.w, base.kj)), base.w, base.kj}
	case *Limited:
		return Limit(base.base, min(base.speed, speed), min(base.flow, capacity))
	}
	l := &Limited{base: d, speed: speed, flow: capacity}
	l.curve = curve{vf: min(d.FreeSpeed(), speed), kj: d.Jam(), down: d.MaxWaveSpeed()}
	if s, ok := d.(interface{ steepest() float64 }); ok {
		l.down = s.steepest()
	}
	l.kc, l.q = l.peak()
	return l
}

// peak finds the lowest density at which the flow is largest, and that flow.
func (l *Limited) peak() (kc, q float64) {
	if l.speed <= 0 || l.flow <= 0 {
		return 0, 0
	}
	kc = l.base.Critical()
	if l.speed*kc < l.base.Flow(kc) {
		// The limit cuts off the old peak: the new one is where the congested branch meets speed*k.
		end := l.base.Jam()
		if math.IsInf(end, 1) {
			for end = 2 * kc; l.base.Flow(end) > l.speed*end; end *= 2 {
			}
		}
		kc, _ = bisect(kc, end, func(k float64) bool { return l.base.Flow(k) < l.speed*k })
	}
	if l.under(kc) > l.flow {
		_, kc = bisect(0, kc, func(k float64) bool { return l.under(k) >= l.flow })
	}
	return kc, min(l.under(kc), l.flow)
}

// under is the flow without the limit on capacity.
func (l *Limited) under(k float64) float64 { return min(l.base.Flow(k), l.speed*k) }

// Flow implements Diagram.
func (l *Limited) Flow(k float64) float64 {
	if l.outside(k) {
		return 0
	}
	return min(l.under(k), l.flow)
}

// Fill implements Filler. With S and R the flows of the base, h = min(speed*k, capacity) and q the largest flow
// under the limit, sending = min(S, h, q) and receiving = min(R, q): h does not fall, S does not fall and R does
// not rise with density.
func (l *Limited) Fill(sending, receiving, k []float64) {
	Fill(l.base, sending, receiving, k)
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		if x > 0 { // an infinite limit times an empty road is no number
			sending[i] = min(sending[i], l.speed*x, l.q)
		}
		receiving[i] = min(receiving[i], l.q)
	}
}

// bisect narrows [lo, hi] down to two neighbouring numbers, of which above is false at the first and true at the
// second. above must be false at lo, true at hi and change once between them; it is not asked at either end.
func bisect(lo, hi float64, above func(x float64) bool) (below, first float64) {
	for {
		mid := lo + (hi-lo)/2
		if mid <= lo || mid >= hi {
			return lo, hi
		}
		if above(mid) {
			hi = mid
		} else {
			lo = mid
		}
	}
}
