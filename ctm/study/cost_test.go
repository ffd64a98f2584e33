package study_test

import (
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/study"
	"example.org/tailback/demand"
)

// The design notes' own check (theory, section 9; no published worked example was found): 1800 veh h of delay, 90 %
// cars with 1.67 persons at 18 per hour, 10 % trucks at 30 per hour: 1800 (0.9*1.67*18 + 0.1*30) = 54,097.20.
func TestMoney(t *testing.T) {
	c := study.Cost{Time: []float64{1.67 * 18 / hour, 30 / hour}, Operating: 0.5 / km}
	d := &demand.Demand{
		Classes: []demand.Class{{Name: "car", PCE: 1}, {Name: "truck", PCE: 2}},
		Entries: []demand.Entry{
			{Mix: []float64{1, 0}, Flow: demand.Constant(500 * vehh)},
			{Mix: []float64{0.8, 0.2}, Flow: demand.Constant(500 * vehh)},
		},
	}
	h := ctm.Horizon{End: 6 * hour}
	near(t, "delay", c.Money(d, h, 1800*hour, 0), 54097.20, 0.005)
	near(t, "distance", c.Money(d, h, 0, 10*km), 5, 1e-9) // 10 veh km at 0.5
	near(t, "both", c.Money(d, h, 1800*hour, 10*km), 54102.20, 0.005)
}
