package study

import (
	"fmt"
	"math"

	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// Sense says in which direction a measure gets better.
type Sense int

// The senses of a measure.
const (
	Neither Sense = iota
	Lower         // less is better
	Higher        // more is better
)

// Change is one measure of a base and an alternative. A value that does not exist (no queue, so no time of the
// longest) is NaN.
type Change struct {
	Measure     string // with its unit, as in compare.csv
	Base, Value float64
	Better      Sense
}

// Diff is the alternative less the base; NaN where either does not exist.
func (c *Change) Diff() float64 { return c.Value - c.Base }

// Percent is the change as a percentage of the base; NaN where the base is 0.
func (c *Change) Percent() float64 {
	if c.Base == 0 {
		return math.NaN()
	}
	return 100 * c.Diff() / c.Base
}

// Verdict is "better", "worse", "same", or "" where neither direction is better.
func (c *Change) Verdict() string {
	d := c.Diff()
	switch {
	case c.Better == Neither || math.IsNaN(d):
		return ""
	case math.Abs(d) <= 1e-9*(1+math.Abs(c.Base)):
		return "same"
	case (d < 0) == (c.Better == Lower):
		return "better"
	}
	return "worse"
}

// Comparison is an alternative beside its base.
type Comparison struct {
	Name     string
	Changes  []Change
	Moved    demand.Record // what became of the base's vehicles
	Warnings []string      // differences that the named change does not explain
}

// measure is a figure of a run that a comparison shows.
type measure struct {
	name   string
	better Sense
	of     func(*Result) float64
}

// measures lists what is compared, in the order of the table.
var measures = [...]measure{
	{"travel_veh_hours", Lower, func(r *Result) float64 { return r.Totals.Seconds / 3600 }},
	{"travel_veh_km", Neither, func(r *Result) float64 { return r.Totals.Metres / 1000 }},
	{"delay_veh_hours", Lower, func(r *Result) float64 { return r.Totals.Delay / 3600 }},
	{"waiting_veh_hours", Lower, func(r *Result) float64 { return r.Totals.WaitingSeconds / 3600 }},
	{"max_queue_m", Lower, func(r *Result) float64 { return r.Totals.MaxQueue }},
	{"max_queue_time_s", Neither, (*Result).longestTime},
	{"last_clearance_s", Lower, (*Result).lastClearance},
	{"bottleneck_throughput_veh_per_h", Higher, (*Result).throughput},
	{"worst_corridor_time_s", Lower, (*Result).worstCorridor},
	{"links_reached_by_a_queue", Lower, func(r *Result) float64 { return float64(len(r.Reached())) }},
	{"ramps_reached_by_a_queue", Lower, (*Result).rampsReached},
	{"wanted_veh", Neither, func(r *Result) float64 { return r.Totals.Wanted }},
	{"entered_veh", Neither, func(r *Result) float64 { return r.Totals.Entered }},
	{"left_veh", Higher, func(r *Result) float64 { return r.Totals.Left }},
	{"inside_veh", Neither, func(r *Result) float64 { return r.Totals.Inside }},
	{"waiting_veh", Lower, func(r *Result) float64 { return r.Totals.Waiting }},
}

// Compare puts an alternative beside its base.
func Compare(base, alternative *Result, moved demand.Record) *Comparison {
	c := &Comparison{Name: alternative.Scenario.Name, Moved: moved, Warnings: differences(base, alternative, moved)}
	for _, m := range measures {
		c.Changes = append(c.Changes, Change{m.name, m.of(base), m.of(alternative), m.better})
	}
	return c
}

// differences lists what differs between two runs beside the measures and the moves on record.
func differences(base, alt *Result, moved demand.Record) []string {
	var list []string
	say := func(format string, args ...any) { list = append(list, fmt.Sprintf(format, args...)) }
	if base.Grid.Step != alt.Grid.Step || base.Grid.Cells != alt.Grid.Cells {
		say("the grids differ: %d cells and steps of %.4g s against %d and %.4g s; part of the change is numerical",
			base.Grid.Cells, base.Grid.Step, alt.Grid.Cells, alt.Grid.Step)
	}
	if base.Scenario.Horizon != alt.Scenario.Horizon {
		say("the periods or grids asked for differ")
	}
	if base.Criterion != alt.Criterion {
		say("what counts as queued differs: %s against %s", base.Criterion, alt.Criterion)
	}
	expected := base.Totals.Wanted - moved.Suppressed + moved.Added
	if d := alt.Totals.Wanted - expected; math.Abs(d) > 1e-6*(1+expected) {
		say("%.1f vehicles want to travel in one run and not in the other, which no named change explains", d)
	}
	return list
}

func (r *Result) longestTime() float64 {
	if r.Totals.MaxQueue == 0 {
		return math.NaN()
	}
	return r.Totals.MaxQueueTime
}

// lastClearance is when the last queue cleared, s after midnight: NaN without queues, the end of the period where one
// still stands.
func (r *Result) lastClearance() float64 {
	last := math.NaN()
	for i := range r.Queues.Bottlenecks {
		t := r.Queues.Bottlenecks[i].Clearance
		if math.IsNaN(t) {
			t = r.Scenario.Horizon.End
		}
		if !(last >= t) {
			last = t
		}
	}
	return last
}

// throughput is that of the costliest bottleneck in veh/h, NaN without one.
func (r *Result) throughput() float64 {
	b := r.Bottleneck()
	if b == nil {
		return math.NaN()
	}
	return b.Throughput * 3600
}

// worstCorridor is the longest travel time on any corridor in s, NaN without corridors.
func (r *Result) worstCorridor() float64 {
	worst := math.NaN()
	for i := range r.Corridors.Chains {
		for _, depart := range r.Links.Times[:len(r.Links.Times)-1] {
			if t := r.Corridors.TravelTime(i, depart); !math.IsNaN(t) && !(worst >= t) {
				worst = t
			}
		}
	}
	return worst
}

// Reached lists the links whose upstream end a queue reached, each once, in order of time.
func (r *Result) Reached() []network.LinkID {
	var list []network.LinkID
	seen := make(map[network.LinkID]bool)
	for i := range r.Queues.Spillbacks {
		if l := r.Queues.Spillbacks[i].Link; !seen[l] {
			seen[l] = true
			list = append(list, l)
		}
	}
	return list
}

// rampsReached counts the nodes that a queue reached where a ramp joins or leaves: those where more than one link
// ends or begins.
func (r *Result) rampsReached() float64 {
	n := r.Scenario.Network
	nodes := make(map[network.NodeID]bool)
	for _, l := range r.Reached() {
		from := n.Links[l].From
		if len(n.In(from)) > 1 || len(n.Out(from)) > 1 {
			nodes[from] = true
		}
	}
	return float64(len(nodes))
}
