package demand_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

const hour = 3600.0

// ways makes a network of 1-km links at 100 km/h, named by their keys "from-to" in the order given.
func ways(t testing.TB, ends ...[2]int) *network.Network {
	t.Helper()
	d, err := diagram.New("triangular", diagram.Params{FreeSpeed: 100 / 3.6, WaveSpeed: 20 / 3.6, JamDensity: 0.12})
	if err != nil {
		t.Fatal(err)
	}
	last := 0
	var links []network.Link
	for i, e := range ends {
		last = max(last, e[0], e[1])
		links = append(links, network.Link{Name: "L" + string(rune('0'+i)), From: network.NodeID(e[0]), To: network.NodeID(e[1]), Length: 1000, Lanes: 1, Diagram: d})
	}
	nodes := make([]network.Node, last+1)
	for i := range nodes {
		nodes[i].Name = "N" + string(rune('a'+i))
	}
	n, err := network.New(nodes, links)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// steady is an entry of a flow in veh/h.
func steady(link int, flow float64) demand.Entry {
	return demand.Entry{Link: network.LinkID(link), Mix: []float64{1}, Flow: demand.Constant(flow / hour)}
}

// fractions makes constant turning fractions.
func fractions(n *network.Network, from int, to map[int]float64) demand.Turning {
	t := demand.Turning{Node: n.Links[from].To, From: network.LinkID(from), Class: demand.AllClasses, Fractions: [][]float64{nil}}
	for _, l := range n.Out(n.Links[from].To) {
		t.To = append(t.To, l)
		t.Fractions[0] = append(t.Fractions[0], to[int(l)])
	}
	return t
}

func near(t testing.TB, what string, got, want float64) {
	t.Helper()
	if math.Abs(got-want) > 1e-9*(1+math.Abs(want)) {
		t.Errorf("%s: %.12g, want %.12g", what, got, want)
	}
}

// The parts of a profile add up to it: definition of Between.
func TestBetween(t *testing.T) {
	ramped, err := demand.Ramped(0, hour, []float64{0.2, 0.5, 0.3})
	if err != nil {
		t.Fatal(err)
	}
	for name, p := range map[string]demand.Profile{
		"constant": demand.Constant(0.4), "steps": demand.Steps(0, hour, []float64{0.2, 0.5, 0.3}), "ramped": ramped,
	} {
		rapid.Check(t, func(rt *rapid.T) {
			x := func(what string) float64 { return rapid.Float64Range(0, 3*hour).Draw(rt, what) }
			a, b, from, to := x("a"), x("b"), x("from"), x("to")
			a, b = min(a, b), max(a, b)
			from, to = min(from, to), max(from, to)
			before, in, after := p.Between(math.Inf(-1), a), p.Between(a, b), p.Between(b, math.Inf(1))
			sum := before.Vehicles(from, to) + in.Vehicles(from, to) + after.Vehicles(from, to)
			if whole := p.Vehicles(from, to); math.Abs(sum-whole) > 1e-9 {
				rt.Fatalf("%s: parts %v, whole %v", name, sum, whole)
			}
			twice := in.Between(from, to)
			if got, want := twice.Vehicles(0, 3*hour), in.Vehicles(from, to); math.Abs(got-want) > 1e-9 {
				rt.Fatalf("%s: a part of a part has %v, want %v", name, got, want)
			}
		})
	}
}

// A factor of 0.9 from 1:00 to 1:30 on 1000 veh/h takes 50 vehicles away; 1.2 on the other entry of 600 veh/h adds 60.
func TestScale(t *testing.T) {
	d := &demand.Demand{Entries: []demand.Entry{steady(0, 1000), steady(1, 600)}}
	r := demand.Revise(d, demand.Window{To: 2 * hour})
	r.Scale([]network.LinkID{0}, 0.9, demand.Window{From: hour, To: 1.5 * hour})
	r.Scale([]network.LinkID{1}, 1.2, demand.Window{From: hour, To: 1.5 * hour})
	rec := r.Record()
	near(t, "base", rec.Base, 3200)
	near(t, "suppressed", rec.Suppressed, 50)
	near(t, "added", rec.Added, 60)
	near(t, "travelled", rec.Travelled, 3210)
	near(t, "in the window", r.Demand().Vehicles(demand.Window{From: hour, To: 1.5 * hour}), 450+360)
	if len(d.Entries) != 2 {
		t.Error("the base's demand was changed")
	}
}

func TestScaleByOneChangesNothing(t *testing.T) {
	d := &demand.Demand{Entries: []demand.Entry{steady(0, 1000)}}
	r := demand.Revise(d, demand.Window{To: hour})
	r.Scale(nil, 1, demand.Window{To: hour})
	if &r.Demand().Entries[0] != &d.Entries[0] {
		t.Error("a factor of 1 made new entries")
	}
}

// 400 veh/h for half an hour: 70 % and 20 % move, 10 % does not travel: 140, 40, 20 vehicles.
func TestMoveEntry(t *testing.T) {
	d := &demand.Demand{Entries: []demand.Entry{steady(0, 1000), steady(1, 300), steady(1, 100), steady(2, 500)}}
	r := demand.Revise(d, demand.Window{To: 2 * hour})
	w := demand.Window{From: hour, To: 1.5 * hour}
	r.MoveEntry(1, []demand.Share{{To: 0, Share: 0.7}, {To: 2, Share: 0.2}}, w)
	rec := r.Record()
	near(t, "to the first", rec.Moves[0].Vehicles, 140)
	near(t, "to the second", rec.Moves[1].Vehicles, 40)
	near(t, "suppressed", rec.Suppressed, 20)
	near(t, "balance", rec.Travelled, rec.Base-rec.Suppressed)
	sum := map[network.LinkID]float64{}
	for _, e := range r.Demand().Entries {
		sum[e.Link] += e.Flow.Vehicles(w.From, w.To)
	}
	near(t, "mainline", sum[0], 500+140)
	near(t, "closed ramp", sum[1], 0)
	near(t, "other ramp", sum[2], 250+40)
}

// Shares that sum to 1 in decimals leave nobody at home, though not in binary.
func TestMoveEntryAll(t *testing.T) {
	d := &demand.Demand{Entries: []demand.Entry{steady(0, 1000), steady(1, 300)}}
	r := demand.Revise(d, demand.Window{To: hour})
	r.MoveEntry(1, []demand.Share{{To: 0, Share: 0.7}, {To: 0, Share: 0.2}, {To: 0, Share: 0.1}}, demand.Window{To: hour})
	if rec := r.Record(); rec.Suppressed != 0 {
		t.Errorf("suppressed %v, want 0", rec.Suppressed)
	}
}

// corridor is L0 -> diverge (L1 exit, L2) -> diverge (L3 exit, L4) -> diverge (L5 exit, L6 exit), with an on-ramp L7
// that joins where L3 leaves... upstream of it: at the end of L2.
func corridor(t testing.TB) (*network.Network, *demand.Demand) {
	n := ways(t, [2]int{0, 1}, [2]int{1, 2}, [2]int{1, 3}, [2]int{4, 5}, [2]int{4, 6}, [2]int{6, 7}, [2]int{6, 8}, [2]int{9, 3}, [2]int{3, 4})
	d := &demand.Demand{
		Classes: []demand.Class{{Name: "vehicle", PCE: 1}},
		Entries: []demand.Entry{steady(0, 2000), steady(7, 500)},
		Turnings: []demand.Turning{
			fractions(n, 0, map[int]float64{1: 0.1, 2: 0.9}),
			fractions(n, 8, map[int]float64{3: 0.2, 4: 0.8}),
			fractions(n, 4, map[int]float64{5: 0.5, 6: 0.5}),
		},
	}
	return n, d
}

// Hand-worked: 2000 veh/h, 10 % of them bound for L1; the ramp adds 500. Base: L1 200, L8 2300, L3 460, L4 1840, L5 920.
// L1 closed: 60 % to L3, 30 % to L5, 10 % do not travel: entry 1980, L2 1980, L8 2480, L3 460+120 = 580, L4 1900,
// L5 920+60 = 980. The fractions are 580/2480 and 980/1900.
func TestMoveThroughHandWorked(t *testing.T) {
	n, d := corridor(t)
	w := demand.Window{From: hour, To: 2 * hour}
	r := demand.Revise(d, demand.Window{To: 4 * hour})
	if err := r.MoveThrough(n, 1, []demand.Share{{To: 3, Share: 0.6}, {To: 5, Share: 0.3}}, w); err != nil {
		t.Fatal(err)
	}
	got := r.Demand()
	at := func(from network.LinkID, k int, time float64) float64 {
		return got.Lookup(from, demand.AllClasses).At(time)[k]
	}
	near(t, "closed", at(0, 0, 1.5*hour), 0)
	near(t, "through", at(0, 1, 1.5*hour), 1)
	near(t, "first exit", at(8, 0, 1.5*hour), 580.0/2480)
	near(t, "second exit", at(4, 0, 1.5*hour), 980.0/1900)
	for _, time := range []float64{0, hour - 1, 2 * hour, 3.5 * hour} {
		if at(0, 0, time) != 0.1 || at(8, 0, time) != 0.2 || at(4, 0, time) != 0.5 {
			t.Errorf("the fractions at %v s are not the base's", time)
		}
	}
	rec := r.Record()
	near(t, "moved to the first", rec.Moves[0].Vehicles, 120)
	near(t, "moved to the second", rec.Moves[1].Vehicles, 60)
	near(t, "suppressed", rec.Suppressed, 20)
	near(t, "balance", rec.Travelled, rec.Base-rec.Suppressed)
	// L0 is 1 km at 100 km/h: its vehicles are missing 36 s earlier than the window.
	near(t, "entry before", entering(got, 0, hour-72, hour-36), 20)
	near(t, "entry in the window", entering(got, 0, hour-36, hour), 20*0.99)
	near(t, "entry at the end", entering(got, 0, 2*hour-36, 2*hour), 20)
	near(t, "ramp", entering(got, 7, 0, 4*hour), 2000)
}

func entering(d *demand.Demand, link network.LinkID, from, to float64) float64 {
	sum := 0.0
	for _, e := range d.Entries {
		if e.Link == link {
			sum += e.Flow.Vehicles(from, to)
		}
	}
	return sum
}

// The formula in the documentation: one diverge with fraction f, no traffic joining before the exit of fraction P.
func TestMoveThroughFormula(t *testing.T) {
	n, d := corridor(t)
	d.Entries = d.Entries[:1]
	r := demand.Revise(d, demand.Window{To: hour})
	if err := r.MoveThrough(n, 1, []demand.Share{{To: 3, Share: 0.7}}, demand.Window{To: hour}); err != nil {
		t.Fatal(err)
	}
	const f, p, s = 0.1, 0.2, 0.7
	near(t, "fraction", r.Demand().Lookup(8, 0).At(0)[0], ((1-f)*p+f*s)/(1-f*(1-s)))
}

// An exit upstream of the closed one: of 0.9*0.2 bound for L3, half leave at L1 already: 0.1 + 0.09 of the entry's
// traffic; the other half goes on to L5.
func TestMoveThroughUpstream(t *testing.T) {
	n, d := corridor(t)
	d.Entries = d.Entries[:1]
	r := demand.Revise(d, demand.Window{To: hour})
	if err := r.MoveThrough(n, 3, []demand.Share{{To: 1, Share: 0.5}, {To: 5, Share: 0.5}}, demand.Window{To: hour}); err != nil {
		t.Fatal(err)
	}
	got := r.Demand()
	near(t, "leave early", got.Lookup(0, 0).At(0)[0], 0.19)
	near(t, "closed", got.Lookup(8, 0).At(0)[0], 0)
	near(t, "leave late", got.Lookup(4, 0).At(0)[0], (0.36+0.09)/0.81)
}

// The ramp's traffic cannot turn back to L1, which lies upstream of where it joins.
func TestMoveThroughNoWay(t *testing.T) {
	n, d := corridor(t)
	r := demand.Revise(d, demand.Window{To: hour})
	err := r.MoveThrough(n, 3, []demand.Share{{To: 1, Share: 0.5}}, demand.Window{To: hour})
	want := "no way from entry `L7` to `L1` while `L3` is closed: possible are `L5`, `L6`"
	if !errors.Is(err, demand.ErrNoWay) || !strings.Contains(err.Error(), want) {
		t.Errorf("got %v, want %s", err, want)
	}
	if len(r.Demand().Entries) != 2 || len(r.Demand().Turnings) != 3 {
		t.Error("a refused move changed the demand")
	}
}

// Fractions by class: only trucks go to L1 (50 % of them), so only their entries thin out and only their fractions
// change. 2000 veh/h with 10 % trucks: 100 trucks an hour, 30 moved to L3, 70 not travelling.
func TestMoveThroughByClass(t *testing.T) {
	n, d := corridor(t)
	d.Classes = []demand.Class{{Name: "car", PCE: 1}, {Name: "truck", PCE: 2}}
	d.Entries = d.Entries[:1]
	d.Entries[0].Mix = []float64{0.9, 0.1}
	d.Turnings[0] = fractions(n, 0, map[int]float64{2: 1})
	truck := fractions(n, 0, map[int]float64{1: 0.5, 2: 0.5})
	truck.Class = 1
	d.Turnings = append(d.Turnings, truck)
	r := demand.Revise(d, demand.Window{To: 2 * hour})
	if err := r.MoveThrough(n, 1, []demand.Share{{To: 3, Share: 0.3}}, demand.Window{From: hour, To: 2 * hour}); err != nil {
		t.Fatal(err)
	}
	got, rec := r.Demand(), r.Record()
	near(t, "moved", rec.Moves[0].Vehicles, 30*(hour+36)/hour-30.0*36/hour)
	near(t, "suppressed", rec.Suppressed, 70)
	near(t, "balance", rec.Travelled, rec.Base-rec.Suppressed)
	near(t, "cars at L3", got.Lookup(8, 0).At(1.5 * hour)[0], 0.2)
	near(t, "trucks at L3", got.Lookup(8, 1).At(1.5 * hour)[0], (0.5*0.2+0.5*0.3)/(1-0.35))
	cars := 0.0
	for _, e := range got.Entries {
		cars += e.Flow.Vehicles(0, 2*hour) * e.Mix[0]
	}
	near(t, "cars", cars, 3600)
}

// On random road networks without turning back, in steady flow: the closed exit gets nothing, each target exit its own
// vehicles of the base and those told to go there, every other exit what it had (conservation, exit by exit).
func TestMoveThroughReconciles(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n, d := randomRoads(rt, t)
		base := exits(n, d, 0)
		var list []network.LinkID
		for l := range n.Links {
			if _, ok := base[network.LinkID(l)]; ok {
				list = append(list, network.LinkID(l))
			}
		}
		if len(list) < 3 {
			return
		}
		closed := list[rapid.IntRange(0, len(list)-1).Draw(rt, "closed")]
		var to []demand.Share
		for _, l := range list {
			if l != closed && len(to) < 2 {
				to = append(to, demand.Share{To: l, Share: rapid.Float64Range(0, 0.5).Draw(rt, "share")})
			}
		}
		r := demand.Revise(d, demand.Window{To: hour})
		if err := r.MoveThrough(n, closed, to, demand.Window{To: hour}); err != nil {
			return // no way: nothing to compare
		}
		got := exits(n, r.Demand(), 1800)
		want := map[network.LinkID]float64{}
		for l, x := range base {
			want[l] = x
		}
		for _, s := range to {
			want[s.To] += s.Share * base[closed]
		}
		want[closed] = 0
		for l, x := range want {
			if math.Abs(got[l]-x) > 1e-9*(1+x) {
				rt.Fatalf("exit %s: %v, want %v (base %v)", n.Links[l].Name, got[l], x, base[l])
			}
		}
	})
}

// randomRoads draws nodes in a row with links to later ones and random turning fractions.
func randomRoads(rt *rapid.T, tb testing.TB) (*network.Network, *demand.Demand) {
	count := rapid.IntRange(4, 8).Draw(rt, "nodes")
	ends := [][2]int{}
	for i := range count - 1 {
		ends = append(ends, [2]int{i, i + 1})
	}
	for range rapid.IntRange(2, 7).Draw(rt, "more") {
		from := rapid.IntRange(0, count-2).Draw(rt, "from")
		if rapid.Bool().Draw(rt, "exit") {
			ends = append(ends, [2]int{from, count})
			count++
		} else {
			ends = append(ends, [2]int{from, rapid.IntRange(from+1, count-1).Draw(rt, "to")})
		}
	}
	n := ways(tb, ends...)
	d := &demand.Demand{Classes: []demand.Class{{Name: "vehicle", PCE: 1}}}
	for l := range n.Links {
		// An entry on the closed exit itself is MoveEntry's business: none begins on an exit.
		if l == 0 || rapid.IntRange(0, 3).Draw(rt, "entry") == 0 && !n.IsExit(network.LinkID(l)) {
			d.Entries = append(d.Entries, steady(l, rapid.Float64Range(1, 3000).Draw(rt, "flow")))
		}
		out := n.Out(n.Links[l].To)
		if len(out) < 2 {
			continue
		}
		f, sum := map[int]float64{}, 0.0
		for _, o := range out {
			f[int(o)] = float64(rapid.IntRange(0, 4).Draw(rt, "weight"))
			sum += f[int(o)]
		}
		if sum == 0 {
			f[int(out[0])], sum = 1, 1
		}
		for o := range f {
			f[o] /= sum
		}
		d.Turnings = append(d.Turnings, fractions(n, l, f))
	}
	return n, d
}

// exits follows the entries' flows along the fractions of a time to the exits, link by link in a row of nodes.
func exits(n *network.Network, d *demand.Demand, t float64) map[network.LinkID]float64 {
	sum := map[network.LinkID]float64{}
	var follow func(l network.LinkID, q float64)
	follow = func(l network.LinkID, q float64) {
		out := n.Out(n.Links[l].To)
		switch {
		case len(out) == 0:
			sum[l] += q
		case len(out) == 1:
			follow(out[0], q)
		default:
			turn := d.Lookup(l, 0)
			for k, f := range turn.At(t) {
				if f > 0 {
					follow(turn.To[k], q*f)
				}
			}
		}
	}
	for i := range d.Entries {
		follow(d.Entries[i].Link, d.Entries[i].Flow.Vehicles(t, t+1))
	}
	return sum
}
