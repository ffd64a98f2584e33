package exact_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/ctm/exact"
)

func TestFreewayShutDown(t *testing.T) {
	// Problem of the kind in Mannering & Washburn, Principles of Highway Engineering (inputs seen); arithmetic redone
	// by hand. Minutes: 2400 veh/h arrive; closed 20 min, 2200 veh/h for 20 min, then 4400.
	q := exact.NewPointQueue(
		exact.Rate{{0, 40}},
		exact.Rate{{0, 0}, {20, 2200. / 60}, {40, 4400. / 60}}, 0)
	near(t, "queue at 20", q.Queue(20), 800, 1e-12)
	near(t, "queue at 40", q.Queue(40), 866.6667, 1e-7)
	largest, at := q.Largest()
	near(t, "largest", largest, 866.6667, 1e-7)
	near(t, "at", at, 40, 1e-12)
	near(t, "clears", q.Clears(), 66, 1e-12)
	near(t, "delayed", q.Delayed(), 2640, 1e-12)
	near(t, "delay", q.Delay(), 35933.333, 1e-7)
	near(t, "average", q.Delay()/q.Delayed(), 13.611111, 1e-7)
}

func TestRubberNecking(t *testing.T) {
	// The same series (inputs seen); arithmetic redone by hand. Minutes.
	q := exact.NewPointQueue(
		exact.Rate{{0, 3200. / 60}},
		exact.Rate{{0, 2400. / 60}, {15, 3000. / 60}, {30, 3600. / 60}}, 0)
	near(t, "queue at 15", q.Queue(15), 200, 1e-12)
	largest, at := q.Largest()
	near(t, "largest", largest, 250, 1e-12)
	near(t, "at", at, 30, 1e-12)
	near(t, "clears", q.Clears(), 67.5, 1e-12)
	near(t, "delayed", q.Delayed(), 3600, 1e-12)
	near(t, "delay", q.Delay(), 9562.5, 1e-12)
	near(t, "average", q.Delay()/q.Delayed(), 2.65625, 1e-12)
	near(t, "average queue", q.Delay()/q.Clears(), 141.6667, 1e-6)
}

func TestIncidentWithRerouting(t *testing.T) {
	// Oregon State University traffic course, homework solution 2010, published: clears 62.27 min, 3197 veh, largest
	// queue 1058.5 veh; more digits by hand. Minutes.
	q := exact.NewPointQueue(
		exact.Rate{{0, 4000. / 60}, {5, 3000. / 60}},
		exact.Rate{{0, 0}, {12, 1500. / 60}, {27, 4800. / 60}}, 0)
	largest, at := q.Largest()
	near(t, "largest", largest, 1058.3333, 1e-7)
	near(t, "at", at, 27, 1e-12)
	near(t, "clears", q.Clears(), 62.277778, 1e-7)
	near(t, "delayed", q.Delayed(), 3197.2222, 1e-7)
	near(t, "delay", q.Delay(), 36121.991, 1e-7)
	near(t, "average", q.Delay()/q.Delayed(), 11.297929, 1e-7)

	// Scenario A of the same: the 500th vehicle arrives at 7.5, leaves at 35 (published), delay 27.5 min.
	q = exact.NewPointQueue(
		exact.Rate{{0, 4000. / 60}},
		exact.Rate{{0, 0}, {15, 1500. / 60}, {35, 4800. / 60}}, 0)
	near(t, "delay of the 500th", q.DelayOf(500), 27.5, 1e-12)
	largest, _ = q.Largest()
	near(t, "largest", largest, 1833.333, 1e-6)
	near(t, "clears", q.Clears(), 172.5, 1e-12)
	near(t, "delayed", q.Delayed(), 11500, 1e-12)
}

func TestSignalCycle(t *testing.T) {
	// University of Washington CIVL 563, homework 2, 2010 (inputs seen): red and green 30 s, 600 veh/h, 1600 veh/h of
	// green. Average delay r^2/(2 C (1 - lambda/s)) = 12 s, by hand.
	q := exact.NewPointQueue(
		exact.Rate{{0, 600. / 3600}},
		exact.Rate{{0, 0}, {30, 1600. / 3600}}, 0)
	largest, at := q.Largest()
	near(t, "largest", largest, 5, 1e-12)
	near(t, "at", at, 30, 1e-12)
	near(t, "clears", q.Clears()-30, 18, 1e-12)
	near(t, "average", q.Delay()/q.Arrived(60), 12, 1e-12)
	near(t, "served in the cycle", q.Served(60), 10, 1e-12)
}

func TestPointQueueDrop(t *testing.T) {
	// By hand: 3600 veh/h for 1 h, then 1800, past 3000; with 10 % lost while queued: 900 veh at 1 h, cleared 1 h
	// later at 900 veh/h net: 450 + 450 = 900 veh h against (600 + 600*.5)/2 = 450 without.
	arrival, service := exact.Rate{{0, 3600}, {1, 1800}}, exact.Rate{{0, 3000}}
	q := exact.NewPointQueue(arrival, service, .1)
	near(t, "queue", q.Queue(1), 900, 1e-12)
	near(t, "clears", q.Clears(), 2, 1e-12)
	near(t, "delay", q.Delay(), 900, 1e-12)
	q = exact.NewPointQueue(arrival, service, 0)
	near(t, "queue", q.Queue(1), 600, 1e-12)
	near(t, "clears", q.Clears(), 1.5, 1e-12)
	near(t, "delay", q.Delay(), 450, 1e-12)
}

func TestPointQueueEnds(t *testing.T) {
	never := exact.NewPointQueue(exact.Rate{{0, 2}, {10, 1}}, exact.Rate{{0, 3}}, 0)
	if c := never.Clears(); !math.IsNaN(c) {
		t.Errorf("a queue that never was clears at %v, want NaN", c)
	}
	near(t, "delay", never.Delay(), 0, 0)
	near(t, "delay of the 5th", never.DelayOf(5), 0, 1e-12)

	grows := exact.NewPointQueue(exact.Rate{{0, 2}}, exact.Rate{{0, 1}}, 0)
	largest, _ := grows.Largest()
	for what, x := range map[string]float64{"largest": largest, "clears": grows.Clears(), "delay": grows.Delay()} {
		if !math.IsInf(x, 1) {
			t.Errorf("%s = %v, want +Inf", what, x)
		}
	}
	near(t, "delay of the 6th", grows.DelayOf(6), 3, 1e-12) // arrives at 3, leaves at 6

	stays := exact.NewPointQueue(exact.Rate{{0, 2}, {10, 1}}, exact.Rate{{0, 1}}, 0)
	largest, _ = stays.Largest()
	near(t, "largest", largest, 10, 1e-12)
	if c := stays.Clears(); !math.IsInf(c, 1) {
		t.Errorf("clears at %v, want +Inf", c)
	}

	few := exact.NewPointQueue(exact.Rate{{0, 2}, {10, 0}}, exact.Rate{{0, 1}}, 0)
	near(t, "clears", few.Clears(), 20, 1e-12)
	if d := few.DelayOf(30); !math.IsNaN(d) {
		t.Errorf("delay of a vehicle that never comes = %v, want NaN", d)
	}

	// Two queues: 10 veh at 10 gone at 20; 5 veh at 35 gone at 40.
	two := exact.NewPointQueue(exact.Rate{{0, 2}, {10, 0}, {30, 2}, {35, 0}}, exact.Rate{{0, 1}}, 0)
	near(t, "between", two.Queue(25), 0, 1e-12)
	near(t, "clears", two.Clears(), 40, 1e-12)
	near(t, "delay", two.Delay(), 100+25, 1e-12)
	near(t, "delayed", two.Delayed(), 30, 1e-12)

	nothing := exact.NewPointQueue(nil, nil, 0)
	near(t, "queue of nothing", nothing.Queue(1), 0, 0)
}

// rates draws a rate of up to six steps within 10 s that ends with the given flow.
func rates(t *rapid.T, name string, most, last float64) exact.Rate {
	r := exact.Rate{}
	at := 0.0
	for range rapid.IntRange(1, 6).Draw(t, name) {
		r = append(r, exact.Step{At: at, Flow: rapid.Float64Range(0, most).Draw(t, name)})
		at += rapid.Float64Range(.5, 2).Draw(t, name)
	}
	return append(r, exact.Step{At: at, Flow: last})
}

// TestPointQueueIsReflection holds the queue against its definition, max over s <= t of the excess of arrivals over
// service since s, and the delay against the sum of the delays of vehicles.
func TestPointQueueIsReflection(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		arrival, service := rates(t, "arrival", 3, 0), rates(t, "service", 3, 2)
		q := exact.NewPointQueue(arrival, service, 0)
		times := []float64{}
		for x := 0.0; x < 20; x += .25 {
			times = append(times, x)
		}
		for _, r := range []exact.Rate{arrival, service} {
			for _, s := range r {
				times = append(times, s.At)
			}
		}
		for x := 0.0; x < 20; x += .25 {
			want := 0.0
			for _, s := range times {
				if s < x {
					want = max(want, arrival.Until(x)-arrival.Until(s)-service.Until(x)+service.Until(s))
				}
			}
			if got := q.Queue(x); math.Abs(got-want) > 1e-9 {
				t.Fatalf("queue at %v is %v, want %v", x, got, want)
			}
			if got := q.Arrived(x); math.Abs(got-arrival.Until(x)) > 1e-9 {
				t.Fatalf("arrived by %v: %v, want %v", x, got, arrival.Until(x))
			}
		}
		total, sum := arrival.Until(100), 0.0
		const n = 2000
		for i := range n {
			sum += q.DelayOf(total*(float64(i)+.5)/n) * total / n
		}
		if total > 0 && math.Abs(sum-q.Delay()) > 1e-3*(1+total)*20 {
			t.Fatalf("delay %v, sum over vehicles %v", q.Delay(), sum)
		}
	})
}

func TestRate(t *testing.T) {
	r := exact.Rate{{10, 2}, {20, 5}}
	near(t, "before", r.At(9), 0, 0)
	near(t, "at a step", r.At(20), 5, 0)
	near(t, "until 15", r.Until(15), 10, 1e-12)
	near(t, "until 22", r.Until(22), 30, 1e-12)
	near(t, "until 22, 10 s later", r.Later(10).Until(32), 30, 1e-12)
}
