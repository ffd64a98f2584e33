package main

import (
	"fmt"
	"io"
	"math"
	"sort"
	"strings"

	"example.org/tailback/ctm/observe"
	"example.org/tailback/ctm/study"
	"example.org/tailback/io/table"
	"example.org/tailback/network/unit"
)

// screen is one run for people to read, at most 80 columns wide.
type screen struct {
	title, name string // of the study and of the run
	reviewer    string // empty for none
	folder      string // where the files are
	units       unit.System
	result      *study.Result
	changes     []string // what an alternative changes
	brief       bool     // without how it was computed and the caution, which the base's screen has
	notes       []string // which numbers it uses and where they come from
}

// The screen shows the costliest queues and the first nodes that each reached; the files hold all of them.
const (
	shownQueues = 3
	shownNodes  = 4
)

// write prints the screen.
func (s *screen) write(w io.Writer) error {
	var b strings.Builder
	b.WriteString(hang("", s.title))
	h := s.result.Scenario.Horizon
	b.WriteString(hang("", fmt.Sprintf("%s, %s to %s. %s", s.name, minute(h.Start), minute(h.End), s.standing())))
	for _, change := range s.changes {
		b.WriteString(block("change", change))
	}
	for _, note := range s.notes {
		b.WriteString(block("note", note))
	}
	b.WriteByte('\n')
	s.queues(&b)
	b.WriteByte('\n')
	s.traffic(&b)
	b.WriteByte('\n')
	if !s.brief {
		s.method(&b)
	}
	for _, warning := range s.result.Warnings {
		b.WriteString(block("warning", warning))
	}
	if !s.brief {
		b.WriteString(block("caution", table.Caution))
	}
	b.WriteString(block("files", s.folder))
	_, err := io.WriteString(w, b.String())
	return err
}

// standing says who stands for the result.
func (s *screen) standing() string {
	if s.reviewer == "" {
		return "PRELIMINARY until the study names a reviewer."
	}
	return "Reviewer: " + s.reviewer + "."
}

// axis names places in the screen's units.
func (s *screen) axis() axis {
	return axis{s.result.Scenario.Network, s.result.Scenario.Corridors, s.units}
}

// queues writes the costliest queues in the order of their onset.
func (s *screen) queues(b *strings.Builder) {
	all := s.result.Queues.Bottlenecks
	if len(all) == 0 {
		b.WriteString("No queue forms.\n")
		return
	}
	shown := append([]observe.Bottleneck(nil), all...)
	sort.SliceStable(shown, func(i, k int) bool { return shown[i].Delay > shown[k].Delay })
	shown = shown[:min(len(shown), shownQueues)]
	sort.SliceStable(shown, func(i, k int) bool { return shown[i].Queue < shown[k].Queue })
	for i := range shown {
		s.queue(b, &shown[i])
	}
	if more := len(all) - len(shown); more > 0 {
		fmt.Fprintf(b, "and %s that cost less: see bottlenecks.csv\n", plural(more, "queue"))
	}
}

// queue writes one of them.
func (s *screen) queue(b *strings.Builder, q *observe.Bottleneck) {
	a := s.axis()
	span := "still standing at the end"
	if !math.IsNaN(q.Clearance) {
		span = "cleared " + minute(q.Clearance)
	}
	fmt.Fprintf(b, "Queue %d at %s: from %s, %s\n", q.Queue, a.place(q.Place.Link, q.Place.At), minute(q.Onset), span)
	b.WriteString(block("  length", fmt.Sprintf("%s at most, at %s; it reaches back to %s at %s",
		s.units.Length(q.MaxQueue), minute(q.MaxQueueTime), a.place(q.FarthestAt.Link, q.FarthestAt.At), minute(q.FarthestTime))))
	b.WriteString(block("  vehicles", fmt.Sprintf("%s queued at most; the bottleneck lets %s through", whole(q.MaxVehicles), s.units.Flow(q.Throughput))))
	b.WriteString(block("  cost", fmt.Sprintf("%s of delay in the queue", hours(q.Delay))))
	label := "  reaches"
	for _, node := range s.reached(q.Queue) {
		b.WriteString(block(label, node))
		label = ""
	}
}

// reached lists the nodes that a queue reached, with the times at which its tail came and went.
func (s *screen) reached(queue int) []string {
	n := s.result.Scenario.Network
	var list []string
	more := 0
	for i := range s.result.Queues.Spillbacks {
		r := &s.result.Queues.Spillbacks[i]
		switch {
		case r.Queue != queue:
		case len(list) == shownNodes:
			more++
		default:
			left := "the end"
			if !math.IsNaN(r.Left) {
				left = minute(r.Left)
			}
			list = append(list, fmt.Sprintf("%s, %s to %s", s.axis().node(n.Links[r.Link].From, r.Link), minute(r.Reached), left))
		}
	}
	if more > 0 {
		list = append(list, fmt.Sprintf("and %d more in spillback.csv", more))
	}
	return list
}

// traffic writes what the whole network did.
func (s *screen) traffic(b *strings.Builder) {
	t := &s.result.Totals
	b.WriteString(block("delay", fmt.Sprintf("%s in all, waiting outside included; %s on the road over %s", hours(t.Delay), hours(t.Seconds), distance(t.Metres, s.units))))
	outside := "no vehicle had to wait to enter"
	if few(t.WaitingSeconds/unit.Hour) != few(0) {
		outside = fmt.Sprintf("%s waited to enter, %s vehicles still do at the end", hours(t.WaitingSeconds), whole(t.Waiting))
	}
	b.WriteString(block("outside", outside))
	b.WriteString(block("vehicles", fmt.Sprintf("%s in = %s out + %s inside + %s waiting; difference %.1e",
		whole(t.Wanted), whole(t.Left), whole(t.Inside), whole(t.Waiting), s.result.Lost)))
	for i := range s.result.Corridors.Chains {
		b.WriteString(block("travel time", s.travelTime(i)))
	}
}

// travelTime writes the free and the longest travel time of a corridor among departures every report interval.
func (s *screen) travelTime(corridor int) string {
	c := s.result.Corridors
	worst, at := 0.0, 0.0
	for _, depart := range s.result.Links.Times {
		if x := c.TravelTime(corridor, depart); x > worst+1 {
			worst, at = x, depart
		}
	}
	text := fmt.Sprintf("%s: %.1f min when free", c.Chains[corridor].Name, c.FreeTime(corridor)/unit.Minute)
	if worst > 0 {
		text += fmt.Sprintf(", %.1f min at most (leaving at %s)", worst/unit.Minute, minute(at))
	}
	return text
}

// method writes how the figures were made.
func (s *screen) method(b *strings.Builder) {
	g := s.result.Grid
	b.WriteString(block("queued is", queued(s.result.Criterion, s.units)))
	b.WriteString(block("computed", fmt.Sprintf("%s, %s of %.3g s, Courant number %.4f at most, in %.2f s",
		plural(g.Cells, "cell"), plural(g.Steps, "step"), g.Step, g.MaxCourant, s.result.Wall)))
}

// queued describes a criterion in a unit system.
func queued(c observe.Criterion, units unit.System) string {
	if c.Kind == observe.SpeedBelow {
		return "speed below " + units.Speed(c.Value)
	}
	return c.String()
}
