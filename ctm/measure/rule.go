package measure

import (
	"fmt"
	"sort"
	"strings"
)

// RuleOfThumb is the plain capacity of a work zone without the handbook's newer method.
type RuleOfThumb struct {
	Lanes, Open float64
	LongTerm    bool          // more than three days
	Base        float64       // short-term: pc/s per open lane; 0 stands for 1,600 pc/h
	Intensity   float64       // I: for the kind of work, pc/s per open lane, -160..160 pc/h
	Ramp        float64       // R: for a ramp near the taper, pc/s per open lane, 0..160 pc/h
	Heavy       HeavyVehicles // short-term only
	Capacity    float64       // normal capacity of a lane, veh/s
}

// longTerm lists normal and open lanes with veh/h per open lane (HCM 2010, exhibit 10-14, as restated in
// FHWA-HOP-13-042, appendix D, table 42; the rows 4-2 and 4-3 are from memory).
var longTerm = [...]struct{ lanes, open, flow float64 }{
	{2, 1, 1400}, {3, 1, 1450}, {3, 2, 1450}, {4, 1, 1350}, {4, 2, 1450}, {4, 3, 1500},
}

// Estimate applies the rule. Short-term works (HCM 2000, chapter 22):
//
//	c = (1600 + I - R) f_HV   per open lane
//
// Long-term works take the table of HCM 2010, exhibit 10-14, in vehicles. Both are capped at the normal capacity.
// The rule gives no queue discharge: the diagram's drop applies. It returns an error where the table has no row.
func (r *RuleOfThumb) Estimate() (Estimate, error) {
	var e Estimate
	var c float64
	if r.LongTerm {
		flow, err := longTermFlow(r.Lanes, r.Open)
		if err != nil {
			return e, err
		}
		c = flow / 3600
		e.Source = "rule of thumb for long-term works (HCM 2010, exhibit 10-14)"
		e.note("%g of %g lanes open: %s per open lane", r.Open, r.Lanes, hourly(c))
	} else {
		base := r.Base
		if base == 0 {
			base = 1600.0 / 3600
		}
		c = max(0, base+r.Intensity-r.Ramp) * r.Heavy.Factor()
		e.PreDrop = base + r.Intensity - r.Ramp
		e.Source = "rule of thumb for short-term works (HCM 2000, chapter 22)"
		e.note("(%s %+g for the work - %s for a ramp) pc/h times %s for heavy vehicles: %s per open lane",
			number(base*3600), round(r.Intensity*3600, 4), number(r.Ramp*3600), number(r.Heavy.Factor()), hourly(c))
	}
	e.Capacity = min(c, r.Capacity)
	if c > r.Capacity {
		e.note("capacity capped at the normal %s per lane", hourly(r.Capacity))
	}
	return e, nil
}

// longTermFlow looks a pair of lanes up in the table, veh/h per open lane.
func longTermFlow(lanes, open float64) (float64, error) {
	var known []string
	for _, row := range longTerm {
		if row.lanes == lanes && row.open == open {
			return row.flow, nil
		}
		known = append(known, fmt.Sprintf("%g to %g", row.lanes, row.open))
	}
	sort.Strings(known)
	return 0, fmt.Errorf("the table of long-term works has no row for %g lanes to %g: it has %s", lanes, open, strings.Join(known, ", "))
}
