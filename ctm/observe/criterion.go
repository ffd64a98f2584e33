package observe

import (
	"fmt"

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

// queued applies the criterion to a road at a density k (passenger cars per metre and lane).
func (c Criterion) queued(r *ctm.Road, k float64) bool {
	if k <= 0 {
		return false
	}
	switch c.Kind {
	case SpeedBelow:
		return diagram.Speed(r.Diagram, k) < c.Value
	case ShareBelow:
		return diagram.Speed(r.Diagram, k) < c.Value*r.Diagram.FreeSpeed()
	}
	return k > r.Diagram.Critical()*(1+aboveCritical)
}
