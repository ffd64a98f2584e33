package ctm_test

import (
	"context"
	"fmt"
	"math"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// Units of the tests: km, h and veh of the sources, turned into m, s and veh.
const (
	km   = 1000.0
	hour = 3600.0
	kmh  = km / hour
	vehh = 1 / hour
	vkm  = 1 / km
)

// triangular and greenshields take km/h and veh/km.
func triangular(t testing.TB, vf, w, kj float64) diagram.Diagram {
	return shape(t, "triangular", diagram.Params{FreeSpeed: vf * kmh, WaveSpeed: w * kmh, JamDensity: kj * vkm})
}

func greenshields(t testing.TB, vf, kj float64) diagram.Diagram {
	return shape(t, "greenshields", diagram.Params{FreeSpeed: vf * kmh, JamDensity: kj * vkm})
}

func shape(t testing.TB, name string, p diagram.Params) diagram.Diagram {
	t.Helper()
	d, err := diagram.New(name, p)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// road is a link of a test network: from and to are node numbers.
type road struct {
	from, to int
	km       float64
	lanes    float64
	d        diagram.Diagram
	drop     float64
}

// build makes a scenario from roads named L0, L1, ... between nodes N0, N1, ...
func build(t testing.TB, roads []road, d *demand.Demand, h ctm.Horizon) *ctm.Scenario {
	t.Helper()
	last := 0
	var links []network.Link
	for i, r := range roads {
		last = max(last, r.from, r.to)
		links = append(links, network.Link{
			Name: fmt.Sprintf("L%d", i), From: network.NodeID(r.from), To: network.NodeID(r.to),
			Length: r.km * km, Lanes: r.lanes, Diagram: r.d, Drop: r.drop,
		})
	}
	nodes := make([]network.Node, last+1)
	for i := range nodes {
		nodes[i].Name = fmt.Sprintf("N%d", i)
	}
	n, err := network.New(nodes, links)
	if err != nil {
		t.Fatal(err)
	}
	if d.Classes == nil {
		d.Classes = []demand.Class{{Name: "vehicle", PCE: 1}}
	}
	return &ctm.Scenario{Network: n, Demand: d, Horizon: h}
}

// hourly is an entry whose flow (veh/h) holds for an hour each.
func hourly(link int, flow ...float64) demand.Entry {
	q := make([]float64, len(flow))
	for i := range flow {
		q[i] = flow[i] * vehh
	}
	return demand.Entry{Link: network.LinkID(link), Mix: []float64{1}, Flow: demand.Steps(0, hour, q)}
}

// turn is a row of constant turning fractions.
func turn(node, from int, to map[int]float64) demand.Turning {
	t := demand.Turning{Node: network.NodeID(node), From: network.LinkID(from), Class: demand.AllClasses, Fractions: [][]float64{nil}}
	for l := range 64 {
		if f, ok := to[l]; ok {
			t.To = append(t.To, network.LinkID(l))
			t.Fractions[0] = append(t.Fractions[0], f)
		}
	}
	return t
}

// run makes the model and steps it to its end.
func run(t testing.TB, sc *ctm.Scenario, watches ...ctm.Watch) *ctm.Model {
	t.Helper()
	m, err := ctm.New(sc)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := m.Run(context.Background(), watches...); err != nil {
		t.Fatal(err)
	}
	return m
}

// delay is the time above free flow of the vehicles that have left, plus that of those inside, in veh·h, for a
// chain of links.
func delay(m *ctm.Model) float64 {
	v := m.View()
	sum := 0.0
	for i := range v.Grid().Links {
		l := network.LinkID(i)
		sum += v.Seconds(l, 0) - v.Out(l, 0)*v.Scenario().Network.Links[i].FreeTime()
	}
	return (sum + v.Totals().WaitingSeconds) / hour
}

// near checks a value against one from outside, within a share of it.
func near(t testing.TB, what string, got, want, share float64) {
	t.Helper()
	if math.Abs(got-want) > share*math.Abs(want) {
		t.Errorf("%s: %.6g, want %.6g within %.3g %%", what, got, want, share*100)
	}
}

// trapezoid takes km/h, veh/h per lane and veh/km.
func trapezoid(vf, q, w, kj float64) diagram.Params {
	return diagram.Params{FreeSpeed: vf * kmh, Capacity: q * vehh, WaveSpeed: w * kmh, JamDensity: kj * vkm}
}
