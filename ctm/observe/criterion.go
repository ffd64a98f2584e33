package observe

import (
	"fmt"
	"math"

	"example.org/tailback/ctm"
	"example.org/tailback/network/diagram"
)

// Kind is a way to tell queued from moving traffic.
type Kind int

// The three criteria. AboveCritical is the default.
const (
	AboveCritical Kind = iota // density above the critical density
	SpeedBelow                // speed below a value in m/s
	ShareBelow                // speed below a share of the free speed
)

// Criterion says which cells count as queued. The zero value is "density above critical".
type Criterion struct {
	Kind  Kind
	Value float64 // m/s or share, by Kind
}

// aboveCritical is how far above the critical density a cell must be: discharging traffic stands exactly at
// it, up to round-off, and must not count as queued.
const aboveCritical = 1e-3

// String describes the criterion as it is printed beside every figure, in metric units.
func (c Criterion) String() string {
	switch c.Kind {
	case SpeedBelow:
		return fmt.Sprintf("speed below %.4g km/h", c.Value*3.6)
	case ShareBelow:
		return fmt.Sprintf("speed below %.3g %% of the free speed", c.Value*100)
	}
	return "density above critical"
}

// density is the density (passenger cars per metre and lane) above which a road counts as queued. Speed never rises
// with density on any diagram, so a limit of speed is one of density, found by bisection.
func (c Criterion) density(r *ctm.Road) float64 {
	var limit float64
	switch c.Kind {
	case SpeedBelow:
		limit = c.Value
	case ShareBelow:
		limit = c.Value * r.Diagram.FreeSpeed()
	default:
		return r.Diagram.Critical() * (1 + aboveCritical)
	}
	low, high := 0.0, r.Diagram.Jam()
	if math.IsInf(high, 1) {
		high = 100 * r.Diagram.Critical()
	}
	for range 60 {
		if mid := (low + high) / 2; diagram.Speed(r.Diagram, mid) < limit {
			high = mid
		} else {
			low = mid
		}
	}
	return high
}
