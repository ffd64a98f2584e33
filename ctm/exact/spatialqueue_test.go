package exact_test

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/ctm/exact"
)

var road = exact.Triangular{V: 100, W: 20, Kj: 240} // two lanes; km/h, veh/km

func track(t *testing.T, b exact.Bottleneck) *exact.SpatialQueue {
	t.Helper()
	q, err := exact.Track(b)
	if err != nil {
		t.Fatal(err)
	}
	return q
}

func TestSpatialQueueValues(t *testing.T) {
	// Rankine & Hugoniot by hand on 20 km of two lanes, 3600 veh/h for an hour then 1800, past 3000 veh/h. Queue at 90
	// veh/km, tail at (3000-3600)/(90-36) = -100/9; the change of demand meets it where 100(t-1) = 20-100/9(t-.2).
	b := exact.Bottleneck{Road: road, Length: 20, Demand: exact.Rate{{0, 3600}, {1, 1800}}, Capacity: exact.Rate{{0, 3000}}}
	q := track(t, b)
	longest, at := q.Longest()
	near(t, "longest", longest, 10, 1e-12)
	near(t, "at", at, 1.1, 1e-12)
	near(t, "vehicles", q.Vehicles(1.1), 900, 1e-12)
	largest, when := q.Largest()
	near(t, "point queue", largest, 600, 1e-12)
	near(t, "when", when, 1.2, 1e-12)
	near(t, "clears", q.Clears(), 1.7, 1e-12)
	near(t, "delay", q.Delay(), 450, 1e-12)
	path := q.Path()
	near(t, "begins", path[0].Time, .2, 1e-12)
	near(t, "recovers", (path[1].Length-path[2].Length)/(path[2].Time-path[1].Time), 16.6667, 1e-5)
	near(t, "ends", path[2].Time, 1.7, 1e-9)

	// The same with 2700 veh/h while queued: k = 105, tail -900/69, meets at 1.08461538 h; recovers 10.3448276.
	b.Drop = .1
	q = track(t, b)
	longest, at = q.Longest()
	near(t, "longest", longest, 11.5384615, 1e-8)
	near(t, "at", at, 1.08461538, 1e-8)
	near(t, "clears", q.Clears(), 2.2, 1e-12)
	near(t, "delay", q.Delay(), 900, 1e-12)
	path = q.Path()
	near(t, "grows", path[1].Length/(path[1].Time-path[0].Time), 13.0434783, 1e-8)
	near(t, "recovers", path[1].Length/(path[2].Time-path[1].Time), 10.3448276, 1e-8)
	near(t, "ends", path[2].Time, 2.2, 1e-9)
	near(t, "gone", q.Length(2.3), 0, 1e-12)
	near(t, "gone", q.Vehicles(2.3), 0, 1e-12)
	near(t, "not yet", q.Length(.1), 0, 1e-12)
}

func TestSignalTriangular(t *testing.T) {
	// Exercise page on traffic signals (inputs seen), arithmetic redone by hand; hours and miles: 50 mi/h, jam density
	// 325, capacity 3750 at 75 veh/mi, 3000 veh/h arrive, red 30 s. w = 3750/250 = 15.
	mile, second := 5280., 1./3600
	lane := exact.Triangular{V: 50, W: 15, Kj: 325}
	near(t, "capacity", lane.Capacity(), 3750, 1e-12)
	q := track(t, exact.Bottleneck{
		Road: lane, Length: 1,
		Demand:   exact.Rate{{-1. / 50, 3000}},
		Capacity: exact.Rate{{-1, 9999}, {0, 0}, {30 * second, 9999}},
	})
	near(t, "at green", q.Length(30*second)*mile, 498.1132, 1e-6)
	longest, at := q.Longest()
	near(t, "longest", longest*mile, 2030.769, 1e-6)
	near(t, "after green", at/second-30, 92.3077, 1e-6)
	near(t, "clears", q.Clears()/second-30, 120, 1e-9) // = lambda r/(s - lambda), D/D/1
	path := q.Path()
	near(t, "tail is back", path[len(path)-1].Time/second-30, 120, 1e-9)
}

func TestStop(t *testing.T) {
	mile, second := 5280., 1./3600
	// 8 of Garber & Hoel's kind (inputs seen, saturation flow misprinted there), arithmetic redone by hand: 40 mi/h at
	// 44 veh/mi; red 30 s; 1950 veh/h at 51; jam 120.
	s := exact.Stop{
		Arriving: exact.State{Density: 44, Flow: 1760}, Stopped: exact.State{Density: 120},
		Leaving: exact.State{Density: 51, Flow: 1950}, Time: 30 * second,
	}
	near(t, "w12", exact.Shock(s.Arriving, s.Stopped), -23.157895, 1e-7)
	near(t, "w23", exact.Shock(s.Stopped, s.Leaving), -28.260870, 1e-7)
	near(t, "w13", exact.Shock(s.Arriving, s.Leaving), 27.142857, 1e-7)
	near(t, "at the end of red", s.AtRelease()*mile, 1018.947, 1e-6)
	near(t, "meets", s.Meets()/second, 136.1435, 1e-6)
	near(t, "longest", s.Longest()*mile, 5643.049, 1e-6)
	near(t, "dissipates", s.Dissipates()/second, 277.8947, 1e-6)

	// Garber & Hoel, Traffic and Highway Engineering, ch. 6 example (inputs from memory), arithmetic redone by hand.
	s = exact.Stop{
		Arriving: exact.State{Density: 20, Flow: 1000}, Stopped: exact.State{Density: 150},
		Leaving: exact.State{Density: 75, Flow: 2000}, Time: 15 * second,
	}
	near(t, "w12", exact.Shock(s.Arriving, s.Stopped), -7.692308, 1e-6)
	near(t, "w23", exact.Shock(s.Stopped, s.Leaving), -26.666667, 1e-7)
	near(t, "w13", exact.Shock(s.Arriving, s.Leaving), 18.181818, 1e-7)
	near(t, "at the end of red", s.AtRelease()*mile, 169.2308, 1e-6)
	near(t, "longest", s.Longest()*mile, 237.8378, 1e-6)
	near(t, "dissipates", s.Dissipates()/second, 15, 1e-9)
}

func TestShockValues(t *testing.T) {
	// Full closure, course exercise (inputs seen): 5000 veh/h at 45 mi/h; 400 veh stand on half a mile.
	near(t, "full closure", exact.Shock(exact.State{Density: 5000. / 45, Flow: 5000}, exact.State{Density: 800}), -7.258065, 1e-6)
	// Truck, HKUST CIVL 262, tutorial quiz 4, 2009, published: rear of the platoon +2.5 mi/h, front -6 mi/h.
	platoon := exact.State{Density: 100, Flow: 1200}
	near(t, "rear", exact.Shock(exact.State{Density: 20, Flow: 1000}, platoon), 2.5, 1e-12)
	near(t, "front", exact.Shock(platoon, exact.State{Density: 50, Flow: 1500}), -6, 1e-12)
	// Truck, McMaster CIVENG 4TA4, lecture 4 (inputs seen), by hand: +5 km/h.
	near(t, "rear", exact.Shock(exact.State{Density: 30, Flow: 1500}, exact.State{Density: 90, Flow: 1800}), 5, 1e-12)
	// Rolling road-block, Wikibooks Fundamentals of Transportation (inputs seen), by hand: -7.142857 km/h.
	near(t, "tail", exact.Shock(exact.State{Density: 14.4, Flow: 1800}, exact.State{Density: 20, Flow: 1760}), -7.142857, 1e-7)
	// Dump truck, course exercise (inputs seen), by hand: -6.666667 km/h.
	near(t, "tail", exact.Shock(exact.State{Density: 25, Flow: 1500}, exact.State{Density: 100, Flow: 1000}), -6.666667, 1e-7)
}

func TestTrackErrors(t *testing.T) {
	for _, c := range []struct {
		b    exact.Bottleneck
		want string
	}{
		{exact.Bottleneck{Road: road, Length: 20, Demand: exact.Rate{{0, 4001}}}, "exceeds the road's capacity"},
		{exact.Bottleneck{Road: road, Length: 9, Demand: exact.Rate{{0, 3600}, {1, 1800}}, Capacity: exact.Rate{{0, 3000}}}, "the road's 9 m"},
		{exact.Bottleneck{Road: road, Length: 9, Demand: exact.Rate{{0, 3600}}, Capacity: exact.Rate{{0, 3000}}}, "grows for ever"},
	} {
		if _, err := exact.Track(c.b); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want one with %q", err, c.want)
		}
	}
}

// TestTailIsNewells holds the tracked tail against the place where the two branches of Newell's formula are equal,
// with the tail's own discharge as downstream count.
func TestTailIsNewells(t *testing.T) {
	lane := exact.Triangular{V: 3, W: 1, Kj: 4} // capacity 3
	rapid.Check(t, func(t *rapid.T) {
		b := exact.Bottleneck{
			Road: lane, Length: 80,
			Demand:   rates(t, "demand", 2.9, 0),
			Capacity: rates(t, "capacity", 3.5, 2),
			Drop:     rapid.SampledFrom([]float64{0, 0, .1}).Draw(t, "drop"),
		}
		b.Capacity = b.Capacity.Later(b.Length / lane.V)
		b.Capacity = append(exact.Rate{{0, 3}}, b.Capacity...)
		q, err := exact.Track(b)
		if err != nil {
			t.Fatal(err)
		}
		link := exact.LinkTransmission{Road: lane, Length: b.Length, Up: b.Demand.Until, Down: q.Served}
		for s := 0.0; s < 100; s += .37 {
			y := q.Length(s)
			if y < 0 || y == 0 && q.Queue(s) > 1e-9 {
				t.Fatalf("queue of %v m with %v veh at %v", y, q.Queue(s), s)
			}
			if y == 0 {
				continue
			}
			free := b.Demand.Until(s - (b.Length-y)/lane.V)
			queued := q.Served(s-y/lane.W) + lane.Kj*y
			if math.Abs(free-queued) > 1e-6 {
				t.Fatalf("counts at the tail %v m at %v: %v and %v", y, s, free, queued)
			}
			if y > 1e-6 && link.Queued(b.Length-y*1.001-1e-5, s) && !link.Queued(b.Length-y*.5, s) {
				t.Fatalf("queued on the wrong side of the tail at %v", s)
			}
		}
	})
}
