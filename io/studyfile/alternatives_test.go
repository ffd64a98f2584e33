package studyfile

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// corridor is the road of these tests, links E1 to E5 of 3 lanes and 2 km with ramps R2 and R4 that join and X2 and X3
// that leave:
//
//	E1 -(X2)- E2 -(R2)- E3 -(X3)- E4 -(R4)- E5
func corridor(t *testing.T) *ctm.Scenario {
	t.Helper()
	p := diagram.Params{FreeSpeed: 100 / 3.6, Capacity: 2000.0 / 3600, JamDensity: 0.12}
	d, err := diagram.New("triangular", p)
	if err != nil {
		t.Fatal(err)
	}
	var links []network.Link
	add := func(name string, from, to network.NodeID, length, lanes float64) {
		kind := "freeway"
		if lanes < 3 {
			kind = "ramp"
		}
		links = append(links, network.Link{Name: name, Kind: kind, From: from, To: to, Length: length, Lanes: lanes, Diagram: d, Shape: "triangular", Params: p})
	}
	for i := range 5 {
		add(fmt.Sprintf("E%d", i+1), network.NodeID(i), network.NodeID(i+1), 2000, 3)
	}
	add("X2", 1, 6, 400, 1)
	add("R2", 7, 2, 400, 1)
	add("X3", 3, 8, 400, 1)
	add("R4", 9, 4, 400, 1)
	nodes := make([]network.Node, 10)
	for i := range nodes {
		nodes[i].Name = fmt.Sprintf("N%d", i)
	}
	n, err := network.New(nodes, links)
	if err != nil {
		t.Fatal(err)
	}
	turn := func(from, a, b network.LinkID, share float64) demand.Turning {
		return demand.Turning{Node: n.Links[from].To, From: from, To: []network.LinkID{a, b}, Class: demand.AllClasses, Fractions: [][]float64{{1 - share, share}}}
	}
	entry := func(link network.LinkID, flow float64) demand.Entry {
		return demand.Entry{Link: link, Mix: []float64{1}, Flow: demand.Constant(flow / 3600)}
	}
	return &ctm.Scenario{
		Name: "base", Network: n, Horizon: ctm.Horizon{Start: 18 * 3600, End: 30 * 3600, Cell: 100, Report: 300},
		Demand: &demand.Demand{
			Classes:  []demand.Class{{Name: "vehicle", PCE: 1}},
			Entries:  []demand.Entry{entry(0, 3000), entry(6, 400), entry(8, 500)},
			Turnings: []demand.Turning{turn(0, 1, 5, 0.1), turn(2, 3, 7, 0.2)},
		},
	}
}

// readAlternatives reads the [[alternative]] tables of a study file on a base, and returns what it reports, as users see it.
func readAlternatives(t *testing.T, base *ctm.Scenario, text string) (list []Alternative, faulty, warnings []string) {
	t.Helper()
	d := &draft{f: &faults{}, Study: Study{File: "study.toml", Base: base}}
	for _, name := range []string{"default", "freeway", "ramp"} {
		d.Diagrams = append(d.Diagrams, Diagram{Name: name})
	}
	doc, ok := decode(d.File, []byte(text), d.f)
	if !ok {
		t.Fatal(d.f.err())
	}
	d.doc, d.root = doc, doc.root(d.f)
	d.alternatives()
	_ = d.f.err() // sorts them
	for _, e := range d.f.list {
		faulty = append(faulty, e.Error())
	}
	return d.Alternatives, faulty, d.Warnings
}

// good reads alternatives that must be right.
func good(t *testing.T, base *ctm.Scenario, text string) []Alternative {
	t.Helper()
	list, faulty, _ := readAlternatives(t, base, text)
	for _, f := range faulty {
		t.Error(f)
	}
	return list
}

// The example of the contract, both numbers and the source given.
func TestLaneClosureOfTheContract(t *testing.T) {
	base := corridor(t)
	a := good(t, base, `
[[alternative]]
name = "two-lane-night"
title = "Two lanes closed overnight"
[[alternative.lane_closure]]
links = ["E3", "E4"]
from = "300 m"
to = "3.1 km"
lanes = 1
start = "20:00"
end = "29:00"
capacity = "1550 veh/h/lane"
discharge = "1450 veh/h/lane"
source = "counts of last spring"
speed_limit = "80 km/h"
`)[0]
	c := a.Scenario.Measures[0].(*measure.LaneClosure)
	want := measure.LaneClosure{
		Stretch: []measure.Span{{Link: 2, From: 300, To: math.Inf(1)}, {Link: 3, From: 0, To: 1100}}, Lanes: 1, Start: 72000, End: 104400,
		Capacity: 1550.0 / 3600, Discharge: 1450.0 / 3600, Speed: 80000.0 / 3600, Source: "counts of last spring",
	}
	if fmt.Sprint(*c) != fmt.Sprint(want) {
		t.Errorf("got  %+v\nwant %+v", *c, want)
	}
	text := "1 of 3 lanes closed from 300 m of link `E3` to 1.1 km of link `E4`, 20:00-29:00, 1,550 veh/h per open lane before a queue forms and 1,450 veh/h out of it, at most 80 km/h; counts of last spring"
	if got := a.Changes(unit.Metric); len(got) != 1 || got[0] != text {
		t.Errorf("got  %s\nwant %s", got, text)
	}
	if a.Name != "two-lane-night" || a.Title != "Two lanes closed overnight" || a.Scenario.Name != a.Name {
		t.Errorf("name %q, title %q, scenario %q", a.Name, a.Title, a.Scenario.Name)
	}
	if r := a.Moved; r.Base != r.Travelled || r.Suppressed != 0 || r.Base != 12*3900 {
		t.Errorf("record %+v, want 46800 vehicles that all travel", r)
	}
}

// Base and alternatives stand on the same cuts, whichever alternative brought them.
func TestOneGridForAll(t *testing.T) {
	base := corridor(t)
	list := good(t, base, `
[[alternative]]
name = "a"
lane_closure = [{ links = ["E3"], from = "500 m", to = "900 m", lanes = 1 }]
[[alternative]]
name = "b"
incident = [{ link = "E5", at = "1 km", capacity_left = 0.49, start = "19:00", end = "20:00" }]
[[alternative]]
name = "c"
`)
	if len(base.Cuts) != 4 {
		t.Errorf("%d cuts, want 4: two of each measure", len(base.Cuts))
	}
	for _, a := range list {
		if !slices.Equal(a.Scenario.Cuts, base.Cuts) {
			t.Errorf("alternative `%s` has other cuts than the base", a.Name)
		}
	}
	if list[2].Scenario.Network != base.Network {
		t.Error("an alternative without changes has another network")
	}
}

// The example of the contract: 35 % and 45 % of 500 veh/h from 20:00 to 29:00 (4500 vehicles) move, 20 % stay at home.
func TestRampClosureMovesEntries(t *testing.T) {
	base := corridor(t)
	a := good(t, base, `
[[alternative]]
name = "ramp"
[[alternative.ramp_closure]]
link = "R4"
start = "20:00"
end = "29:00"
divert = [ { to = "R2", share = 0.35 }, { to = "E1", share = "45 %" } ]
`)[0]
	r := a.Moved
	if len(r.Moves) != 2 || math.Abs(r.Moves[0].Vehicles-1575) > 1e-6 || math.Abs(r.Moves[1].Vehicles-2025) > 1e-6 {
		t.Errorf("moves %+v, want 1575 and 2025 vehicles", r.Moves)
	}
	if math.Abs(r.Suppressed-900) > 1e-6 || math.Abs(r.Travelled-(r.Base-900)) > 1e-6 {
		t.Errorf("record %+v, want 900 suppressed", r)
	}
	note := "closed link `R4`: 1575.0 vehicles go to `R2`, 2025.0 vehicles go to `E1`, 900.0 do not travel"
	if !slices.Contains(a.Notes, note) {
		t.Errorf("no note %q in %q", note, a.Notes)
	}
}

// An off-ramp: 10 % of 3000 veh/h for an hour, of which 80 % leave at the next one. Fraction there: E2 carries 2940
// (60 do not travel), E3 3340; the 20 % of the base (3100: 2700+400) are 620, and 240 more: 860/3340.
func TestRampClosureMovesTurns(t *testing.T) {
	base := corridor(t)
	a := good(t, base, `
[[alternative]]
name = "exit"
ramp_closure = [{ link = "X2", start = "20:00", end = "21:00", divert = [{ to = "X3", share = 0.8 }] }]
`)[0]
	f := a.Scenario.Demand.Lookup(2, 0).At(20.5 * 3600)[1]
	if math.Abs(f-860.0/3340) > 1e-12 {
		t.Errorf("fraction %v, want %v", f, 860.0/3340)
	}
	if r := a.Moved; math.Abs(r.Moves[0].Vehicles-240) > 1e-6 || math.Abs(r.Suppressed-60) > 1e-6 {
		t.Errorf("record %+v, want 240 moved and 60 suppressed", r)
	}
}

func TestDemandChange(t *testing.T) {
	base := corridor(t)
	a := good(t, base, `
[[alternative]]
name = "less"
demand_change = [{ entries = ["E1"], factor = 0.9, start = "20:00", end = "21:00" }, { factor = 1.1, start = "22:00", end = "23:00" }]
speed_limit = [{ links = ["E1", "E2"], limit = "50 mph" }]
meter = [{ link = "R2", rate = "900 veh/h", end = "20:00" }, { link = "R2", rate = "300 veh/h", start = "20:00" }]
`)[0]
	if r := a.Moved; math.Abs(r.Suppressed-300) > 1e-6 || math.Abs(r.Added-390) > 1e-6 || math.Abs(r.Travelled-r.Base-90) > 1e-6 {
		t.Errorf("record %+v, want 300 suppressed and 390 added", r)
	}
	want := []string{
		"demand of `E1` times 0.9, 20:00-21:00", "demand of all entries times 1.1, 22:00-23:00", "speed limit of 50 mph on links `E1`, `E2`, 18:00-30:00",
		"meter at the end of link `R2`, 18:00-20:00: at most 900 veh/h", "meter at the end of link `R2`, 20:00-30:00: at most 300 veh/h",
	}
	if got := a.Changes(unit.US); !slices.Equal(got, want) {
		t.Errorf("got  %q\nwant %q", got, want)
	}
}

// A work zone of the check table (design notes, section 8.1): 3 to 2 lanes, urban, drums, night, 2 ft: queue discharge
// 1742.5 and, before the cap of 2000 veh/h, 2012.12 pc/h per lane; by hand 1742.5/0.9 = 1936.1 with alpha 10 %.
func TestWorkZone(t *testing.T) {
	for _, c := range []struct {
		zone                string
		capacity, discharge float64 // veh/h per lane
		notes               string
	}{
		{`{ barrier = "soft", area = "urban", lateral_distance = "2 ft", light = "night" }`, 2000, 1742.5, "capacity capped at the normal 2,000 veh/h per lane"},
		{`{ lateral_distance = "2 ft", light = "night", alpha = "10 %" }`, 1742.5 / 0.9, 1742.5, "drop 10 %: 1936 pc/h"},
		{`{ lateral_distance = "2 ft", light = "night", alpha = "10 %", coefficients = { base = 2193 } }`, 2000, 1842.5, "base = 2193"},
		{`{ lateral_distance = "2 ft", light = "night", heavy_vehicles = 0.2 }`, 2012.124711 / 1.2, 1742.5 / 1.2, "20 % heavy vehicles: factor 0.8333"},
		{`{ lateral_distance = "2 ft", light = "night", ramp_density = 1 }`, 2000, 1742.5, "0.6214 ramps per km"},
		{`{ method = "rule" }`, 1600, 0, "HCM 2000"},
		{`{ method = "rule", intensity = -100, ramp = 50, heavy_vehicles = "10 %", heavy_equivalent = 1.5 }`, 1450 / 1.05, 0, "1,381 veh/h per open lane"},
		{`{ method = "rule", term = "long" }`, 1450, 0, "HCM 2010, exhibit 10-14"},
	} {
		base := corridor(t)
		a := good(t, base, "[[alternative]]\nname = \"w\"\n[[alternative.lane_closure]]\nlinks = [\"E3\"]\nlanes = 1\nwork_zone = "+c.zone)[0]
		m := a.Scenario.Measures[0].(*measure.LaneClosure)
		if math.Abs(m.Capacity*3600-c.capacity) > 1e-3 || math.Abs(m.Discharge*3600-c.discharge) > 1e-3 {
			t.Errorf("%s: %v and %v veh/h, want %v and %v", c.zone, m.Capacity*3600, m.Discharge*3600, c.capacity, c.discharge)
		}
		if all := strings.Join(a.Notes, "\n"); !strings.Contains(all, c.notes) {
			t.Errorf("%s: no %q in\n%s", c.zone, c.notes, all)
		}
	}
}

// Another shape with the same free speed and capacity: a parabola's capacity is vf kj/4, so the jam density becomes
// 4*2000/100 = 80 veh/km; ramps keep theirs; the base's network stays as it was.
func TestDiagramChange(t *testing.T) {
	base := corridor(t)
	a := good(t, base, `
[[alternative]]
name = "parabola"
diagram_change = [{ diagram = "freeway", shape = "greenshields" }]
`)[0]
	n := a.Scenario.Network
	if d := n.Links[0].Diagram; math.Abs(d.Jam()-0.08) > 1e-12 || math.Abs(diagram.Capacity(d)-2000.0/3600) > 1e-12 || n.Links[0].Shape != "greenshields" {
		t.Errorf("jam density %v, capacity %v, shape %s", d.Jam(), diagram.Capacity(d), n.Links[0].Shape)
	}
	if n.Links[5].Shape != "triangular" || base.Network.Links[0].Shape != "triangular" {
		t.Error("another diagram was changed too")
	}
	if l, ok := n.Link("E3"); !ok || l != 2 {
		t.Error("ids moved")
	}
}

// An alternative that changes nothing gives the base's cells to the last bit, on the grid that the others cut.
func TestNothingChanged(t *testing.T) {
	base := corridor(t)
	list := good(t, base, `
[[alternative]]
name = "nothing"
demand_change = [{ factor = 1 }]
[[alternative]]
name = "works"
lane_closure = [{ links = ["E3"], from = "512 m", to = "1.3 km", lanes = 1, capacity = "1400 veh/h/lane" }]
`)
	cells := func(sc *ctm.Scenario) []float64 {
		m, err := ctm.New(sc)
		if err != nil {
			t.Fatal(err)
		}
		for m.View().Time() < 20*3600 {
			m.Step()
		}
		return m.View().Cars()
	}
	same, works := cells(list[0].Scenario), cells(list[1].Scenario)
	if !slices.Equal(cells(base), same) {
		t.Error("an alternative without changes differs from the base")
	}
	if len(works) != len(same) || slices.Equal(works, same) {
		t.Error("the works stand on another grid, or change nothing")
	}
}
