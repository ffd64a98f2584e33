package ctm_test

import (
	"math"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// What the network cannot take waits outside: 3000 veh/h for an hour at a road of 2000 veh/h. Exact arithmetic:
// 1000 vehicles wait after the hour, gone half an hour later; waiting time 1000/2 * (1 + 0.5) = 750 veh·h.
func TestWaitingOutside(t *testing.T) {
	d := triangular(t, 100, 20, 120)
	dem := &demand.Demand{Entries: []demand.Entry{hourly(0, 3000, 0, 0)}}
	sc := build(t, []road{{0, 1, 2, 1, d, 0}}, dem, ctm.Horizon{End: 2 * hour, Cell: 50})
	m, err := ctm.New(sc)
	if err != nil {
		t.Fatal(err)
	}
	for m.View().Time() < hour-1e-6 {
		m.Step()
	}
	near(t, "waiting after 1 h", m.View().Totals().Waiting, 1000, 1e-3)
	for m.View().Step() < m.View().Grid().Steps {
		m.Step()
	}
	total := m.View().Totals()
	near(t, "waiting time, veh·h", total.WaitingSeconds/hour, 750, 2e-3)
	near(t, "left", total.Left, 3000, 1e-9)
	if total.Waiting != 0 {
		t.Errorf("%v vehicles still wait", total.Waiting)
	}
}

// A limit at the exit sends a queue in: 1800 veh/h meet 1200 veh/h. Triangular road, vf 100, w 20, kj 120: the
// queue has density 120 - 1200/20 = 60, the shock travels at (1200-1800)/(60-18) = -14.2857 km/h; after 0.2 h
// from when the traffic arrives (4 km at 100 km/h = 0.04 h) the tail is 2.857 km from the exit.
func TestOutflowLimit(t *testing.T) {
	d := triangular(t, 100, 20, 120)
	dem := &demand.Demand{Entries: []demand.Entry{hourly(0, 1800)}}
	sc := build(t, []road{{0, 1, 4, 1, d, 0}}, dem, ctm.Horizon{End: 0.24 * hour, Report: 0.24 * hour, Cell: 25})
	sc.Outflows = []ctm.Outflow{{Link: 0, Flow: demand.Constant(1200 * vehh)}}
	m := run(t, sc)
	inside := m.View().Totals().Inside
	// vehicles: 18 per km on the free 1.143 km, 60 per km on the queued 2.857 km
	near(t, "vehicles inside", inside, 18*(4-20.0/7)+60*20/7, 5e-3)
	near(t, "vehicles out", m.View().Totals().Left, 1200*0.2, 5e-3)
}

// Passenger-car equivalents reproduce the heavy-vehicle factor f_HV = 1/(1 + P(E-1)): 20 % trucks of equivalent 3
// give 0.714286 (theory.md section 6, computed there), so a road of 2000 pc/h discharges 1428.571 veh/h.
func TestHeavyVehicleFactor(t *testing.T) {
	d := triangular(t, 100, 20, 120)
	e := hourly(0, 3000, 3000)
	e.Mix = []float64{0.8, 0.2}
	dem := &demand.Demand{
		Classes: []demand.Class{{Name: "car", PCE: 1}, {Name: "truck", PCE: 3}},
		Entries: []demand.Entry{e},
	}
	sc := build(t, []road{{0, 1, 3, 1, d, 0}}, dem, ctm.Horizon{End: 1.5 * hour, Cell: 100})
	m, err := ctm.New(sc)
	if err != nil {
		t.Fatal(err)
	}
	for m.View().Time() < 0.5*hour-1e-6 {
		m.Step()
	}
	cars, trucks := m.View().Out(0, 0), m.View().Out(0, 1)
	for m.View().Step() < m.View().Grid().Steps {
		m.Step()
	}
	cars, trucks = m.View().Out(0, 0)-cars, m.View().Out(0, 1)-trucks
	near(t, "discharge, veh/h", cars+trucks, 2000*0.714286, 1e-6)
	near(t, "share of trucks", trucks/(cars+trucks), 0.2, 1e-9)
}

// One class of equivalent 2 on a road of 2000 pc/h: 1000 veh/h pass, and the counts are in vehicles.
func TestSingleClassOfTrucks(t *testing.T) {
	d := triangular(t, 100, 20, 120)
	dem := &demand.Demand{Classes: []demand.Class{{Name: "truck", PCE: 2}}, Entries: []demand.Entry{hourly(0, 1500)}}
	m := run(t, build(t, []road{{0, 1, 1, 1, d, 0}}, dem, ctm.Horizon{End: hour, Cell: 100}))
	near(t, "entered", m.View().Totals().Entered, 1000, 2e-3)
	near(t, "waiting", m.View().Totals().Waiting, 500, 4e-3)
}

// First in, first out through a diverge: trucks all turn off, cars all go on, and the composition of what
// leaves is that of what entered: after the first hour's change of mix has passed, the shares follow it.
func TestCompositionFollows(t *testing.T) {
	d := triangular(t, 100, 20, 120)
	early, late := hourly(0, 1000, 0), hourly(0, 0, 1000)
	early.Mix, late.Mix = []float64{0.9, 0.1}, []float64{0.5, 0.5}
	dem := &demand.Demand{
		Classes: []demand.Class{{Name: "car", PCE: 1}, {Name: "truck", PCE: 1}},
		Entries: []demand.Entry{early, late},
	}
	for class, link := range []int{1, 2} {
		to := turn(1, 0, map[int]float64{1: 0, 2: 0})
		to.Fractions[0][link-1], to.Class = 1, demand.ClassID(class)
		dem.Turnings = append(dem.Turnings, to)
	}
	roads := []road{{0, 1, 5, 1, d, 0}, {1, 2, 1, 1, d, 0}, {1, 3, 1, 1, d, 0}}
	m := run(t, build(t, roads, dem, ctm.Horizon{End: 2 * hour, Cell: 100}))
	// 5 km at 100 km/h: at 2 h what entered until 1.95 h has reached the node.
	near(t, "cars that went on", m.View().In(1, 0), 900+500*0.95, 2e-3)
	near(t, "trucks that turned off", m.View().In(2, 1), 100+500*0.95, 2e-3)
	if x := m.View().In(1, 1) + m.View().In(2, 0); x != 0 {
		t.Errorf("%v vehicles took the other class's way", x)
	}
}

// Turning fractions change in time: half an hour of all to L1, then all to L2.
func TestTurningChanges(t *testing.T) {
	d := triangular(t, 100, 20, 120)
	dem := &demand.Demand{Entries: []demand.Entry{hourly(0, 1000)}}
	dem.Turnings = []demand.Turning{{
		Node: 1, From: 0, To: []network.LinkID{1, 2}, Class: demand.AllClasses,
		Every: 0.5 * hour, Fractions: [][]float64{{1, 0}, {0, 1}},
	}}
	roads := []road{{0, 1, 1, 1, d, 0}, {1, 2, 1, 1, d, 0}, {1, 3, 1, 1, d, 0}}
	m := run(t, build(t, roads, dem, ctm.Horizon{End: hour, Cell: 100}))
	near(t, "first half hour", m.View().In(1, 0), 1000*0.49, 2e-3) // 1 km at 100 km/h: 0.01 h later
	near(t, "second half hour", m.View().In(2, 0), 500, 2e-3)
}

// An entry in the middle of the road shares the room with what comes from upstream, here in proportion to the
// capacities, 2000 to 2000 (oriented-capacity-proportional; theory.md section 4): with both oversaturated each
// gets 1000 of 2000 veh/h.
func TestEntryBesideTraffic(t *testing.T) {
	d := triangular(t, 100, 20, 120)
	dem := &demand.Demand{Entries: []demand.Entry{hourly(0, 2000, 2000), hourly(1, 2000, 2000)}}
	roads := []road{{0, 1, 1, 1, d, 0}, {1, 2, 1, 1, d, 0}}
	m := run(t, build(t, roads, dem, ctm.Horizon{End: 2 * hour, Cell: 100}))
	v := m.View()
	if x := v.Out(0, 0) - v.Source(1, 0).Entered; math.Abs(x) > 25 { // the road is empty for 0.01 h at first
		t.Errorf("upstream sent %.0f, the entry %.0f vehicles", v.Out(0, 0), v.Source(1, 0).Entered)
	}
	near(t, "through the road", v.In(1, 0), 4000, 2e-2)
}
