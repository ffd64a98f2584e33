package measure_test

import (
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// Hand-worked cases after shock-wave theory: a tail between states (q1, k1) and (q2, k2) moves at
// (q2 - q1)/(k2 - k1); congested states of n lanes stand on q = 20 (120 n - k). All flows veh/h, densities veh/km, of
// all lanes; distances in km upstream of the closure.

// far is the share to which the farthest point is met: the wave that ends a queue is a contact of Courant number below 1,
// which the scheme spreads over a width of the order of the root of (distance x cell), here some 0.3 km.
const far = 0.04

// delay is the time above free flow of all vehicles, in veh·h.
func delay(m *ctm.Model) float64 {
	v := m.View()
	sum := v.Totals().WaitingSeconds
	for i := range v.Grid().Links {
		l := network.LinkID(i)
		sum += v.Seconds(l, 0) - v.Out(l, 0)*v.Scenario().Network.Links[i].FreeTime()
	}
	return sum / hour
}

// leftover is the free travel time of the vehicles inside, which delay counts in; with a flow q at free speed over a
// road of length x it is q (x/v)^2/2 for each link.
func leftover(flow, length float64) float64 { return flow * (length / 100) * (length / 100) / 2 }

// One of three lanes closed from 1:00 to 1:30, 1500 veh/h on each of the two left; 4500 veh/h arrive (k 45).
// Queue: q 3000, k = 360 - 150 = 210. Tail (3000-4500)/(210-45) = -9.090909 km/h: 2 km at 1 + 2/9.090909 = 1.22 h,
// 4 km at 1.44 h, 4.545455 km at 1.5 h. Then 6000 leave, a wave of -20 km/h starts at the head and meets the tail
// after 4.545455/(20-9.090909) = 0.416667 h, at 8.333333 km and 1.916667 h; there the queue ends.
// Delay as of a point queue: 750 vehicles at 1.5 h, gone 0.5 h later: 750*1/2 = 375 veh·h.
func TestLaneClosureQueue(t *testing.T) {
	for _, c := range []struct {
		name  string
		shift float64
	}{{"by day", 0}, {"past midnight", 23.25}} { // closed 24:15 to 24:45
		t.Run(c.name, func(t *testing.T) {
			sc := study(t, triangular(t), []link{{0, 1, 30, 3}}, &demand.Demand{Entries: []demand.Entry{steady(0, 4500)}},
				ctm.Horizon{Start: c.shift * hour, End: (c.shift + 3) * hour, Cell: 25})
			with(t, sc, closure(0, 25, 26, 1, c.shift+1, c.shift+1.5, 1500))
			seen := &tail{links: []network.LinkID{0}, head: 25 * km, places: []float64{2 * km, 4 * km}}
			m := run(t, sc, ctm.Watch{Every: 1, Observer: seen})
			near(t, "2 km upstream", seen.passed(0)-c.shift, 1.22, 0.01)
			near(t, "4 km upstream", seen.passed(1)-c.shift, 1.44, 0.01)
			near(t, "farthest", seen.far/km, 8.333333, far)
			near(t, "when", seen.when-c.shift, 1.916667, 0.01)
			near(t, "gone", seen.clear-c.shift, 1.916667, 0.01)
			near(t, "delay", delay(m)-leftover(4500, 30), 375, 0.005)
		})
	}
}

// A ramp (600 veh/h, one lane) joins 4 km upstream of the closure; 3600 veh/h arrive on the main road (k 36), 4200
// beyond the ramp (k 42). One of three lanes closed from 1:00 to 2:00, 3000 veh/h pass.
// Below the ramp: (3000-4200)/(210-42) = -7.142857 km/h: the tail is at the ramp after 0.56 h, at 1.56 h.
// There the ramp takes its 600 (less than its quarter of 3000), the main road 2400: k = 360-120 = 240, tail
// (2400-3600)/(240-36) = -5.882353 km/h: 2 km above the ramp at 1.56 + 0.34 = 1.90 h.
// Reopened at 2 h: the wave of -20 km/h is at the ramp at 2.2 h, the tail then 0.64*5.882353 = 3.764706 km above it.
// The main road discharges 6000-600 = 5400 (k = 90). Wave and tail meet 3.764706/(20-5.882353) = 0.266667 h later,
// at 2.466667 h, 5.333333 km above the ramp, 9.333333 km from the closure. Then the tail runs forward at
// (5400-3600)/(90-36) = 33.333333 km/h and is at the ramp at 2.626667 h: the queue is gone. (Point queue: 1200 vehicles
// at 2 h, gone 1200/1800 h later at the closure, 4 km further down: 2.666667 - 0.04.)
func TestLaneClosureBeyondRamp(t *testing.T) {
	d := &demand.Demand{Entries: []demand.Entry{steady(0, 3600), steady(1, 600)}}
	sc := study(t, triangular(t), []link{{0, 1, 20, 3}, {2, 1, 2, 1}, {1, 3, 10, 3}}, d, ctm.Horizon{End: 4 * hour, Cell: 25})
	with(t, sc, closure(2, 4, 5, 1, 1, 2, 1500))
	seen := &tail{links: []network.LinkID{0, 2}, head: 24 * km, places: []float64{4 * km, 6 * km}}
	m := run(t, sc, ctm.Watch{Every: 1, Observer: seen})
	near(t, "at the ramp", seen.passed(0), 1.56, 0.01)
	near(t, "2 km above it", seen.passed(1), 1.90, 0.01)
	near(t, "farthest", seen.far/km, 9.333333, far)
	near(t, "when", seen.when, 2.466667, 0.01)
	near(t, "gone", seen.clear, 2.626667, 0.01)
	// 1200 vehicles at 2 h, gone at 2.666667 h at the closure: 1200*1.666667/2 = 1000 veh·h.
	inside := leftover(3600, 20) + leftover(600, 2) + leftover(4200, 10)
	near(t, "delay", delay(m)-inside, 1000, 0.005)
}

// Two numbers: 1600 veh/h a lane before a queue forms, 1400 out of it. 3600 veh/h arrive (k 36); queue q 2800, k 220;
// tail (2800-3600)/(220-36) = -4.347826 km/h; closed 1:00 to 1:30: 2.173913 km. The wave meets it after
// 2.173913/(20-4.347826) = 0.138889 h at 2.777778 km, 1.638889 h. 400 vehicles, gone after another 1/6 h: delay
// 400*(1/2+1/6)/2 = 133.333333 veh·h. With 3100 veh/h, less than 3200, no queue forms.
func TestLaneClosureTwoNumbers(t *testing.T) {
	road := func(flow float64) (*ctm.Model, *tail) {
		sc := study(t, triangular(t), []link{{0, 1, 30, 3}}, &demand.Demand{Entries: []demand.Entry{steady(0, flow)}}, ctm.Horizon{End: 3 * hour, Cell: 25})
		c := closure(0, 25, 26, 1, 1, 1.5, 1600)
		c.Discharge = 1400 * vehh
		seen := &tail{links: []network.LinkID{0}, head: 25 * km, places: []float64{1 * km}}
		return run(t, with(t, sc, c), ctm.Watch{Every: 1, Observer: seen}), seen
	}
	m, seen := road(3600)
	near(t, "1 km upstream", seen.passed(0), 1+1/4.347826, 0.01)
	near(t, "farthest", seen.far/km, 2.777778, far)
	near(t, "gone", seen.clear, 1.638889, 0.01)
	near(t, "delay", delay(m)-leftover(3600, 30), 133.333333, 0.01)
	if m, seen = road(3100); seen.far > 0 {
		t.Errorf("3100 veh/h made a queue of %v m", seen.far)
	}
	near(t, "time under way", delay(m), leftover(3100, 30), 0.005)
}

// The freeway shut-down of the design notes' section 3.4, case 5 (Mannering & Washburn-type exercise): demand 2 x 1200,
// capacity 2 x 2200 veh/h, closed for 20 min, one lane for 20 min, then both. Published data, computed there: 35933.333
// veh·min of delay, clear after 66 min. With waves (20 km/h, jam 132 veh/km a lane, k 24 arriving): tail
// -2400/(264-24) = -10 km/h; the wave of the one lane (q 2200, k 154) starts at 20 min and meets the tail at 40 min,
// 6.666667 km; then (2200-2400)/(154-24) = -1.538462 km/h until the wave of 40 min comes, 6.666667/(20-1.538462) =
// 0.361111 h later, at 7.222222 km and 1.027778 h. Its last vehicle is at the closure 7.222222/100 h later: 1.1 h = 66 min.
func TestFullClosureThenOneLane(t *testing.T) {
	d := shape(t, "triangular", diagram.Params{FreeSpeed: 100 * kmh, WaveSpeed: 20 * kmh, JamDensity: 0.132})
	sc := study(t, d, []link{{0, 1, 20, 2}}, &demand.Demand{Entries: []demand.Entry{steady(0, 2400)}}, ctm.Horizon{End: 3 * hour, Cell: 25, Report: 300})
	with(t, sc, closure(0, 15, 15.5, 2, 1, 4.0/3, 0), closure(0, 15, 15.5, 1, 4.0/3, 5.0/3, 0))
	seen := &tail{links: []network.LinkID{0}, head: 15 * km, places: []float64{2 * km}}
	m := run(t, sc, ctm.Watch{Every: 1, Observer: seen})
	near(t, "2 km upstream", seen.passed(0), 1.2, 0.01)
	near(t, "farthest", seen.far/km, 7.222222, far)
	near(t, "gone", seen.clear-1, 1.027778, 0.01)
	near(t, "delay", delay(m)-leftover(2400, 20), 35933.333/60, 0.01)
}

// One work zone, two bottlenecks: a lane closed over 24-26 km at 1600 veh/h a lane, and from 25 km on 1400. 3600 veh/h
// arrive (k 36). Before the taper q 3200, k 200, tail (3200-3600)/(200-36) = -2.439024 km/h. Before the work space, on
// two lanes, q 2800, k 100: first against the 3600 (k 36) that stand on the stretch, -800/64 = -12.5 km/h, until the
// 3200 (k 32) come from the taper at 100 km/h: 1/112.5 = 0.008889 h, 0.111111 km; then -400/68 = -5.882353 km/h: 0.5 km at
// 1.075 h, at the taper at 1.16 h. From then on the taper passes 2800 too: a wave of -20 km/h catches the tail (0.390244
// km) after 0.390244/(20-2.439024) = 0.022222 h, at 0.444444 km, 1.182222 h; from there -4.347826 km/h: 2 km before the
// taper at 1.182222 + 1.555556/4.347826 = 1.54 h.
func TestTwoBottlenecksInOneWorkZone(t *testing.T) {
	sc := study(t, triangular(t), []link{{0, 1, 30, 3}}, &demand.Demand{Entries: []demand.Entry{steady(0, 3600)}}, ctm.Horizon{End: 2 * hour, Cell: 25})
	with(t, sc, closure(0, 24, 26, 1, 1, 2, 1600), closure(0, 25, 26, 1, 1, 2, 1400))
	seen := &tail{links: []network.LinkID{0}, head: 24 * km, places: []float64{2 * km}}
	inner := &tail{links: []network.LinkID{0}, begin: 24 * km, head: 25 * km, places: []float64{0.5 * km}}
	run(t, sc, ctm.Watch{Every: 1, Observer: seen}, ctm.Watch{Every: 1, Observer: inner})
	near(t, "work space, 0.5 km", inner.passed(0), 1.075, 0.01)
	near(t, "taper, 2 km", seen.passed(0), 1.54, 0.01)
}

// An incident that leaves 0.49 of 6000 veh/h (HCM 2010, exhibit 10-17, one of three lanes) from 1:00 to 1:30: q 2940,
// k 213 against 4500, k 45: tail -1560/168 = -9.285714 km/h.
func TestIncident(t *testing.T) {
	sc := study(t, triangular(t), []link{{0, 1, 30, 3}}, &demand.Demand{Entries: []demand.Entry{steady(0, 4500)}}, ctm.Horizon{End: 2 * hour, Cell: 25})
	with(t, sc, &measure.Incident{Link: 0, At: 20 * km, CapacityLeft: 0.49, Start: hour, End: 1.5 * hour})
	seen := &tail{links: []network.LinkID{0}, head: 20 * km, places: []float64{3 * km}}
	run(t, sc, ctm.Watch{Every: 1, Observer: seen})
	near(t, "3 km upstream", seen.passed(0), 1+3/9.285714, 0.01)
}
