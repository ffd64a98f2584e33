package observe

import (
	"math"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// Corridors records the density of every cell of every corridor at each look, and gives travel times from them: a
// vehicle that departs at a time drives through the recorded field, at the speed of the cell it is in, until it
// has passed the last one. The speed of a cell is the flow its density carries over that density.
type Corridors struct {
	Chains []network.Corridor
	times  []float64
	roads  []int // by look: which version of the paths' diagrams
	last   int   // version of the view at the last look
	paths  []path
}

// path is one corridor's cells.
type path struct {
	cells    []int
	segments []int
	dx       []float64
	free     float64             // s
	density  [][]float32         // by look and cell, passenger cars per metre and lane
	diagrams [][]diagram.Diagram // by version and cell
}

// NewCorridors makes the observer for the corridors of a scenario; watch it about every half minute.
func NewCorridors(chains []network.Corridor) *Corridors { return &Corridors{Chains: chains} }

// Observe implements ctm.Observer.
func (o *Corridors) Observe(v ctm.View) error {
	if o.paths == nil {
		for i := range o.Chains {
			o.paths = append(o.paths, newPath(v, &o.Chains[i]))
		}
	}
	if len(o.times) == 0 || v.Version() != o.last {
		o.last = v.Version()
		for i := range o.paths {
			o.paths[i].renew(v)
		}
	}
	o.times = append(o.times, v.Time())
	for i := range o.paths {
		p := &o.paths[i]
		o.roads = append(o.roads[:len(o.times)-1], len(p.diagrams)-1)
		density := make([]float32, len(p.cells))
		for k, cell := range p.cells {
			density[k] = float32(v.Cars()[cell] / (p.dx[k] * v.Road(p.segments[k]).Lanes))
		}
		p.density = append(p.density, density)
	}
	return nil
}

// renew notes the diagrams in force.
func (p *path) renew(v ctm.View) {
	list := make([]diagram.Diagram, len(p.cells))
	for k, s := range p.segments {
		list[k] = v.Road(s).Diagram
	}
	p.diagrams = append(p.diagrams, list)
}

// speed of a cell at a look, m/s.
func (o *Corridors) speed(p *path, look, cell int) float64 {
	return diagram.Speed(p.diagrams[o.roads[look]][cell], float64(p.density[look][cell]))
}

func newPath(v ctm.View, c *network.Corridor) path {
	var p path
	g := v.Grid()
	for _, link := range c.Links {
		l := g.Links[link]
		p.free += v.Scenario().Network.Links[link].FreeTime()
		for s := l.FirstSegment; s <= l.Last(); s++ {
			for i := range g.Segments[s].Cells {
				p.cells = append(p.cells, g.Segments[s].First+i)
				p.segments = append(p.segments, s)
				p.dx = append(p.dx, g.Segments[s].Dx)
			}
		}
	}
	return p
}

// FreeTime is the travel time of the empty corridor in seconds.
func (o *Corridors) FreeTime(corridor int) float64 { return o.paths[corridor].free }

// TravelTime is the travel time in seconds of a vehicle that departs at a time (s after midnight), NaN if it has
// not arrived when the record ends.
func (o *Corridors) TravelTime(corridor int, depart float64) float64 {
	p := &o.paths[corridor]
	now, look := depart, 0
	for k := range p.cells {
		left := p.dx[k]
		for left > 0 {
			for look+1 < len(o.times) && o.times[look+1] <= now+1e-9 {
				look++
			}
			if look+1 >= len(o.times) {
				return math.NaN()
			}
			v := o.speed(p, look, k)
			until := o.times[look+1] - now
			if v*until < left { // the next look finds it in the same cell
				left -= v * until
				now = o.times[look+1]
				continue
			}
			now += left / v
			left = 0
		}
	}
	return now - depart
}
