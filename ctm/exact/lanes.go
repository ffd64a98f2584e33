package exact

import "example.org/tailback/network/diagram"

// Side is the road on one side of x = 0 at t = 0.
type Side struct {
	Diagram diagram.Diagram // per lane, concave
	Lanes   float64         // > 0
	Density float64         // veh/m per lane, in [0, Jam]
}

func (s Side) sending() float64 {
	return s.Lanes * s.Diagram.Flow(min(s.Density, s.Diagram.Critical()))
}

func (s Side) receiving() float64 {
	return s.Lanes * s.Diagram.Flow(max(s.Density, s.Diagram.Critical()))
}

// Crossing is the solution of a Riemann problem across a change of lanes, of the speed limit or of the shape.
type Crossing struct {
	// Flux is the flow across x = 0 in veh/s, all lanes.
	Flux float64

	// Upstream has waves that travel upstream only: its Right is the density per lane just before x = 0.
	// Downstream has waves that travel downstream only: its Left is the density per lane just after x = 0.
	Upstream, Downstream Riemann

	lanes [2]float64
}

// RiemannLanes solves the Riemann problem across x = 0 with the flux that is the largest possible, the lesser of
// what the left sends and the right receives (Lebacque, "The Godunov scheme and what it means for first order traffic
// flow models", ISTTT 13, 1996). A side that is held back turns to the congested state of that flow, a side that gets
// less than it could take to the free one.
func RiemannLanes(left, right Side) Crossing {
	sending, receiving := left.sending(), right.receiving()
	c := Crossing{Flux: min(sending, receiving), lanes: [2]float64{left.Lanes, right.Lanes}}
	before := min(left.Density, left.Diagram.Critical())
	if c.Flux < sending {
		before = congestedDensity(left.Diagram, c.Flux/left.Lanes)
	}
	after := max(right.Density, right.Diagram.Critical())
	if c.Flux < receiving {
		after = freeDensity(right.Diagram, c.Flux/right.Lanes)
	}
	c.Upstream = Riemann{left.Diagram, left.Density, before}
	c.Downstream = Riemann{right.Diagram, after, right.Density}
	return c
}

// Density is the density per lane along the ray x = speed t, in veh/m; at speed 0 that just after x = 0.
func (c Crossing) Density(speed float64) float64 {
	switch {
	case speed < 0:
		return c.Upstream.Density(speed)
	case speed > 0:
		return c.Downstream.Density(speed)
	}
	return c.Downstream.Left
}

// Vehicles is the number of vehicles in all lanes of a < x < b at time t >= 0.
func (c Crossing) Vehicles(a, b, t float64) float64 {
	n := 0.0
	if a < 0 {
		end := min(b, 0)
		n += c.lanes[0] * c.Upstream.Mean(a, end, t) * (end - a)
	}
	if b > 0 {
		start := max(a, 0)
		n += c.lanes[1] * c.Downstream.Mean(start, b, t) * (b - start)
	}
	return n
}
