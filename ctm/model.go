package ctm

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// Model is a scenario on its grid, with its state. One goroutine steps it.
type Model struct {
	sc      *Scenario
	grid    *Grid
	step    int
	version int      // of the roads
	roads   []Road   // by segment, in force
	coefs   []coef   // by segment, in force
	lim     *Limits  // in force
	limited []int    // links whose end is limited
	plan    schedule // when limits change

	n       []float64   // passenger cars per cell
	classes [][]float64 // vehicles per class and cell; nil with one class
	pce     []float64   // by class

	first, last []float64 // by segment: receiving of its first cell, sending of its last one, pc per step
	in, out     []float64 // by segment: flow over its ends this step, pc per step
	inC, outC   [][]float64
	nodes       []node
	joints      []joint
	sources     []source
	exits       []exit

	count  [][]tally // by class and link
	lastOf []int     // by link: its last segment
	wk     work
	demand *demand.Demand
	turns  demand.Turns
	turnAt float64 // when turning fractions change next
}

// tally holds what has crossed a link's ends since the start, in vehicles of one class.
type tally struct {
	in, out float64
	inside  float64 // on the link now
	seconds float64 // vehicle-seconds spent on the link
}

// work is scratch for one run of cells at a time.
type work struct{ k, sending, receiving []float64 }

// ErrNotConserved, ErrDensity say that the solver itself failed; they carry time and place in their text.
var (
	ErrNotConserved = errors.New("vehicles were lost or made")
	ErrDensity      = errors.New("density outside [0, jam]")
)

// New cuts a scenario's road into cells and makes the empty model. It returns an error where the period and
// report interval do not fit together.
func New(sc *Scenario) (*Model, error) {
	g, err := newGrid(sc)
	if err != nil {
		return nil, err
	}
	sc = stretched(sc, g)
	m := &Model{
		sc: sc, grid: g, demand: sc.Demand, turns: sc.Demand.Turns(),
		n:     make([]float64, g.Cells),
		roads: make([]Road, len(g.Segments)), coefs: make([]coef, len(g.Segments)),
		first: make([]float64, len(g.Segments)), last: make([]float64, len(g.Segments)),
		in: make([]float64, len(g.Segments)), out: make([]float64, len(g.Segments)),
		lim: newLimits(g),
	}
	m.plan = newSchedule(sc)
	for i := range g.Links {
		m.lastOf = append(m.lastOf, g.Links[i].Last())
	}
	m.addClasses()
	m.addSources()
	m.addNodes()
	longest := 2
	for s := range g.Segments {
		longest = max(longest, g.Segments[s].Cells)
	}
	m.wk = work{make([]float64, longest), make([]float64, longest), make([]float64, longest)}
	m.refresh()
	return m, nil
}

// stretched returns the scenario with link lengths as on the grid.
func stretched(sc *Scenario, g *Grid) *Scenario {
	if !sc.Horizon.Stretch {
		return sc
	}
	n := *sc.Network
	n.Links = slices.Clone(n.Links)
	for i := range n.Links {
		n.Links[i].Length = g.Links[i].Length
	}
	s := *sc
	s.Network = &n
	return &s
}

// addClasses makes room for the state of each class.
func (m *Model) addClasses() {
	classes := m.demand.Classes
	if len(classes) == 0 {
		classes = []demand.Class{{Name: "vehicle", PCE: 1}}
	}
	links := len(m.grid.Links)
	for _, c := range classes {
		m.pce = append(m.pce, c.PCE)
		m.count = append(m.count, make([]tally, links))
		if len(classes) > 1 {
			m.classes = append(m.classes, make([]float64, m.grid.Cells))
			m.inC = append(m.inC, make([]float64, len(m.grid.Segments)))
			m.outC = append(m.outC, make([]float64, len(m.grid.Segments)))
		}
	}
}

// coef holds a segment's parameters per step: flows in passenger cars per step, contents per cell.
type coef struct {
	from, to int // its cells: from <= i < to
	linear   bool
	entry    float64 // largest flow into the first cell, pc per step
	narrowed bool    // fewer lanes than the link has: a cell may hold more than fits
	a, b     float64 // Courant numbers of the free and the congested branch
	q, nj    float64 // capacity per step, storage per cell
	critical float64 // content at critical density
	jam      float64 // content at jam density of the road without measures, +Inf without one
	perLane  float64 // density per lane and content, 1/m
	perStep  float64 // flow per step and flow per lane, s
	d        diagram.Diagram
}

func newCoef(seg *Segment, r *Road, link *network.Link, step float64) coef {
	c := coef{
		from: seg.First, to: seg.First + seg.Cells, d: r.Diagram, perLane: 1 / (seg.Dx * r.Lanes), perStep: r.Lanes * step,
		critical: r.Diagram.Critical() * r.Lanes * seg.Dx,
		jam:      link.Diagram.Jam() * link.Lanes * seg.Dx,
	}
	c.q = diagram.Capacity(r.Diagram) * c.perStep
	c.narrowed = r.Lanes < link.Lanes
	if v, q, w, kj, ok := diagram.AsLinear(r.Diagram); ok {
		c.linear = true
		c.a, c.b = min(1, v*step/seg.Dx), min(1, w*step/seg.Dx)
		c.q, c.nj = q*c.perStep, kj*r.Lanes*seg.Dx
	}
	c.entry = min(c.q, r.Entry*step)
	return c
}

// ends finds the receiving flow of each segment's first cell and the sending flow of its last one.
func (m *Model) ends() {
	for s := range m.coefs {
		c := &m.coefs[s]
		first, last := m.n[c.from], m.n[c.to-1]
		if c.linear {
			m.first[s], m.last[s] = max(0, min(c.entry, c.b*(c.nj-first))), min(c.a*last, c.q)
		} else {
			k, sending, receiving := m.wk.k[:2], m.wk.sending[:2], m.wk.receiving[:2]
			k[0], k[1] = first*c.perLane, last*c.perLane
			c.fill(sending, receiving, k)
			m.first[s], m.last[s] = min(c.entry, receiving[0]*c.perStep), min(sending[1]*c.perStep, last)
		}
	}
	for _, link := range m.limited {
		s := m.grid.Links[link].Last()
		m.last[s] = min(m.last[s], m.lim.LinkEnd[link]*m.grid.Step)
	}
}

// fill computes sending and receiving per lane at densities per lane.
func (c *coef) fill(sending, receiving, k []float64) { diagram.Fill(c.d, sending, receiving, k) }

// refresh applies the measures in force and derives the segments' parameters from them.
func (m *Model) refresh() {
	m.version++
	m.lim.reset()
	for _, measure := range m.sc.Measures {
		measure.Apply(View{m}, m.lim)
	}
	for s := range m.grid.Segments {
		seg := &m.grid.Segments[s]
		link := &m.sc.Network.Links[seg.Link]
		m.roads[s] = road(link, &m.lim.Segments[s])
		m.coefs[s] = newCoef(seg, &m.roads[s], link, m.grid.Step)
	}
	m.limited = m.limited[:0]
	for i, flow := range m.lim.LinkEnd {
		if !math.IsInf(flow, 1) {
			m.limited = append(m.limited, i)
		}
	}
	m.refreshNodes()
}

// Check compares what the sources released with what is on the road and what has left, and looks for
// densities out of range. It returns the difference in vehicles and an error with time and place.
func (m *Model) Check() (float64, error) {
	for s := range m.grid.Segments {
		seg, jam := &m.grid.Segments[s], m.coefs[s].jam
		for i := seg.First; i < seg.First+seg.Cells; i++ {
			if !(m.n[i] >= -1e-9) || m.n[i] > jam*(1+1e-9)+1e-9 {
				return 0, fmt.Errorf("%w: %g passenger cars in cell %d (%.0f m) of link `%s` at %.0f s, where %g fit",
					ErrDensity, m.n[i], i-m.grid.Links[seg.Link].First, seg.From+float64(i-seg.First)*seg.Dx, m.sc.Network.Links[seg.Link].Name, m.grid.Time(m.step), jam)
			}
		}
	}
	v := View{m}
	t := v.Totals()
	lost := t.Wanted - t.Waiting - t.Inside - t.Left
	if !(lost < 1e-9*(1+t.Wanted) && lost > -1e-9*(1+t.Wanted)) {
		return lost, fmt.Errorf("%w: %g of %g at %.0f s", ErrNotConserved, lost, t.Wanted, m.grid.Time(m.step))
	}
	return lost, nil
}
