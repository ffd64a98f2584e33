package measure_test

import (
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// turn makes constant turning fractions at the end of a link.
func turn(node, from int, to []network.LinkID, share ...float64) demand.Turning {
	return demand.Turning{Node: network.NodeID(node), From: network.LinkID(from), To: to, Class: demand.AllClasses, Fractions: [][]float64{share}}
}

// An off-ramp (L1, a tenth of 2000 veh/h) is shut from 1:00 to 2:00: 60 % leave at the next one (L3, a fifth), the rest
// does not travel. In the steady hour 1:15 to 1:45 the exit L3 gets 0.2*1800 + 0.6*200 = 480 veh/h and the end of the
// road 1440; over the whole run every vehicle is accounted for: 200 bound for L1 in the window, 120 moved, 80 stay away.
func TestOffRampClosureReconciles(t *testing.T) {
	roads := []link{{0, 1, 2, 2}, {1, 2, 0.4, 1}, {1, 3, 2, 2}, {3, 4, 0.4, 1}, {3, 5, 2, 2}}
	base := &demand.Demand{
		Classes: []demand.Class{{Name: "vehicle", PCE: 1}},
		Entries: []demand.Entry{steps(0, 1, 2000, 2000, 2000, 0)},
		Turnings: []demand.Turning{
			turn(1, 0, []network.LinkID{1, 2}, 0.1, 0.9), turn(3, 2, []network.LinkID{3, 4}, 0.2, 0.8),
		},
	}
	sc := study(t, triangular(t), roads, base, ctm.Horizon{End: 4 * hour, Cell: 100, Report: 300})
	before := run(t, sc).View().Totals()

	w := demand.Window{From: hour, To: 2 * hour}
	r := demand.Revise(base, demand.Window{To: 4 * hour})
	if err := r.MoveThrough(sc.Network, 1, []demand.Share{{To: 3, Share: 0.6}}, w); err != nil {
		t.Fatal(err)
	}
	alt := *sc
	alt.Demand = r.Demand()
	with(t, &alt, &measure.RampClosure{Link: 1, Start: w.From, End: w.To})
	m, err := ctm.New(&alt)
	if err != nil {
		t.Fatal(err)
	}
	var out [2][5]float64
	for i, time := range []float64{1.25 * hour, 1.75 * hour} {
		for m.View().Time() < time-1e-6 {
			m.Step()
		}
		for l := range out[i] {
			out[i][l] = m.View().Out(network.LinkID(l), 0)
		}
	}
	near(t, "closed exit", out[1][1]-out[0][1], 0, 0)
	near(t, "next exit", (out[1][3]-out[0][3])*2, 480, 0.002)
	near(t, "end of the road", (out[1][4]-out[0][4])*2, 1440, 0.002)
	for m.View().Time() < 4*hour-1e-6 {
		m.Step()
	}
	after, rec := m.View().Totals(), r.Record()
	near(t, "moved", rec.Moves[0].Vehicles, 120, 1e-9)
	near(t, "suppressed", rec.Suppressed, 80, 1e-9)
	near(t, "base less suppressed", after.Wanted, before.Wanted-rec.Suppressed, 1e-9)
	near(t, "all have left", after.Left, after.Wanted, 1e-9)
}

// An on-ramp is shut for an hour: 50 % of its 400 veh/h go to the ramp before, 30 % do not travel, 20 % go to the main
// road's entry.
func TestOnRampClosureReconciles(t *testing.T) {
	roads := []link{{0, 1, 2, 2}, {2, 1, 0.4, 1}, {1, 3, 2, 2}, {4, 3, 0.4, 1}, {3, 5, 2, 2}}
	base := &demand.Demand{
		Classes: []demand.Class{{Name: "vehicle", PCE: 1}},
		Entries: []demand.Entry{steps(0, 1, 1500, 1500, 1500, 0), steps(1, 1, 300, 300, 300, 0), steps(3, 1, 400, 400, 400, 0)},
	}
	sc := study(t, triangular(t), roads, base, ctm.Horizon{End: 4 * hour, Cell: 100, Report: 300})
	before := run(t, sc)
	w := demand.Window{From: hour, To: 2 * hour}
	r := demand.Revise(base, demand.Window{To: 4 * hour})
	r.MoveEntry(3, []demand.Share{{To: 1, Share: 0.5}, {To: 0, Share: 0.2}}, w)
	alt := *sc
	alt.Demand = r.Demand()
	with(t, &alt, &measure.RampClosure{Link: 3, Start: w.From, End: w.To})
	after := run(t, &alt)
	in := func(m *ctm.Model, l network.LinkID) float64 { return m.View().In(l, 0) }
	near(t, "main road", in(after, 0)-in(before, 0), 80, 1e-9)
	near(t, "ramp before", in(after, 1)-in(before, 1), 200, 1e-9)
	near(t, "closed ramp", in(after, 3)-in(before, 3), -400, 1e-9)
	near(t, "suppressed", r.Record().Suppressed, 120, 1e-9)
	near(t, "travelled", after.View().Totals().Left, before.View().Totals().Left-120, 1e-9)
}
