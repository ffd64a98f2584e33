package study_test

import (
	"context"
	"fmt"
	"math"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/ctm/study"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

const (
	km   = 1000.0
	hour = 3600.0
	vehh = 1 / hour
)

// road is a freeway of three links of 3 lanes, 6, 3 and 2 km, with an on-ramp between the first two (node N1) and an
// off-ramp between the last two (node N2, a tenth leaves). Triangular: 100 km/h, wave 20 km/h, jam 120 veh/km, hence
// 2000 veh/h per lane. The flows are veh/h of the hours of the period from 0:00.
func road(t testing.TB, lastLanes float64, main []float64, ramp float64) *ctm.Scenario {
	t.Helper()
	d, err := diagram.New("triangular", diagram.Params{FreeSpeed: 100 / 3.6, WaveSpeed: 20 / 3.6, JamDensity: 0.12})
	if err != nil {
		t.Fatal(err)
	}
	var nodes []network.Node
	for i := range 6 {
		nodes = append(nodes, network.Node{Name: fmt.Sprintf("N%d", i)})
	}
	link := func(name string, from, to int, length, lanes float64) network.Link {
		return network.Link{Name: name, From: network.NodeID(from), To: network.NodeID(to), Length: length * km, Lanes: lanes, Diagram: d}
	}
	n, err := network.New(nodes, []network.Link{
		link("E0", 0, 1, 6, 3), link("E1", 1, 2, 3, 3), link("E2", 2, 3, 2, lastLanes), link("R", 4, 1, 0.5, 1), link("X", 2, 5, 0.5, 1),
	})
	if err != nil {
		t.Fatal(err)
	}
	q := make([]float64, len(main))
	for i := range q {
		q[i] = main[i] * vehh
	}
	return &ctm.Scenario{
		Name: "base", Network: n,
		Horizon: ctm.Horizon{End: float64(len(main)) * hour, Report: 300, Cell: 100},
		Demand: &demand.Demand{
			Classes: []demand.Class{{Name: "vehicle", PCE: 1}},
			Entries: []demand.Entry{
				{Link: 0, Mix: []float64{1}, Flow: demand.Steps(0, hour, q)},
				{Link: 3, Mix: []float64{1}, Flow: demand.Constant(ramp * vehh)},
			},
			Turnings: []demand.Turning{{Node: 2, From: 1, To: []network.LinkID{2, 4}, Class: demand.AllClasses, Fractions: [][]float64{{0.9, 0.1}}}},
		},
		Corridors: []network.Corridor{{Name: "eastbound", Links: []network.LinkID{0, 1, 2}, StartAt: 10 * km, Chained: true}},
	}
}

// works closes a lane on the second link from 1.0 to 1.6 km.
func works(start, end, capacity float64) *measure.LaneClosure {
	return &measure.LaneClosure{
		Stretch: []measure.Span{{Link: 1, From: 1 * km, To: 1.6 * km}}, Lanes: 1,
		Start: start, End: end, Capacity: capacity * vehh,
	}
}

// closed gives the base with the cuts of the works, and how to move them.
func closed(t testing.TB, sc *ctm.Scenario, capacity float64) study.Shift {
	t.Helper()
	sc.Cuts = works(0, hour, capacity).Cuts(sc.Network, sc.Horizon.Cell)
	return func(w study.Window) (*ctm.Scenario, error) {
		alt := *sc
		alt.Name = "works"
		alt.Measures = []ctm.Measure{works(w.Start, w.End, capacity)}
		return &alt, nil
	}
}

func run(t testing.TB, sc *ctm.Scenario) *study.Result {
	t.Helper()
	r, err := study.Run(context.Background(), sc, &study.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// shifted runs the works over a window given in hours.
func shifted(t testing.TB, shift study.Shift, start, end float64) *study.Result {
	t.Helper()
	sc, err := shift(study.Window{Start: start * hour, End: end * hour})
	if err != nil {
		t.Fatal(err)
	}
	return run(t, sc)
}

func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) && !(math.IsNaN(got) && math.IsNaN(want)) {
		t.Errorf("%s: %.6g, want %.6g within %.3g", what, got, want, tolerance)
	}
}
