package ctm_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// randomDiagram draws a shape and its parameters, in km/h and veh/km.
func randomDiagram(t *rapid.T, tb testing.TB) diagram.Diagram {
	vf := rapid.Float64Range(40, 120).Draw(t, "vf")
	kj := rapid.Float64Range(90, 160).Draw(t, "kj")
	w := rapid.Float64Range(12, 25).Draw(t, "w")
	p := diagram.Params{FreeSpeed: vf * kmh, JamDensity: kj * vkm, WaveSpeed: w * kmh}
	name := rapid.SampledFrom([]string{
		"triangular", "trapezoidal", "greenshields", "greenberg", "pipes-munjal", "newell-franklin",
		"del-castillo", "smulders", "van-aerde",
	}).Draw(t, "shape")
	tip := vf * w * kj / (vf + w) // capacity of the triangle, veh/h
	switch name {
	case "trapezoidal":
		p.Capacity = 0.8 * tip * vehh
	case "greenshields":
		p.WaveSpeed = 0
	case "smulders":
		p.WaveSpeed, p.CriticalDensity = 0, 0.2*kj*vkm
	case "van-aerde":
		p.WaveSpeed, p.Capacity, p.CriticalDensity = 0, 0.7*tip*vehh, 0.7*tip/(0.8*vf)*vkm
	}
	return shape(tb, name, p)
}

// randomStudy draws a network without turning back: nodes in a row, each link leads from one to a later one,
// every node but the ends has ways in and out; every first link and some others are entries.
func randomStudy(t *rapid.T, tb testing.TB, classes int) *ctm.Scenario {
	count := rapid.IntRange(3, 7).Draw(t, "nodes")
	var roads []road
	add := func(from, to int) {
		roads = append(roads, road{
			from, to, rapid.Float64Range(0.15, 1.5).Draw(t, "km"),
			float64(rapid.IntRange(1, 4).Draw(t, "lanes")), randomDiagram(t, tb),
			rapid.SampledFrom([]float64{0, 0, 0.05, 0.15}).Draw(t, "drop"),
		})
	}
	for i := range count - 1 {
		add(i, i+1)
	}
	for range rapid.IntRange(0, 6).Draw(t, "more") {
		from := rapid.IntRange(0, count-2).Draw(t, "from")
		add(from, rapid.IntRange(from+1, count-1).Draw(t, "to"))
	}
	d := &demand.Demand{}
	for c := range classes {
		d.Classes = append(d.Classes, demand.Class{Name: string(rune('a' + c)), PCE: rapid.Float64Range(0.8, 3).Draw(t, "pce")})
	}
	for i, r := range roads {
		if r.from == 0 || rapid.IntRange(0, 3).Draw(t, "entry") == 0 {
			flow := rapid.SliceOfN(rapid.Float64Range(0, 9000), 2, 2).Draw(t, "flow")
			e := hourly(i, flow...)
			e.Mix = make([]float64, classes)
			for c := range e.Mix {
				e.Mix[c] = 1 / float64(classes)
			}
			d.Entries = append(d.Entries, e)
		}
	}
	sc := build(tb, roads, d, ctm.Horizon{End: 1.5 * hour, Cell: 100, Report: 300})
	addTurns(t, sc)
	return sc
}

// addTurns draws turning fractions for every approach of a node with a choice.
func addTurns(t *rapid.T, sc *ctm.Scenario) {
	n := sc.Network
	for i := range n.Nodes {
		out := n.Out(network.NodeID(i))
		if len(out) < 2 {
			continue
		}
		for _, from := range n.In(network.NodeID(i)) {
			for c := range sc.Demand.Classes {
				weights := rapid.SliceOfN(rapid.Float64Range(0, 1), len(out), len(out)).Draw(t, "turn")
				sum := 1e-3
				for _, w := range weights {
					sum += w
				}
				for k := range weights {
					weights[k] /= sum
				}
				weights[0] += 1e-3 / sum
				sc.Demand.Turnings = append(sc.Demand.Turnings, demand.Turning{
					Node: network.NodeID(i), From: from, To: out, Class: demand.ClassID(c), Fractions: [][]float64{weights},
				})
			}
		}
	}
}

// bounded fails where a density leaves [0, jam].
type bounded struct{ t *rapid.T }

func (b bounded) Observe(v ctm.View) error {
	g := v.Grid()
	for s := range g.Segments {
		seg := &g.Segments[s]
		road := v.Road(s)
		full := road.Diagram.Jam() * road.Lanes * seg.Dx
		for _, n := range v.Cars()[seg.First : seg.First+seg.Cells] {
			if n < 0 || n > full*(1+1e-12) || math.IsNaN(n) {
				b.t.Fatalf("step %d: %v passenger cars in a cell of link %d, where %v fit", v.Step(), n, seg.Link, full)
			}
		}
	}
	return nil
}

// Invariants on random networks, demands and shapes: vehicles are conserved to 1e-9 of those moved, in total
// and class by class, and densities stay in [0, jam] at every step.
func TestConservationAndBounds(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		sc := randomStudy(rt, t, rapid.IntRange(1, 3).Draw(rt, "classes"))
		m := run(t, sc, ctm.Watch{Every: 1, Observer: bounded{rt}})
		v := m.View()
		if lost, err := m.Check(); err != nil || math.Abs(lost) > 1e-9*(1+v.Totals().Wanted) {
			rt.Fatalf("lost %v vehicles: %v", lost, err)
		}
		for c := range v.Classes() {
			class := demand.ClassID(c)
			sum := 0.0
			for i := range v.Sources() {
				sum += v.Source(i, class).Entered
			}
			moved := sum
			for i := range v.Grid().Links {
				cells := make([]float64, v.Grid().Links[i].Cells)
				v.Vehicles(cells, network.LinkID(i), class)
				for _, x := range cells {
					sum -= x
				}
				if sc.Network.IsExit(network.LinkID(i)) {
					sum -= v.Out(network.LinkID(i), class)
				}
			}
			if math.Abs(sum) > 1e-9*(1+moved) {
				rt.Fatalf("class %d: lost %v of %v vehicles", c, sum, moved)
			}
		}
	})
}

// The totals do not depend on how the traffic is divided into classes with the same equivalent and turning
// fractions (theory.md section 6: totals are independent of commodities).
func TestClassesDoNotChangeTotals(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		one := randomStudy(rt, t, 1)
		one.Demand.Classes[0].PCE = 1
		two := *one
		d := *one.Demand
		d.Classes = []demand.Class{{Name: "a", PCE: 1}, {Name: "b", PCE: 1}}
		d.Entries, d.Turnings = nil, nil
		for _, e := range one.Demand.Entries {
			e.Mix = []float64{0.3, 0.7}
			d.Entries = append(d.Entries, e)
		}
		for _, turn := range one.Demand.Turnings {
			turn.Class = demand.AllClasses
			d.Turnings = append(d.Turnings, turn)
		}
		two.Demand = &d
		a, b := run(t, one), run(t, &two)
		for i, n := range a.View().Cars() {
			if other := b.View().Cars()[i]; math.Abs(n-other) > 1e-7*(1+n) {
				rt.Fatalf("cell %d: %v with one class, %v with two", i, n, other)
			}
		}
	})
}
