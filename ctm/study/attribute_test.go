package study_test

import (
	"testing"

	"example.org/tailback/ctm/study"
)

// attribution of the lane drop (link 1, 3 km) and of the works (link 1, 1 km).
func attribution(t *testing.T, main []float64, start, end float64) (drop, works *study.Attribution) {
	t.Helper()
	base := road(t, 2, main, 400)
	shift := closed(t, base, 1400)
	list := study.Attribute(run(t, base), shifted(t, shift, start, end))
	for i := range list {
		a := &list[i]
		switch {
		case a.Place.Link == 1 && a.Place.At > 2900:
			drop = a
		case a.Place.Link == 1 && a.Place.At > 900 && a.Place.At < 1100:
			works = a
		}
	}
	return drop, works
}

// The lane drop takes 4000 veh/h, a tenth of 5000 veh/h leaves before it: 4500 arrive.
func TestAttribution(t *testing.T) {
	// 1400 veh/h at 5:00: the works hold nobody back.
	drop, works := attribution(t, []float64{1500, 4600, 1500, 1500, 1500, 1000, 1000}, 5, 6)
	if drop == nil || drop.What != study.Unchanged || works != nil {
		t.Errorf("quiet works: drop %+v, works %+v", drop, works)
	}
	// At all hours 2800 veh/h come through the works: too few for the drop.
	drop, works = attribution(t, []float64{1500, 4600, 1500, 1500, 1500, 1000, 1000}, 0, 7)
	if drop == nil || drop.What != study.MovedTo || drop.To.Link != 1 || drop.To.At > 1100 || works != nil {
		t.Errorf("works all day: drop %+v, works %+v", drop, works)
	}
	// 1200 veh/h queue before the works from 1:00 to 2:00; reopened, they and the peak meet the drop.
	drop, works = attribution(t, []float64{1500, 3600, 4600, 1500, 1000, 1000, 1000}, 1, 2)
	if drop == nil || drop.What != study.Worsened || !drop.TakesOver || drop.Alt <= drop.Base {
		t.Errorf("works before the peak: drop %+v", drop)
	}
	if works == nil || works.What != study.Appeared || works.Base != 0 || works.TakesOver {
		t.Errorf("works before the peak: works %+v", works)
	}
	// 600 veh h: 1200 veh/h queue for an hour, and no less stands in the queue itself.
	if works != nil {
		near(t, "delay before the works veh h", works.Alt/hour, 600, 60)
	}
}
