package ctm

import (
	"math"

	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// source is the queue outside the network at an entry link.
type source struct {
	link    network.LinkID
	first   int  // the link's first segment
	alone   bool // nothing else leads into the link
	entries []arrivals
	// By class, in vehicles: arrived this step or still waiting; all that wanted to enter; all that did.
	waiting, wanted, entered []float64
	seconds                  []float64 // vehicle-seconds waited
	available                float64   // passenger cars that could enter this step
	flow                     float64   // passenger cars that do
}

// arrivals is one entry and, so that most steps need no look at its profile, the flow that holds for a while.
type arrivals struct {
	*demand.Entry
	level, until float64
}

// vehicles that arrive from one time to another.
func (a *arrivals) vehicles(from, to float64) float64 {
	if to <= a.until {
		return a.level * (to - from)
	}
	veh := a.Flow.Vehicles(from, to)
	a.level, a.until = a.Flow.Level(to)
	return veh
}

// addSources makes one queue for each link that entries name, in the order in which they first do.
func (m *Model) addSources() {
	byLink := make(map[network.LinkID]int)
	for i := range m.demand.Entries {
		e := &m.demand.Entries[i]
		at, known := byLink[e.Link]
		if !known {
			at = len(m.sources)
			byLink[e.Link] = at
			c := len(m.pce)
			buf := make([]float64, 4*c)
			m.sources = append(m.sources, source{
				link: e.Link, first: m.grid.Links[e.Link].FirstSegment,
				alone: len(m.sc.Network.In(m.sc.Network.Links[e.Link].From)) == 0, waiting: buf[:c], wanted: buf[c : 2*c], entered: buf[2*c : 3*c], seconds: buf[3*c:],
			})
		}
		m.sources[at].entries = append(m.sources[at].entries, arrivals{Entry: e, until: math.Inf(-1)})
	}
}

// arrive adds the vehicles of a step to the waiting ones.
func (m *Model) arrive() {
	from := m.grid.Time(m.step)
	to := m.grid.Time(m.step + 1)
	for i := range m.sources {
		s := &m.sources[i]
		for k := range s.entries {
			e := &s.entries[k]
			veh := e.vehicles(from, to)
			if len(s.waiting) == 1 {
				s.waiting[0] += veh
				s.wanted[0] += veh
				continue
			}
			for c := range s.waiting {
				share := 1.0
				if e.Mix != nil {
					share = e.Mix[c]
				} else if c > 0 {
					share = 0
				}
				s.waiting[c] += veh * share
				s.wanted[c] += veh * share
			}
		}
		s.available = 0
		for c, w := range s.waiting {
			s.available += w * m.pce[c]
		}
	}
}

// enter lets in what the nodes allowed, all classes in the proportions in which they wait, and counts the
// waiting time of the rest.
func (m *Model) enter() {
	for i := range m.sources {
		s := &m.sources[i]
		share := 0.0
		if s.available > 0 {
			share = min(1, s.flow/s.available)
		}
		for c, w := range s.waiting {
			veh := w * share
			s.entered[c] += veh
			s.waiting[c] = w - veh
			s.seconds[c] += s.waiting[c] * m.grid.Step
			if m.classes != nil {
				m.inC[c][s.first] += veh
			}
		}
	}
}
