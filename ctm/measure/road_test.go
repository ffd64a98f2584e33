package measure_test

import (
	"context"
	"fmt"
	"math"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// Units of the tests: km, h, veh of the hand-worked cases, turned into m, s and veh.
const (
	km   = 1000.0
	hour = 3600.0
	kmh  = km / hour
	vehh = 1 / hour
)

var inf = math.Inf(1)

// triangular is the shape of every hand-worked case: 100 km/h, wave 20 km/h, jam 120 veh/km per lane, hence 2000 veh/h
// per lane at 20 veh/km.
func triangular(t testing.TB) diagram.Diagram {
	return shape(t, "triangular", diagram.Params{FreeSpeed: 100 * kmh, WaveSpeed: 20 * kmh, JamDensity: 0.12})
}

func shape(t testing.TB, name string, p diagram.Params) diagram.Diagram {
	t.Helper()
	d, err := diagram.New(name, p)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// link is a link of a test: ends are node numbers.
type link struct {
	from, to int
	km       float64
	lanes    float64
}

// study makes a scenario with links L0, L1, ... of one shape.
func study(t testing.TB, d diagram.Diagram, links []link, dm *demand.Demand, h ctm.Horizon) *ctm.Scenario {
	t.Helper()
	last := 0
	var list []network.Link
	for i, l := range links {
		last = max(last, l.from, l.to)
		list = append(list, network.Link{Name: fmt.Sprintf("L%d", i), From: network.NodeID(l.from), To: network.NodeID(l.to), Length: l.km * km, Lanes: l.lanes, Diagram: d})
	}
	nodes := make([]network.Node, last+1)
	for i := range nodes {
		nodes[i].Name = fmt.Sprintf("N%d", i)
	}
	n, err := network.New(nodes, list)
	if err != nil {
		t.Fatal(err)
	}
	if dm.Classes == nil {
		dm.Classes = []demand.Class{{Name: "vehicle", PCE: 1}}
	}
	return &ctm.Scenario{Network: n, Demand: dm, Horizon: h}
}

// described is what every measure of this package does.
type described interface {
	ctm.Measure
	Check(n *network.Network) error
	Cuts(n *network.Network, cell float64) []ctm.Cut
	Text(n *network.Network, sys unit.System) string
}

// with adds measures and their cuts.
func with(t testing.TB, sc *ctm.Scenario, list ...described) *ctm.Scenario {
	t.Helper()
	for _, m := range list {
		if err := m.Check(sc.Network); err != nil {
			t.Fatal(err)
		}
		sc.Measures = append(sc.Measures, m)
		sc.Cuts = append(sc.Cuts, m.Cuts(sc.Network, sc.Horizon.Cell)...)
	}
	return sc
}

// steady is an entry of a flow in veh/h.
func steady(link int, flow float64) demand.Entry {
	return demand.Entry{Link: network.LinkID(link), Mix: []float64{1}, Flow: demand.Constant(flow * vehh)}
}

// steps is an entry whose flows (veh/h) hold for a number of hours each.
func steps(link int, every float64, flow ...float64) demand.Entry {
	q := make([]float64, len(flow))
	for i := range flow {
		q[i] = flow[i] * vehh
	}
	return demand.Entry{Link: network.LinkID(link), Mix: []float64{1}, Flow: demand.Steps(0, every*hour, q)}
}

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

func near(t testing.TB, what string, got, want, share float64) {
	t.Helper()
	if !(math.Abs(got-want) <= share*math.Abs(want)+1e-9) {
		t.Errorf("%s: %.6g, want %.6g within %.3g %%", what, got, want, share*100)
	}
}

// tail records how far upstream of a place cells are congested, along a chain of links: above critical density and
// below capacity. It knows nothing of package observe.
type tail struct {
	links  []network.LinkID // upstream to downstream
	begin  float64          // m from the chain's start; nothing upstream of it is looked at
	head   float64          // m from the chain's start
	places []float64        // m upstream of the head, rising
	reach  []float64        // h, when the tail first was there
	far    float64          // m, the longest distance
	when   float64          // h
	clear  float64          // h, last time with a queue
}

func (o *tail) Observe(v ctm.View) error {
	x, farthest := 0.0, -1.0
	g := v.Grid()
	for _, l := range o.links {
		lc := g.Links[l]
		for s := lc.FirstSegment; s <= lc.Last(); s++ {
			seg, road := &g.Segments[s], v.Road(s)
			for i := range seg.Cells {
				k := v.Cars()[seg.First+i] / (seg.Dx * road.Lanes)
				at := x + seg.From + (float64(i)+0.5)*seg.Dx
				full := k > road.Diagram.Critical()*1.01 && road.Diagram.Flow(k) < diagram.Capacity(road.Diagram)*0.999
				if o.begin < at && at < o.head && full && farthest < 0 {
					farthest = o.head - at + seg.Dx/2
				}
			}
		}
		x += lc.Length
	}
	t := v.Time() / hour
	if farthest > o.far {
		o.far, o.when = farthest, t
	}
	if farthest > 0 {
		o.clear = t
	}
	for len(o.reach) < len(o.places) && farthest >= o.places[len(o.reach)] {
		o.reach = append(o.reach, t)
	}
	return nil
}

// passed is a full list of reach times, NaN where the tail never came.
func (o *tail) passed(i int) float64 {
	if i < len(o.reach) {
		return o.reach[i]
	}
	return math.NaN()
}

// closure is one lane closed on one link.
func closure(l int, from, to, lanes, start, end, capacity float64) *measure.LaneClosure {
	return &measure.LaneClosure{
		Stretch: []measure.Span{{Link: network.LinkID(l), From: from * km, To: to * km}},
		Lanes:   lanes, Start: start * hour, End: end * hour, Capacity: capacity * vehh,
	}
}
