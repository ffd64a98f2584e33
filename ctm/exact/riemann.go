package exact

import "example.org/tailback/network/diagram"

// Riemann is the problem of one jump: density Left for x < 0 and Right for x > 0 at t = 0, on a road of one concave
// diagram. Densities are those of the diagram (per lane for a diagram per lane).
//
// A jump to a higher density is a shock at the speed of Rankine and Hugoniot; one to a lower density opens into a fan
// where f'(k) = x/t (Lighthill & Whitham 1955; LeVeque, Finite Volume Methods for Hyperbolic Problems, 2002, ch. 11).
// The diagrams of this package are solved in closed form, others by search to rounding.
type Riemann struct {
	Diagram     diagram.Diagram
	Left, Right float64 // veh/m, in [0, Jam]
}

// Density is the density along the ray x = speed t, in veh/m. On a shock itself it is Right.
func (r Riemann) Density(speed float64) float64 {
	switch {
	case r.Left > r.Right:
		return tangent(r.Diagram, speed, r.Right, r.Left)
	case r.Left < r.Right && speed < r.shock():
		return r.Left
	}
	return r.Right
}

// Passing is the flow in veh/s past an observer who moves at that speed:
//
//	max of f(k) - speed k over [Right, Left] if Left > Right,  min over [Left, Right] else
//
// (Osher 1984). The minimum of a concave function is at an end.
func (r Riemann) Passing(speed float64) float64 {
	f := r.Diagram.Flow
	if r.Left > r.Right {
		k := tangent(r.Diagram, speed, r.Right, r.Left)
		return f(k) - speed*k
	}
	return min(f(r.Left)-speed*r.Left, f(r.Right)-speed*r.Right)
}

// Flux is the flow across x = 0 in veh/s, constant for t > 0.
func (r Riemann) Flux() float64 { return r.Passing(0) }

// Waves gives the speeds of the slowest and of the fastest wave, in m/s; those of a shock are equal, and those of no
// jump are both the wave speed f'(k).
func (r Riemann) Waves() (slowest, fastest float64) {
	switch {
	case r.Left < r.Right:
		return r.shock(), r.shock()
	case r.Left > r.Right:
		span := r.Left - r.Right
		return leftSlope(r.Diagram, r.Left, span), rightSlope(r.Diagram, r.Right, span)
	}
	s := rightSlope(r.Diagram, r.Right, r.Diagram.Critical())
	return s, s
}

// Mean is the mean density in veh/m of a < x < b at time t >= 0. It is exact, fan and all: the vehicles between two
// observers are those that passed one and not the other, so that
//
//	integral of k from a to b = t (Passing(a/t) - Passing(b/t))
func (r Riemann) Mean(a, b, t float64) float64 {
	if t == 0 {
		zero := min(max(0, a), b)
		return (r.Left*(zero-a) + r.Right*(b-zero)) / (b - a)
	}
	return t * (r.Passing(a/t) - r.Passing(b/t)) / (b - a)
}

func (r Riemann) shock() float64 {
	return (r.Diagram.Flow(r.Right) - r.Diagram.Flow(r.Left)) / (r.Right - r.Left)
}

// State is a state of traffic: a point in the plane of density and flow, on a diagram or measured.
type State struct {
	Density float64 // veh/m
	Flow    float64 // veh/s
}

// Shock is the speed in m/s of the boundary between two states, positive downstream (Rankine & Hugoniot;
// Lighthill & Whitham 1955):
//
//	s = (q2 - q1) / (k2 - k1)
//
// It is NaN or infinite for states of one density.
func Shock(up, down State) float64 {
	return (down.Flow - up.Flow) / (down.Density - up.Density)
}
