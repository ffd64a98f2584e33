package ctm

import (
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// View is what an observer or a measure may look at: the state at the beginning of a step. Slices must not be
// changed and are valid until the call returns.
type View struct{ m *Model }

// View returns the model's present state.
func (m *Model) View() View { return View{m} }

// Grid is the road cut into cells.
func (v View) Grid() *Grid { return v.m.grid }

// Scenario is what is being computed. Its links have the lengths in use, stretched ones included.
func (v View) Scenario() *Scenario { return v.m.sc }

// Step is the number of steps done.
func (v View) Step() int { return v.m.step }

// Time is the clock, s after midnight of the first day.
func (v View) Time() float64 { return v.m.grid.Time(v.m.step) }

// Road is what a segment is like at present.
func (v View) Road(segment int) *Road { return &v.m.roads[segment] }

// Version changes whenever a Road does.
func (v View) Version() int { return v.m.version }

// Cars is the content of every cell in passenger cars, len == Grid().Cells.
func (v View) Cars() []float64 { return v.m.n }

// Classes is the number of vehicle classes, at least 1.
func (v View) Classes() int { return len(v.m.pce) }

// Vehicles writes the number of vehicles of a class in each cell of a link into dst, which must be as long as
// the link has cells.
func (v View) Vehicles(dst []float64, link network.LinkID, class demand.ClassID) {
	l := v.m.grid.Links[link]
	if v.m.classes != nil {
		copy(dst, v.m.classes[class][l.First:l.First+l.Cells])
		return
	}
	for i := range dst {
		dst[i] = v.m.n[l.First+i] / v.m.pce[0]
	}
}

// In is the number of vehicles of a class that entered a link since the start.
func (v View) In(link network.LinkID, class demand.ClassID) float64 { return v.m.count[class][link].in }

// Out is the number of vehicles of a class that left a link since the start.
func (v View) Out(link network.LinkID, class demand.ClassID) float64 {
	return v.m.count[class][link].out
}

// Inside is the number of vehicles of a class on a link.
func (v View) Inside(link network.LinkID, class demand.ClassID) float64 {
	return v.m.count[class][link].inside
}

// Seconds is the time that vehicles of a class have spent on a link since the start, vehicle-seconds.
func (v View) Seconds(link network.LinkID, class demand.ClassID) float64 {
	return v.m.count[class][link].seconds
}

// Source is the queue outside at an entry, counted since the start, of one class.
type Source struct {
	Link    network.LinkID
	Wanted  float64 // vehicles that wanted to enter
	Entered float64 // vehicles that did
	Waiting float64 // vehicles that wait now
	Seconds float64 // vehicle-seconds waited
}

// Sources is the number of entry links.
func (v View) Sources() int { return len(v.m.sources) }

// Source gives the counts of entry number i for one class.
func (v View) Source(i int, class demand.ClassID) Source {
	s := &v.m.sources[i]
	return Source{s.link, s.wanted[class], s.entered[class], s.waiting[class], s.seconds[class]}
}

// Totals of the whole network since the start, in vehicles and vehicle-seconds, all classes.
type Totals struct {
	Wanted, Entered, Left, Inside, Waiting float64
	Seconds, WaitingSeconds                float64
}

// Totals sums over the network. Inside is counted from the cells, not from what entered and left, so that
// comparing the two checks conservation.
func (v View) Totals() Totals {
	var t Totals
	for c := range v.m.pce {
		class := demand.ClassID(c)
		for i := range v.m.sources {
			s := v.Source(i, class)
			t.Wanted += s.Wanted
			t.Entered += s.Entered
			t.Waiting += s.Waiting
			t.WaitingSeconds += s.Seconds
		}
		for i := range v.m.grid.Links {
			if v.m.sc.Network.IsExit(network.LinkID(i)) {
				t.Left += v.Out(network.LinkID(i), class)
			}
			t.Seconds += v.Seconds(network.LinkID(i), class)
		}
		if v.m.classes != nil {
			for _, x := range v.m.classes[c] {
				t.Inside += x
			}
		}
	}
	if v.m.classes == nil {
		for _, x := range v.m.n {
			t.Inside += x / v.m.pce[0]
		}
	}
	return t
}

// Inflow is the flow into a segment during the last step, passenger cars per second.
func (v View) Inflow(segment int) float64 { return v.m.in[segment] / v.m.grid.Step }

// Outflow is the flow out of a segment during the last step, passenger cars per second.
func (v View) Outflow(segment int) float64 { return v.m.out[segment] / v.m.grid.Step }
