package observe

import (
	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// Run is a stretch of one link whose cells are all queued, as long as it goes.
type Run struct {
	Link     network.LinkID
	Tail     float64 // upstream end, m from the link's start, found inside the cell
	Head     float64 // downstream end, m from the link's start
	AtStart  bool    // it touches the link's upstream end
	AtEnd    bool    // it touches the link's downstream end
	First    int     // its cells, numbers of the grid
	Last     int
	Vehicles float64 // in the stretch, all classes
	Held     float64 // vehicles x (1 - speed / the link's free speed): vehicle-seconds of delay per second
}

// Length is the stretch's length in metres.
func (r *Run) Length() float64 { return r.Head - r.Tail }

// Finder finds the queued runs of all links. It keeps scratch; one goroutine uses it.
type Finder struct {
	Criterion Criterion
	runs      []Run
	first     []int     // by link: its first run; len == links+1
	full      []float64 // by segment: content of a cell above which it is queued
	version   int       // of the roads for which full holds
	veh       []float64
}

// Find returns the queued runs in link order, upstream to downstream. The slice is valid until the next call.
func (f *Finder) Find(v ctm.View) []Run {
	g := v.Grid()
	f.runs, f.first = f.runs[:0], f.first[:0]
	if f.full == nil || f.version != v.Version() {
		f.version, f.full = v.Version(), f.full[:0]
		for s := range g.Segments {
			road := v.Road(s)
			f.full = append(f.full, f.Criterion.density(road)*road.Lanes*g.Segments[s].Dx)
		}
	}
	for i := range g.Links {
		f.first = append(f.first, len(f.runs))
		f.find(v, network.LinkID(i))
	}
	f.first = append(f.first, len(f.runs))
	return f.runs
}

// Of returns the runs of one link from the last Find.
func (f *Finder) Of(link network.LinkID) []Run { return f.runs[f.first[link]:f.first[link+1]] }

// find appends the runs of one link.
func (f *Finder) find(v ctm.View, link network.LinkID) {
	g := v.Grid()
	l, cars := g.Links[link], v.Cars()
	open := -1 // first cell of the run being read
	for s := l.FirstSegment; s <= l.Last(); s++ {
		seg, full := &g.Segments[s], f.full[s]
		for i, n := range cars[seg.First : seg.First+seg.Cells] {
			switch {
			case n > full:
				if open < 0 {
					open = seg.First + i
				}
			case open >= 0:
				f.add(v, link, open, seg.First+i-1)
				open = -1
			}
		}
	}
	if open >= 0 {
		f.add(v, link, open, l.First+l.Cells-1)
	}
}

// add measures one run and appends it.
func (f *Finder) add(v ctm.View, link network.LinkID, first, last int) {
	g := v.Grid()
	l := g.Links[link]
	r := Run{Link: link, First: first, Last: last, AtStart: first == l.First, AtEnd: last == l.First+l.Cells-1}
	_, r.Head = cellEnds(g, link, last)
	r.Tail = tail(v, link, first, last)
	f.veh = append(f.veh[:0], make([]float64, l.Cells)...)
	for c := range v.Classes() {
		v.Vehicles(f.veh, link, demand.ClassID(c))
		for i := first; i <= last; i++ {
			r.Vehicles += f.veh[i-l.First]
			r.Held += f.veh[i-l.First] * f.slow(v, link, i)
		}
	}
	f.runs = append(f.runs, r)
}

// slow is the share of its time that a vehicle in a cell loses against the link's own free speed.
func (f *Finder) slow(v ctm.View, link network.LinkID, cell int) float64 {
	s := segmentOf(v.Grid(), link, cell)
	free := v.Scenario().Network.Links[link].Diagram.FreeSpeed()
	return max(0, 1-diagram.Speed(v.Road(s).Diagram, density(v, s, cell))/free)
}

// cellEnds are the positions of a cell's ends in metres from its link's start.
func cellEnds(g *ctm.Grid, link network.LinkID, cell int) (from, to float64) {
	s := segmentOf(g, link, cell)
	from = g.Segments[s].From + float64(cell-g.Segments[s].First)*g.Segments[s].Dx
	return from, from + g.Segments[s].Dx
}

// segmentOf is the number of the segment of a link that holds a cell.
func segmentOf(g *ctm.Grid, link network.LinkID, cell int) int {
	s := g.Links[link].FirstSegment
	for cell >= g.Segments[s].First+g.Segments[s].Cells {
		s++
	}
	return s
}

// tail places the upstream end of a run inside its cells, so that the vehicles agree: the scheme spreads a
// shock between density a (arriving) and b (queued) over two cells or so, and
//
//	length of queue in them = sum (k - a) dx / (b - a)
//
// (equal areas, the conservation argument of Rankine and Hugoniot). Where the run fills the link's first cell,
// a comes from the flow into the link.
func tail(v ctm.View, link network.LinkID, first, last int) float64 {
	g := v.Grid()
	l := g.Links[link]
	s := segmentOf(g, link, first)
	from, to := cellEnds(g, link, first)
	if first == last { // a queue of one cell: nothing behind tells how full it can get
		return from
	}
	b := density(v, segmentOf(g, link, first+1), first+1)
	k := density(v, s, first)
	if first == l.First {
		road := v.Road(s)
		a := v.Inflow(s) / (road.Lanes * road.Diagram.FreeSpeed())
		return to - share(k-a, b-a)*(to-from)
	}
	before := segmentOf(g, link, first-1)
	a, at := density(v, before, first-1), before
	excess := 0.0
	if first-2 >= l.First {
		at = segmentOf(g, link, first-2)
		if outer := density(v, at, first-2); outer < a {
			start, _ := cellEnds(g, link, first-1)
			excess = share(a-outer, b-outer) * (from - start)
			a = outer
		}
	}
	return to - share(k-a, b-a)*(to-from) - excess
}

// share is part/whole within [0, 1], and 1 where the whole is not positive.
func share(part, whole float64) float64 {
	if whole <= 0 {
		return 1
	}
	return max(0, min(1, part/whole))
}

// density of a cell in passenger cars per metre and lane.
func density(v ctm.View, segment, cell int) float64 {
	return v.Cars()[cell] / (v.Grid().Segments[segment].Dx * v.Road(segment).Lanes)
}
