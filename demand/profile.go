package demand

import (
	"errors"
	"math"
)

// Profile is a flow over time: constant within each interval, or straight lines between interval mid-points.
// The zero value is no flow.
type Profile struct {
	start, every float64
	total        []float64 // total[i] is the number of vehicles from start to start+i*every
	mid          []float64 // flow at interval mid-points, where ramped; else nil
	values       []float64 // mean flow of each interval, veh/s
	clipped      bool      // it is 0 outside [from, to)
	from, to     float64
}

// Constant is the same flow (veh/s) at all times.
func Constant(flow float64) Profile {
	return Profile{values: []float64{flow}}
}

// Steps is a flow of values[i] veh/s from start+i*every for every seconds; it is 0 before and after.
func Steps(start, every float64, values []float64) Profile {
	p := Profile{start: start, every: every, values: values, total: make([]float64, len(values)+1)}
	for i, q := range values {
		p.total[i+1] = p.total[i] + q*every
	}
	return p
}

// ErrRamp says that straight lines through the interval totals would fall below zero.
var ErrRamp = errors.New("straight lines that keep each interval's total would fall below zero")

// Ramped is a flow of straight lines between the interval mid-points that keeps each interval's total. The
// mid-point flows m solve, for each interval of mean flow q,
//
//	m[i-1]/8 + 3 m[i]/4 + m[i+1]/8 = q[i]
//
// (the line is level before the first mid-point and after the last one, so the end rows read 7/8 and 1/8).
// It returns ErrRamp where a mid-point flow would be negative.
func Ramped(start, every float64, values []float64) (Profile, error) {
	p := Steps(start, every, values)
	n := len(values)
	if n < 2 {
		return p, nil
	}
	// Thomas algorithm; the matrix is diagonally dominant.
	c, m := make([]float64, n), make([]float64, n)
	const off = 0.125
	for i := range n {
		diagonal, lower := 0.75, off
		if i == 0 || i == n-1 {
			diagonal = 0.875
		}
		if i == 0 {
			lower = 0
			c[i], m[i] = off/diagonal, values[i]/diagonal
			continue
		}
		w := diagonal - lower*c[i-1]
		c[i], m[i] = off/w, (values[i]-lower*m[i-1])/w
	}
	for i := n - 2; i >= 0; i-- {
		m[i] -= c[i] * m[i+1]
	}
	for _, q := range m {
		if q < 0 {
			return Profile{}, ErrRamp
		}
	}
	p.mid = m
	return p, nil
}

// Between is the profile from one time (s) to another, and 0 outside. Vehicles of neighbouring parts add up to those
// of the whole, to round-off.
func (p *Profile) Between(from, to float64) Profile {
	s := *p
	if p.clipped {
		from, to = max(from, p.from), min(to, p.to)
	}
	s.clipped, s.from, s.to = true, from, to
	return s
}

// End is the time up to which the profile is given, +Inf for a constant one.
func (p *Profile) End() float64 {
	if p.every == 0 {
		return math.Inf(1)
	}
	return p.start + float64(len(p.values))*p.every
}

// Start is the time from which the profile is given, -Inf for a constant one.
func (p *Profile) Start() float64 {
	if p.every == 0 {
		return math.Inf(-1)
	}
	return p.start
}

// Vehicles is the number of vehicles in [from, to], the exact integral of the flow.
func (p *Profile) Vehicles(from, to float64) float64 {
	if p.clipped {
		from, to = max(from, p.from), min(to, p.to)
		if from >= to {
			return 0
		}
	}
	if p.every == 0 {
		if len(p.values) == 0 {
			return 0
		}
		return p.values[0] * (to - from)
	}
	if flow, until := p.Level(from); to <= until {
		return flow * (to - from)
	}
	return p.cumulative(to) - p.cumulative(from)
}

// Level is the flow (veh/s) that holds from a time on, and until when. Where straight lines or a clipped end make the
// flow change all the time, or soon, until is the time itself.
func (p *Profile) Level(t float64) (flow, until float64) {
	switch {
	case p.mid != nil || p.clipped:
		return 0, t
	case p.every == 0 && len(p.values) > 0:
		return p.values[0], math.Inf(1)
	}
	i := int((t - p.start) / p.every)
	if t < p.start || i >= len(p.values) {
		return 0, t
	}
	return p.values[i], p.start + float64(i+1)*p.every
}

// cumulative is the number of vehicles from start to t.
func (p *Profile) cumulative(t float64) float64 {
	x := (t - p.start) / p.every
	if x <= 0 {
		return 0
	}
	i := int(x)
	if i >= len(p.values) {
		return p.total[len(p.values)]
	}
	return p.total[i] + p.within(i, x-float64(i))*p.every
}

// within integrates the flow over the first share u of interval i; the result is in units of the interval.
func (p *Profile) within(i int, u float64) float64 {
	if p.mid == nil {
		return p.values[i] * u
	}
	before, here, after := p.mid[max(i-1, 0)], p.mid[i], p.mid[min(i+1, len(p.mid)-1)]
	edge := (before + here) / 2
	if u <= 0.5 { // line from edge at 0 to here at 1/2
		return edge*u + (here-edge)*u*u
	}
	v := u - 0.5 // line from here at 1/2, slope after-here
	return (edge+here)/4 + here*v + (after-here)*v*v/2
}

// Scaled is the profile times a factor.
func (p *Profile) Scaled(factor float64) Profile {
	s := *p
	s.total, s.mid, s.values = scale(p.total, factor), scale(p.mid, factor), scale(p.values, factor)
	return s
}

func scale(x []float64, factor float64) []float64 {
	if x == nil {
		return nil
	}
	y := make([]float64, len(x))
	for i := range x {
		y[i] = x[i] * factor
	}
	return y
}
