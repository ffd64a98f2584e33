package exact

import (
	"math"

	"example.org/tailback/network/diagram"
)

// closedForm is what a shape can answer without iteration.
type closedForm interface {
	diagram.Diagram
	tangent(slope float64) float64          // a density at which the flow has this slope
	slopes(k float64) (left, right float64) // one-sided wave speeds
	free(q float64) float64                 // the density <= Critical with flow q
	congested(q float64) float64            // the density >= Critical with flow q
}

var (
	_ closedForm = Triangular{}
	_ closedForm = Greenshields{}
)

// Triangular is the diagram q = min(v k, w (kj - k)) of Newell 1993 and Daganzo 1994. It serves per lane or for all
// lanes, as Kj is.
type Triangular struct {
	V  float64 // free speed, m/s, > 0
	W  float64 // wave speed, m/s, > 0: congestion travels upstream
	Kj float64 // jam density, veh/m, > 0
}

// Flow is the flow in veh/s at k veh/m, 0 outside [0, Kj].
func (d Triangular) Flow(k float64) float64 {
	return max(0, min(d.V*k, d.W*(d.Kj-k)))
}

// Critical is kc = w kj / (v + w).
func (d Triangular) Critical() float64 {
	return d.W * d.Kj / (d.V + d.W)
}

// Capacity is Q = v kc.
func (d Triangular) Capacity() float64 { return d.V * d.Critical() }

// Jam is the density of standing traffic.
func (d Triangular) Jam() float64 { return d.Kj }

// FreeSpeed is v.
func (d Triangular) FreeSpeed() float64 { return d.V }

// MaxWaveSpeed is the larger of v and w.
func (d Triangular) MaxWaveSpeed() float64 { return max(d.V, d.W) }

func (d Triangular) tangent(slope float64) float64 {
	switch {
	case slope >= d.V:
		return 0
	case slope > -d.W:
		return d.Critical()
	}
	return d.Kj
}

func (d Triangular) slopes(k float64) (left, right float64) {
	kc := d.Critical()
	switch {
	case math.Abs(k-kc) <= 1e-12*kc: // k may come from a division
		return d.V, -d.W
	case k < kc:
		return d.V, d.V
	}
	return -d.W, -d.W
}

func (d Triangular) free(q float64) float64      { return q / d.V }
func (d Triangular) congested(q float64) float64 { return d.Kj - q/d.W }

// Greenshields is the diagram q = v k (1 - k/kj) of Greenshields 1935.
type Greenshields struct {
	V  float64 // free speed, m/s, > 0
	Kj float64 // jam density, veh/m, > 0
}

// Flow is the flow in veh/s at k veh/m, 0 outside [0, Kj].
func (d Greenshields) Flow(k float64) float64 {
	return max(0, d.V*k*(1-k/d.Kj))
}

// Critical is kc = kj/2.
func (d Greenshields) Critical() float64 { return d.Kj / 2 }

// Jam is the density of standing traffic.
func (d Greenshields) Jam() float64 { return d.Kj }

// FreeSpeed is v.
func (d Greenshields) FreeSpeed() float64 { return d.V }

// MaxWaveSpeed is v, reached on the empty road and at jam density.
func (d Greenshields) MaxWaveSpeed() float64 { return d.V }

// tangent solves f'(k) = v (1 - 2k/kj) for k.
func (d Greenshields) tangent(slope float64) float64 {
	return d.Kj / 2 * (1 - slope/d.V)
}

func (d Greenshields) slopes(k float64) (left, right float64) {
	s := d.V * (1 - 2*k/d.Kj)
	return s, s
}

// free and congested solve v k (1 - k/kj) = q; the product of both roots is q kj / v.
func (d Greenshields) free(q float64) float64 { return q * d.Kj / (d.V * d.congested(q)) }

func (d Greenshields) congested(q float64) float64 {
	return d.Kj / 2 * (1 + math.Sqrt(max(0, 1-4*q/(d.V*d.Kj))))
}
