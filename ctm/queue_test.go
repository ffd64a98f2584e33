package ctm_test

import (
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/observe"
	"example.org/tailback/demand"
)

// longest records the longest queue and when the last one was seen.
type longest struct {
	finder      observe.Finder
	length, at  float64
	cleared     float64
	maxVehicles float64
}

func (o *longest) Observe(v ctm.View) error {
	sum, veh := 0.0, 0.0
	for _, r := range o.finder.Find(v) {
		sum += r.Length()
		veh += r.Vehicles
	}
	if sum > o.length {
		o.length, o.at = sum, v.Time()
	}
	o.maxVehicles = max(o.maxVehicles, veh)
	if sum > 0 {
		o.cleared = v.Time()
	}
	return nil
}

// The closed-form case of theory.md 3.3: 2 lanes, vf 100, w 20, kj 120 per lane, 20 km; capacity 3000 beyond;
// 3600 veh/h for an hour, then 1800. Without and with a capacity drop of 10 %.
func TestSpatialQueueClosedForm(t *testing.T) {
	wide := triangular(t, 100, 20, 120)
	narrow := shape(t, "trapezoidal", trapezoid(100, 1500, 20, 120))
	for _, c := range []struct {
		name                     string
		drop                     float64
		length, at, clear, delay float64 // km, h, h, veh·h: theory.md 3.3
		share                    float64
	}{
		{"no drop", 0, 10, 1.1, 1.7, 450, 0.01},
		{"drop of 10 %", 0.1, 11.5384615, 1.08461538, 2.2, 900, 0.02},
	} {
		t.Run(c.name, func(t *testing.T) {
			roads := []road{{0, 1, 20, 2, wide, 0}, {1, 2, 2, 2, narrow, c.drop}}
			d := &demand.Demand{Entries: []demand.Entry{hourly(0, 3600, 1800, 1800, 0)}}
			seen := &longest{}
			m := run(t, build(t, roads, d, ctm.Horizon{End: 4 * hour, Cell: 50}), ctm.Watch{Every: 1, Observer: seen})
			near(t, "longest queue, km", seen.length/km, c.length, c.share)
			near(t, "when, h", seen.at/hour, c.at, c.share)
			near(t, "clearance, h", seen.cleared/hour, c.clear, c.share)
			near(t, "delay, veh·h", delay(m), c.delay, c.share)
			if c.drop == 0 {
				near(t, "vehicles in the queue", seen.maxVehicles, 900, c.share)
			}
		})
	}
}

// Deterministic queueing (theory.md 3.2, example 8 of section 9): hourly demand 2600, 3000, 3400, 2800, 2000,
// 1400 against a capacity of 2800: the queue at the hours' ends is 0, 200, 800, 800, 0, 0 and the delay
// 1800 veh·h. The kinematic-wave delay equals the point queue's where the queue does not leave the road and the
// free speed is the same on both sides.
func TestDelayEqualsPointQueue(t *testing.T) {
	wide := triangular(t, 100, 20, 120)
	narrow := shape(t, "trapezoidal", trapezoid(100, 1400, 20, 120))
	roads := []road{{0, 1, 40, 2, wide, 0}, {1, 2, 2, 2, narrow, 0}}
	d := &demand.Demand{Entries: []demand.Entry{hourly(0, 2600, 3000, 3400, 2800, 2000, 1400, 0, 0)}}
	seen := &longest{}
	m := run(t, build(t, roads, d, ctm.Horizon{End: 8 * hour, Cell: 50}), ctm.Watch{Every: 1, Observer: seen})
	near(t, "delay, veh·h", delay(m), 1800, 0.01)
	// The bottleneck sees the demand 0.4 h later than the entry does.
	near(t, "clearance, h", seen.cleared/hour, 5+0.4, 0.01)
}
