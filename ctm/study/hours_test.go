package study_test

import (
	"context"
	"fmt"
	"math"
	"slices"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
)

var policy = []study.Limit{
	{Name: "queue", Kind: study.QueueLimit, Length: 1200},
	{Name: "long queue", Kind: study.QueueLimit, Length: 600, For: 1800},
	{Name: "delay", Kind: study.DelayLimit, PerVehicle: 240, AboveNormal: true},
	{Name: "ramp free", Kind: study.ReachLimit, Nodes: []network.NodeID{1}},
}

// Every window run on its own from the beginning to the end, and every limit held against it: Hours must say the same.
func TestHoursAgreeWithBruteForce(t *testing.T) {
	for name, lanes := range map[string]float64{"no queue in the base": 3, "a queue in the base": 2} {
		t.Run(name, func(t *testing.T) {
			base := road(t, lanes, []float64{1500, 2600, 3900, 3600, 2300, 2500, 2900, 1500, 800, 800}, 400)
			shift := closed(t, base, 1400)
			var starts, durations []float64
			for s := 0.0; s <= 8; s += 0.75 {
				starts = append(starts, s*hour)
			}
			for d := 0.5; d <= 3; d += 0.5 {
				durations = append(durations, d*hour)
			}
			trunk, err := study.NewTrunk(context.Background(), base, starts, &study.Options{})
			if err != nil {
				t.Fatal(err)
			}
			rows, err := study.Hours(context.Background(), trunk, shift, policy, starts, durations, nil)
			if err != nil {
				t.Fatal(err)
			}
			count := make(map[study.State]int)
			for i := range rows {
				count[rows[i].State]++
				compareWindow(t, base, shift, &rows[i])
			}
			for _, s := range []study.State{study.NotComputed, study.Kept, study.Broken, study.Pruned} {
				if count[s] == 0 {
					t.Errorf("no window is in state %d: the case is too easy", s)
				}
			}
		})
	}
}

// compareWindow runs a window by itself.
func compareWindow(t *testing.T, base *ctm.Scenario, shift study.Shift, row *study.WindowResult) {
	t.Helper()
	if row.State == study.NotComputed {
		if row.End <= base.Horizon.End {
			t.Errorf("%v fits, but was not computed", row.Window)
		}
		return
	}
	normal, r := run(t, base), shifted(t, shift, row.Start/hour, row.End/hour)
	verdicts, err := study.JudgeAll(policy, r, normal)
	if err != nil {
		t.Fatal(err)
	}
	broken := ""
	worst, longest := 0.0, 0.0
	for i := range verdicts {
		if !verdicts[i].Kept && broken == "" {
			broken = verdicts[i].Limit.Name
		}
		switch verdicts[i].Limit.Name {
		case "delay":
			worst = verdicts[i].Value
		case "queue":
			longest = verdicts[i].Value
		}
	}
	what := fmt.Sprintf("%.2f to %.2f h", row.Start/hour, row.End/hour)
	kept := row.State == study.Kept
	if kept != (broken == "") && row.Limit != study.Outlasts {
		t.Errorf("%s: state %d (%s), brute force breaks %q", what, row.State, row.Limit, broken)
	}
	if row.State == study.Pruned {
		return
	}
	near(t, what+" queue", row.Queue, longest, 1e-3)
	near(t, what+" delay", row.Delay, worst, 1e-3)
	near(t, what+" added", row.Added, r.Totals.Delay-normal.Totals.Delay, 1)
}

// Works of 1 h at 3600 veh/h arriving before 2800 veh/h: 800 vehicles wait when they end (deterministic queue).
// Reopened, 6000 veh/h leave, 3600 still arrive: the queue is gone 800/2400 h = 20 min later. Delay
// 800*1/2 + 800*(1/3)/2 = 533 veh h; a queue that takes room delays as much as one that does not (Newell 1993). The
// queue of E1 (933 veh/h/lane, 220 veh/km) has 184 veh/km more than the traffic that arrives: 1 km holds 184, so the
// rest passes the ramp at N1, and fills 616/208 = 3.0 of the 6 km beyond.
func TestWindowByHand(t *testing.T) {
	base := road(t, 3, []float64{3200, 3200, 3200, 3200, 3200, 3200, 1500, 1500}, 400)
	shift := closed(t, base, 1400)
	starts := []float64{1 * hour}
	trunk, err := study.NewTrunk(context.Background(), base, starts, &study.Options{})
	if err != nil {
		t.Fatal(err)
	}
	rows, err := study.Hours(context.Background(), trunk, shift, nil, starts, []float64{1 * hour}, nil)
	if err != nil {
		t.Fatal(err)
	}
	row := rows[0]
	near(t, "added veh h", row.Added/hour, 533.3, 533.3*0.03)
	if row.State != study.Kept || !slices.Equal(row.Reaches, []network.NodeID{1}) {
		t.Errorf("state %d, reaches %v, want node 1", row.State, row.Reaches)
	}
	near(t, "gone h", row.Gone/hour, 2+1.0/3, 0.15)
	if row.Computed >= base.Horizon.End-hour || math.IsNaN(row.Computed) {
		t.Errorf("computed until %.2f h: it is the base again before 5 h", row.Computed/hour)
	}
}
