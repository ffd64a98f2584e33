package study_test

import (
	"errors"
	"math"
	"testing"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
)

// judge holds one limit against works of 1 h from 1:00, 1400 veh/h/lane, 3600 veh/h arriving (TestWindowByHand).
func judge(t *testing.T, l study.Limit) study.Verdict {
	t.Helper()
	base := road(t, 3, []float64{3200, 3200, 3200, 3200, 1500}, 400)
	shift := closed(t, base, 1400)
	normal := run(t, base)
	v, err := study.Judge(&l, shifted(t, shift, 1, 2), normal)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// The works' queue grows by 800 veh/h. In E1 (1 km before the works) 184 veh/km fit beside the traffic that arrives, in
// E0 208 veh/km (80 - 10.67 = 69.33 veh/km and lane): after 1 h the tail stands 1 + (800-184)/208 = 3.96 km before
// the works. Within 13.8 min it reaches the ramp; it is 2 km long after (184+208)/800 h = 29.4 min. The last one to
// arrive before the reopening waits 800/2800 h, were it not reopened; it is worst off with the wave of the reopening,
// which runs back at 20 km/h and meets the tail's vehicle on its way.
func TestVerdictsByHand(t *testing.T) {
	v := judge(t, study.Limit{Kind: study.QueueLimit, Length: 2000})
	if v.Kept || v.Unit != "m" {
		t.Errorf("a queue of about 4 km is not within 2 km: %+v", v)
	}
	near(t, "allowed", v.Allowed, 2000, 0)
	near(t, "margin", v.Margin, v.Allowed-v.Value, 1e-9)
	near(t, "first broken h", v.FirstBroken/hour, 1+29.4/60, 0.1)

	// The tail stays beyond 2 km from 29.4 min on until after the reopening: at least the 30.6 min to 2:00.
	v = judge(t, study.Limit{Kind: study.QueueLimit, Length: 2000, For: 20 * 60})
	if v.Kept || v.Unit != "s" || v.Value < 30*60 {
		t.Errorf("longer than 2 km for more than 20 min: %+v", v)
	}
	near(t, "first broken h", v.FirstBroken/hour, 1+(29.4+20)/60, 0.13)
	if v = judge(t, study.Limit{Kind: study.QueueLimit, Length: 2000, For: 2 * hour}); !v.Kept || !math.IsNaN(v.FirstBroken) {
		t.Errorf("longer than 2 km for less than 2 h: %+v", v)
	}

	// N1 lies 1 km before the works, N0 7 km.
	v = judge(t, study.Limit{Kind: study.ReachLimit, Nodes: []network.NodeID{0, 1}})
	near(t, "nodes reached", v.Value, 1, 0)
	near(t, "reached N1 h", v.FirstBroken/hour, 1+13.8/60, 0.05)
	if v = judge(t, study.Limit{Kind: study.ReachLimit, Nodes: []network.NodeID{0}}); !v.Kept {
		t.Errorf("N0 is not reached: %+v", v)
	}

	// 3600 veh/h arrive on two open lanes: 1800 veh/h per lane against 1400, 400 too many.
	v = judge(t, study.Limit{Kind: study.FlowLimit, PerLane: 1400 * vehh})
	near(t, "margin veh/h/lane", v.Margin*hour, -400, 1)
	near(t, "first broken h", v.FirstBroken/hour, 1, 1e-9)
	if v = judge(t, study.Limit{Kind: study.FlowLimit, PerLane: 1900 * vehh}); !v.Kept {
		t.Errorf("1800 is below 1900: %+v", v)
	}

	// Two of three lanes stay open.
	v = judge(t, study.Limit{Kind: study.LanesLimit, Open: 3})
	near(t, "lanes margin", v.Margin, -1, 0)
	if v.Kept || v.FirstBroken != hour {
		t.Errorf("two lanes are not three: %+v", v)
	}
	if v = judge(t, study.Limit{Kind: study.LanesLimit, Open: 2}); !v.Kept || v.Margin != 0 {
		t.Errorf("two lanes are two: %+v", v)
	}
}

// Who arrives just before the works close the hour waits longest: the queue serves first in, first out, so the number
// n(t) = 800 t of those ahead of schedule, and a vehicle that would pass at t passes when the count of departures
// reaches its own: at 3600 t = 2800 s for s <= 1 h, so t = 0.7778 h and the delay is 0.2222 h = 13.3 min (Newell's
// cumulative curves). The queue's vehicles from the ramp share it: N1 lies inside it, and the mainline there is served
// in proportion to capacity (3 to 1), the ramp wants 400 < 700 and never waits: the mainline of 3200 gets 2400, and
// its vehicles wait more: 3200 t = 2400 s beyond N1 makes 0.25 h at most = 15 min.
func TestDelayByHand(t *testing.T) {
	v := judge(t, study.Limit{Kind: study.DelayLimit, PerVehicle: 15 * 60, AboveNormal: true})
	if v.Value < 13.3*60*0.95 || v.Value > 15*60*1.03 || v.Unit != "s" {
		t.Errorf("worst delay %.1f min, want 13.3 to 15", v.Value/60)
	}
	free := judge(t, study.Limit{Kind: study.DelayLimit, PerVehicle: 15 * 60})
	near(t, "above free, no queue in the base", free.Value, v.Value, 1)
}

// A queue that the base has too is the road's own.
func TestNormalQueuesDoNotCount(t *testing.T) {
	base := road(t, 2, []float64{1500, 4600, 4600, 1500, 1500, 1000, 1000}, 400)
	shift := closed(t, base, 1900)
	normal := run(t, base)
	l := study.Limit{Kind: study.QueueLimit, Length: 100}
	if v, err := study.Judge(&l, normal, nil); err != nil || v.Kept {
		t.Errorf("by itself the base's queue breaks the limit: %+v, %v", v, err)
	}
	quiet := shifted(t, shift, 5, 6) // 1400 veh/h on two lanes
	for _, l := range []study.Limit{l, {Kind: study.ReachLimit, Nodes: []network.NodeID{0, 1, 2}}, {Kind: study.DelayLimit, PerVehicle: 10, AboveNormal: true}} {
		if v, err := study.Judge(&l, quiet, normal); err != nil || !v.Kept || v.Value > 1 {
			t.Errorf("works that hold nobody back: %s: %+v, %v", l.Kind, v, err)
		}
	}
}

func TestJudgeRefuses(t *testing.T) {
	base := road(t, 3, []float64{1000}, 100)
	base.Corridors = nil
	r := run(t, base)
	if _, err := study.Judge(&study.Limit{Kind: study.DelayLimit, PerVehicle: 60}, r, r); !errors.Is(err, study.ErrNoCorridor) {
		t.Errorf("a delay limit without a corridor: %v", err)
	}
	if _, err := study.Judge(&study.Limit{Kind: "noise"}, r, r); err == nil {
		t.Error("an unknown kind is not refused")
	}
	if v, err := study.Judge(&study.Limit{Kind: study.LanesLimit, Open: 1}, r, r); err != nil || !v.Kept || !math.IsNaN(v.Value) {
		t.Errorf("no closure: %+v, %v", v, err)
	}
}
