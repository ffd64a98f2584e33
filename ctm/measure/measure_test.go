package measure_test

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// counter keeps the vehicles on each link at each moment looked at.
type counter struct{ inside [][]float64 }

func (o *counter) Observe(v ctm.View) error {
	row := make([]float64, len(v.Grid().Links))
	for l := range row {
		row[l] = v.Inside(network.LinkID(l), 0)
	}
	o.inside = append(o.inside, row)
	return nil
}

// All lanes closed on the second of four links, whole: what is inside drains (1 km at 100 km/h: 36 s), nothing enters,
// the ramp that joins inside is held, all of it goes on after reopening. Three links closed in one stretch drain as one.
func TestFullClosureDrainsAndReopens(t *testing.T) {
	roads := []link{{0, 1, 3, 2}, {1, 2, 1, 2}, {2, 3, 1, 2}, {3, 4, 1, 2}, {4, 5, 2, 2}, {6, 3, 1, 1}}
	d := &demand.Demand{Entries: []demand.Entry{steps(0, 0.25, 2000, 2000, 2000, 0, 0, 0, 0, 0), steps(5, 0.25, 300, 300, 300, 0, 0, 0, 0, 0)}}
	sc := study(t, triangular(t), roads, d, ctm.Horizon{End: 2 * hour, Cell: 50, Report: 300})
	c := &measure.LaneClosure{Lanes: 2, Start: 900, End: 2700}
	for l := 1; l <= 3; l++ {
		c.Stretch = append(c.Stretch, measure.Span{Link: network.LinkID(l), To: inf})
	}
	seen := &counter{}
	m := run(t, with(t, sc, c), ctm.Watch{Every: 1, Observer: seen})
	g := m.View().Grid()
	at := func(time float64) []float64 { return seen.inside[int(math.Round(time/g.Step))] }
	if before := at(890); before[1] < 19 || before[3] < 19 {
		t.Fatalf("before: %v", before)
	}
	// 3 km at 100 km/h are 108 s; the scheme's tail of it is gone after 300 s.
	for l := 1; l <= 3; l++ {
		if x := at(1200)[l]; x > 1e-6 {
			t.Errorf("link %d still holds %v vehicles 300 s after it closed", l, x)
		}
		if x := at(2690)[l]; x > 1e-6 {
			t.Errorf("link %d holds %v vehicles before it reopens: something entered", l, x)
		}
	}
	if held := at(2690)[5]; held < 100 {
		t.Errorf("the ramp that joins inside the stretch holds %v vehicles, want all of 150 less those before", held)
	}
	tot := m.View().Totals()
	near(t, "all have left", tot.Left, 1500+225, 1e-9)
}

// A node in the stretch with an entry of its own, and one with a choice: the next link is shut at its beginning.
func TestSealWhereTrafficHasAChoice(t *testing.T) {
	roads := []link{{0, 1, 2, 1}, {1, 2, 1, 1}, {3, 1, 2, 1}, {1, 4, 1, 1}, {2, 5, 1, 1}}
	turn := func(from int) demand.Turning {
		return demand.Turning{Node: 1, From: network.LinkID(from), To: []network.LinkID{1, 3}, Class: demand.AllClasses, Fractions: [][]float64{{0.5, 0.5}}}
	}
	d := &demand.Demand{Entries: []demand.Entry{steady(0, 500), steady(2, 500), steady(4, 200)}, Turnings: []demand.Turning{turn(0), turn(2)}}
	sc := study(t, triangular(t), roads, d, ctm.Horizon{End: hour, Cell: 50})
	c := &measure.LaneClosure{Lanes: 1, Start: 600, End: 1800, Stretch: []measure.Span{{Link: 0, From: 1000, To: inf}, {Link: 1, To: inf}, {Link: 4, To: inf}}}
	m, err := ctm.New(with(t, sc, c))
	if err != nil {
		t.Fatal(err)
	}
	for m.View().Time() < 900 {
		m.Step()
	}
	before := m.View().In(1, 0)
	for m.View().Time() < 1700 {
		m.Step()
	}
	if after := m.View().In(1, 0); after != before {
		t.Errorf("%v vehicles entered a link whose only lane is closed", after-before)
	}
	for m.View().Time() < hour-5 {
		m.Step()
	}
	if after := m.View().In(1, 0); after < before+100 {
		t.Errorf("only %v vehicles entered after it reopened", after-before)
	}
	if _, err := m.Check(); err != nil {
		t.Error(err)
	}
}

// A closure that begins while the road is dense: more vehicles stand on it than the lanes left could hold at jam
// density; none is lost, none enters until there is room, for a straight and a curved shape.
func TestClosureOnADenseRoad(t *testing.T) {
	greenshields := shape(t, "greenshields", diagram.Params{FreeSpeed: 100 * kmh, JamDensity: 0.12})
	for _, d := range []diagram.Diagram{triangular(t), greenshields} {
		sc := study(t, d, []link{{0, 1, 6, 3}}, &demand.Demand{Entries: []demand.Entry{steps(0, 0.5, 9000, 9000, 0, 0, 0, 0, 0, 0)}}, ctm.Horizon{End: 4 * hour, Cell: 100})
		// A stop at 5 km fills the road; then two lanes close over 2-4 km where it stands.
		with(t, sc, closure(0, 5, 5.5, 3, 0.2, 0.5, 0), closure(0, 2, 4, 2, 0.4, 0.8, 0))
		m := run(t, sc)
		tot := m.View().Totals()
		near(t, "all have left", tot.Left, tot.Wanted, 1e-9)
	}
}

// Where closures overlap the tightest wins value by value: 2 lanes of one, the capacity of the other.
func TestOverlappingClosures(t *testing.T) {
	wide, narrow := closure(0, 4, 6, 1, 0, 1, 1400), closure(0, 5, 7, 2, 0.5, 2, 1600)
	narrow.Speed, wide.Discharge, narrow.Discharge = 60*kmh, 1300*vehh, 1350*vehh
	sc := study(t, triangular(t), []link{{0, 1, 10, 3}}, &demand.Demand{Entries: []demand.Entry{steady(0, 500)}}, ctm.Horizon{End: 2 * hour, Cell: 100})
	with(t, sc, wide, narrow, &measure.SpeedLimit{Links: []network.LinkID{0}, Limit: 80 * kmh, Start: 0, End: 2 * hour})
	for name, order := range map[string][]ctm.Measure{"as given": sc.Measures, "turned round": {sc.Measures[2], sc.Measures[1], sc.Measures[0]}} {
		s := *sc
		s.Measures = order
		m, err := ctm.New(&s)
		if err != nil {
			t.Fatal(err)
		}
		for m.View().Time() < 0.75*hour {
			m.Step()
		}
		for _, c := range []struct{ at, lanes, capacity, speed float64 }{
			{3, 3, 2000, 80},
			{4.5, 2, 1400, 80},
			{5.5, 1, 1400, 60},
			{6.5, 1, 1600, 60},
		} {
			v := m.View()
			seg := segmentAt(v.Grid(), c.at*km)
			r := v.Road(seg)
			near(t, name+": lanes", r.Lanes, c.lanes, 1e-12)
			near(t, name+": speed", r.Diagram.FreeSpeed(), c.speed*kmh, 1e-9)
			// A limit u alone leaves u w kj/(u+w) (design notes, section 7).
			near(t, name+": capacity", r.Entry/r.Lanes, min(c.capacity, c.speed*20*120/(c.speed+20))*vehh, 1e-9)
		}
	}
}

func segmentAt(g *ctm.Grid, x float64) int {
	for s := range g.Segments {
		if g.Segments[s].From <= x && x < g.Segments[s].To {
			return s
		}
	}
	return -1
}

// A meter of 400 veh/h for half an hour: 200 vehicles leave, of 900 that come.
func TestMeter(t *testing.T) {
	sc := study(t, triangular(t), []link{{0, 1, 1, 1}, {1, 2, 1, 1}}, &demand.Demand{Entries: []demand.Entry{steady(0, 900)}}, ctm.Horizon{End: hour, Cell: 50})
	with(t, sc, &measure.Meter{Link: 0, Rate: 400 * vehh, Start: 0.5 * hour, End: hour}, &measure.Meter{Link: 0, Rate: 700 * vehh, Start: 0, End: hour})
	m, err := ctm.New(sc)
	if err != nil {
		t.Fatal(err)
	}
	for m.View().Time() < 0.5*hour-1e-6 {
		m.Step()
	}
	before := m.View().Out(0, 0)
	for m.View().Time() < hour-1e-6 {
		m.Step()
	}
	near(t, "vehicles", m.View().Out(0, 0)-before, 200, 0.005)
}

// A ramp shut from 0:15 to 0:45: nothing enters, what is on it drains, who waits outside goes in afterwards.
func TestRampClosure(t *testing.T) {
	sc := study(t, triangular(t), []link{{0, 1, 5, 2}, {2, 1, 0.5, 1}, {1, 3, 2, 2}}, &demand.Demand{Entries: []demand.Entry{steady(0, 1000), steps(1, 0.5, 600, 600, 0, 0)}}, ctm.Horizon{End: 2 * hour, Cell: 50, Report: 300})
	with(t, sc, &measure.RampClosure{Link: 1, Start: 900, End: 2700})
	seen := &counter{}
	m := run(t, sc, ctm.Watch{Every: 1, Observer: seen})
	if x := seen.inside[int(2690/m.View().Grid().Step)][1]; x > 1e-6 {
		t.Errorf("the closed ramp holds %v vehicles", x)
	}
	near(t, "all have left", m.View().Out(1, 0), 600, 1e-9)
}

// An alternative whose measures never act gives the base's cells to the last bit, because both stand on one grid.
func TestNothingChangedIsIdentical(t *testing.T) {
	demands := &demand.Demand{Entries: []demand.Entry{steady(0, 3600), steady(1, 600)}}
	base := study(t, triangular(t), []link{{0, 1, 8, 3}, {2, 1, 2, 1}, {1, 3, 5, 2}}, demands, ctm.Horizon{End: hour, Cell: 100})
	late := closure(0, 2, 3.3, 1, 40, 50, 1500)
	weak := &measure.Incident{Link: 2, At: 1234, CapacityLeft: 1, Start: 0, End: hour}
	alt := *base
	with(t, &alt, late, weak, &measure.Meter{Link: 1, Rate: 9, Start: 0, End: hour})
	base.Cuts = alt.Cuts
	a, b := run(t, base), run(t, &alt)
	for i, n := range a.View().Cars() {
		if b.View().Cars()[i] != n {
			t.Fatalf("cell %d: %v in the base, %v in the alternative", i, n, b.View().Cars()[i])
		}
	}
}

// Vehicles are conserved (ctm.Model.Run checks it at every report interval) and all leave, whatever is done to the road.
func TestConservationUnderRandomMeasures(t *testing.T) {
	shapes := []diagram.Diagram{triangular(t), shape(t, "greenshields", diagram.Params{FreeSpeed: 100 * kmh, JamDensity: 0.12})}
	rapid.Check(t, func(rt *rapid.T) {
		f := func(what string, low, high float64) float64 { return rapid.Float64Range(low, high).Draw(rt, what) }
		roads := []link{{0, 1, 2, 3}, {1, 2, 1.5, 3}, {3, 1, 0.3, 1}, {2, 4, 1.7, 2}, {2, 5, 0.4, 1}}
		d := &demand.Demand{
			Entries:  []demand.Entry{steps(0, 0.5, f("main", 0, 8000), 0), steps(2, 0.5, f("ramp", 0, 2500), 0)},
			Turnings: []demand.Turning{{Node: 2, From: 1, To: []network.LinkID{3, 4}, Class: demand.AllClasses, Fractions: [][]float64{{0.8, 0.2}}}},
		}
		sc := study(t, rapid.SampledFrom(shapes).Draw(rt, "shape"), roads, d, ctm.Horizon{End: 8 * hour, Cell: 100, Report: 300})
		for range rapid.IntRange(1, 4).Draw(rt, "measures") {
			l := rapid.IntRange(0, 4).Draw(rt, "link")
			start := f("start", 0, 0.6)
			end := start + f("for", 0.01, 0.6)
			id := network.LinkID(l)
			var m described
			switch rapid.IntRange(0, 4).Draw(rt, "kind") {
			case 0:
				from := f("from", 0, roads[l].km*0.8)
				lanes := float64(rapid.IntRange(1, int(roads[l].lanes)).Draw(rt, "lanes"))
				m = closure(l, from, from+f("length", 0.01, roads[l].km*0.2), lanes, start, end, f("capacity", 500, 2500))
			case 1:
				m = &measure.Incident{Link: id, At: f("at", 0, roads[l].km*km*0.99), CapacityLeft: f("left", 0, 1), Start: start * hour, End: end * hour}
			case 2:
				m = &measure.SpeedLimit{Links: []network.LinkID{id}, Limit: f("limit", 5, 40), Start: start * hour, End: end * hour}
			case 3:
				m = &measure.Meter{Link: id, Rate: f("rate", 0, 1), Start: start * hour, End: end * hour}
			default:
				m = &measure.RampClosure{Link: id, Start: start * hour, End: end * hour}
			}
			with(t, sc, m)
		}
		tot := run(t, sc).View().Totals()
		if math.Abs(tot.Left-tot.Wanted) > 1e-6*(1+tot.Wanted) {
			rt.Fatalf("%v of %v vehicles have left", tot.Left, tot.Wanted)
		}
	})
}

// A stretch shorter than half a cell still closes something, at any place: at the link's ends too.
func TestShortStretch(t *testing.T) {
	for _, from := range []float64{0, 0.02, 4, 7.97, 7.99} {
		sc := study(t, triangular(t), []link{{0, 1, 8, 3}}, &demand.Demand{Entries: []demand.Entry{steady(0, 100)}}, ctm.Horizon{End: hour, Cell: 200})
		m, err := ctm.New(with(t, sc, closure(0, from, from+0.01, 1, 0, 1, 0)))
		if err != nil {
			t.Fatal(err)
		}
		closed := 0.0
		for s := range m.View().Grid().Segments {
			if seg := &m.View().Grid().Segments[s]; m.View().Road(s).Lanes == 2 {
				closed += seg.To - seg.From
			}
		}
		if closed < 99 || closed > 201 {
			t.Errorf("10 m from %v km: %v m are closed, want 100 to 200", from, closed)
		}
	}
}

func TestTexts(t *testing.T) {
	sc := study(t, triangular(t), []link{{0, 1, 2, 3}, {1, 2, 1, 3}}, &demand.Demand{}, ctm.Horizon{})
	full := closure(0, 0, 2, 3, 1, 2, 0)
	night := closure(0, 0.3, 1.1, 1, 20, 29, 1550)
	night.Source = "given in the study"
	both := closure(0, 0.3, 2, 1, 20, 29.0125, 1550)
	both.Stretch = append(both.Stretch, measure.Span{Link: 1, To: 400})
	both.Discharge, both.Speed = 1450*vehh, 80*kmh
	for _, c := range []struct {
		m    described
		want string
	}{
		{night, "1 of 3 lanes closed from 300 m to 1.1 km of link `L0`, 20:00-29:00, 1,550 veh/h per open lane; given in the study"},
		{both, "1 of 3 lanes closed from 300 m of link `L0` to 400 m of link `L1`, 20:00-29:00:45, 1,550 veh/h per open lane before a queue forms and 1,450 veh/h out of it, at most 80 km/h"},
		{full, "3 of 3 lanes closed the whole of link `L0`, 01:00-02:00; nothing enters, what is inside drains"},
		{&measure.Incident{Link: 0, At: 400, CapacityLeft: 0.49, Start: 7 * hour, End: 8 * hour}, "incident at 400 m of link `L0`, 07:00-08:00: 49 % of the capacity left"},
		{&measure.SpeedLimit{Links: []network.LinkID{0, 1}, Limit: 80 * kmh, End: hour}, "speed limit of 80 km/h on links `L0`, `L1`, 00:00-01:00"},
		{&measure.Meter{Link: 1, Rate: 0.25, End: hour}, "meter at the end of link `L1`, 00:00-01:00: at most 900 veh/h"},
		{&measure.RampClosure{Link: 1, End: hour}, "link `L1` closed, 00:00-01:00"},
	} {
		if got := c.m.Text(sc.Network, unit.Metric); got != c.want {
			t.Errorf("got  %s\nwant %s", got, c.want)
		}
	}
	want := "1 of 3 lanes closed from 984 ft to 0.68 mi of link `L0`, 20:00-29:00, 1,550 veh/h per open lane; given in the study"
	if got := night.Text(sc.Network, unit.US); got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
}

func TestChecks(t *testing.T) {
	n := study(t, triangular(t), []link{{0, 1, 2, 3}, {1, 2, 1, 3}}, &demand.Demand{}, ctm.Horizon{}).Network
	for _, c := range []struct {
		m    described
		want string
	}{
		{closure(0, 2.1, 3, 1, 0, 1, 0), "begins at 2.1 km, outside link `L0`, which is 2 km long"},
		{closure(0, 1, 3, 1, 0, 1, 0), "ends at 3 km, outside link `L0`, which is 2 km long"},
		{closure(0, 1, 1, 1, 0, 1, 0), "ends at 1 km of link `L0`, not after its begin at 1 km"},
		{closure(0, 0, 1, 4, 0, 1, 0), "takes 4 lanes, but link `L0` has 3"},
		{closure(0, 0, 1, 0, 0, 1, 0), "takes 0 lanes: it must take more than 0"},
		{closure(0, 0, 1, 1, 2, 1, 0), "ends at 01:00, not after its start at 02:00"},
		{&measure.Incident{Link: 0, CapacityLeft: 1.5, End: 1}, "leaves a share of 1.5 of the capacity: it must lie in 0..1"},
		{&measure.Incident{Link: 0, At: 2000, End: 1}, "lies at 2 km, outside link `L0`, which is 2 km long"},
		{&measure.SpeedLimit{End: 1}, "has a limit of 0: it must be positive"},
		{&measure.Meter{Rate: -1, End: 1}, "has a rate below 0"},
		{&measure.RampClosure{Start: hour}, "ends at 00:00, not after its start at 01:00"},
	} {
		if err := c.m.Check(n); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want %s", err, c.want)
		}
	}
}
