package study_test

import (
	"context"
	"errors"
	"math"
	"testing"

	"example.org/tailback/ctm/study"
)

// While the works last 800 veh/h queue, and reopened the queue goes at 2400 veh/h: works of T h delay
// 800 T^2/2 (1 + 1/3) veh h and let the queue go T/3 h after their end (as in TestWindowByHand; the queue stays on the
// map for T <= 1.5 h).
func TestOverrunByHand(t *testing.T) {
	base := road(t, 3, []float64{3200, 3200, 3200, 3200, 1500}, 400)
	shift := closed(t, base, 1400)
	trunk, err := study.NewTrunk(context.Background(), base, []float64{hour}, &study.Options{})
	if err != nil {
		t.Fatal(err)
	}
	rows, err := study.Overrun(context.Background(), trunk, shift, study.Window{Start: 1 * hour, End: 1.75 * hour}, nil)
	if err != nil {
		t.Fatal(err)
	}
	delay := func(h float64) float64 { return 800 * h * h / 2 * 4 / 3 }
	for i, h := range []float64{0.75, 1, 1.25, 1.5} {
		near(t, "added veh h", rows[i].Added/hour, delay(h), 0.04*delay(h))
		if i > 0 {
			near(t, "further veh h", rows[i].Further/hour, delay(h)-delay(h-0.25), 0.06*delay(h))
		}
		if !math.IsNaN(rows[i].Money) {
			t.Error("money without a cost")
		}
	}
	if len(rows) != 9 || rows[8].Late != 2*hour || rows[8].State == study.NotComputed {
		t.Errorf("%d rows, the last %+v: want 0 to 2 h late by quarters", len(rows), rows[len(rows)-1])
	}
	late, err := study.Overrun(context.Background(), trunk, shift, study.Window{Start: 1 * hour, End: 4 * hour}, nil)
	if err != nil || late[8].State != study.NotComputed || !math.IsNaN(late[8].Added) {
		t.Errorf("ends beyond the period: %+v, %v", late[8], err)
	}

	// Gone by 2:20: T + T/3 <= 4/3 h, so all lanes must be open by 2:00; the report interval of 5 min rounds down.
	at, err := study.LatestReopening(context.Background(), trunk, shift, hour, 2*hour+1200)
	if err != nil || at > 2*hour+120 || at < 2*hour-600 {
		t.Errorf("reopening at %.3f h (%v), want 1.85 to 2.03", at/hour, err)
	}
	if _, err := study.LatestReopening(context.Background(), trunk, shift, hour, hour+30); !errors.Is(err, study.ErrTooLate) {
		t.Errorf("gone within half a minute: %v", err)
	}
}
