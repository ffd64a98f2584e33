package study_test

import (
	"math"
	"slices"
	"testing"

	"example.org/tailback/ctm/study"
	"example.org/tailback/network"
)

// Works of 1 h from 1:00, 7 km from the corridor's first point (TestVerdictsByHand): beyond the ramp the tail runs back
// at 800/208 = 3.85 km/h, and stands 1 + 616/208 = 3.96 km before the works at 2:00. The wave of the reopening runs back
// at 20 km/h and meets it after 3.96/(20 - 3.85) h = 14.7 min, 4.90 km before the works. The scheme spreads the tail and
// the wave that meets it over a cell or two each (100 m): it may miss the last 200 m, which is 1 min of the queue's life.
func TestTailsByHand(t *testing.T) {
	base := road(t, 3, []float64{3200, 3200, 3200, 3200, 1500}, 400)
	rows := study.Tails(shifted(t, closed(t, base, 1400), 1, 2))
	if len(rows) < 5 {
		t.Fatalf("%d rows, want at least the five quarters from 1:00 to 2:15", len(rows))
	}
	for i, row := range rows {
		if row.OffMap || len(row.Exits) != 0 {
			t.Errorf("row %d: off the map %v, exits %v upstream of the tail, want none", i, row.OffMap, row.Exits)
		}
		near(t, "upstream and place", row.X+row.Upstream, 7*km, 1e-6)
		if row.Seen <= row.Start-1 || row.Seen > row.End+1 {
			t.Errorf("row %d: seen at %.0f s, outside %.0f to %.0f s", i, row.Seen, row.Start, row.End)
		}
	}
	at2 := rows[3]
	near(t, "from h", at2.Start/hour, 1.75, 1e-9)
	near(t, "tail at 2:00 m", at2.Upstream, 3960, 100)
	near(t, "growth km/h", at2.Growth*3.6, 3.85, 0.2)
	near(t, "approach km/h", at2.Approach*3.6, 100, 0.5)
	if at2.Tail.Link != 0 || !slices.Equal(at2.Joining, []network.LinkID{3}) {
		t.Errorf("tail %+v, joining %v, want on link 0 and ramp 3", at2.Tail, at2.Joining)
	}
	near(t, "farthest m", rows[4].Upstream, 4900, 200)
}

// Works of 3 h: 184 vehicles fill the first km, 6*208 = 1248 the rest, so the queue leaves the map 1432/800 = 1.79 h
// after 1:00; from then on vehicles wait outside.
func TestTailsLeaveTheMap(t *testing.T) {
	base := road(t, 3, []float64{3200, 3200, 3200, 3200, 1500, 1500, 1000}, 400)
	rows := study.Tails(shifted(t, closed(t, base, 1400), 1, 4)) // 7 km are full after 1.8 h
	off := 0
	for _, row := range rows {
		if row.OffMap {
			off++
			if row.Start < 2.5*hour {
				t.Errorf("off the map in the quarter from %.2f h: 7 km fill by 2.8 h", row.Start/hour)
			}
		}
	}
	if off < 4 {
		t.Errorf("%d quarters off the map, want at least the hour before 4:00", off)
	}
}

// Without a closure the tail is a place on the corridor without a distance. The queue of the lane drop at 9 km (2 of 3
// lanes beyond) stands downstream of no exit but the one that leaves at its head.
func TestTailsWithoutClosure(t *testing.T) {
	rows := study.Tails(run(t, road(t, 2, []float64{1500, 4600, 1500, 1500}, 400)))
	if len(rows) == 0 {
		t.Fatal("no tail of the lane drop's queue")
	}
	for _, row := range rows {
		if !math.IsNaN(row.Upstream) || row.X > 9*km {
			t.Errorf("%+v: want no distance, and a place before 9 km", row)
		}
	}
}
