package main

import (
	"fmt"
	"io"
	"math"
	"os"
	"strings"

	"example.org/tailback/ctm/study"
	"example.org/tailback/io/table"
	"example.org/tailback/network/unit"
)

// compareCommand computes the base and its alternatives and puts them side by side.
type compareCommand struct {
	job
}

// Run reads, computes, writes and prints.
func (c *compareCommand) Run(s session) error {
	r, err := c.prepare()
	if err != nil {
		return err
	}
	if len(r.alts) == 0 {
		return inputError{fmt.Errorf("%s has no [[alternative]] to compare with the base", r.File)}
	}
	results, err := r.compute(s)
	if err != nil {
		return err
	}
	found, err := r.judge(results)
	if err != nil {
		return err
	}
	if err := r.write(results); err != nil {
		return err
	}
	if err := r.writeFindings(found); err != nil {
		return err
	}
	var list []*study.Comparison
	for i, a := range r.alts {
		list = append(list, study.Compare(results[0], results[i+1], a.Moved))
	}
	meta := r.meta(0)
	if err := table.WriteCompare(r.out, list, results[0].Scenario.Network, meta); err != nil {
		return fmt.Errorf("cannot write results: %w", err)
	}
	if c.JSON {
		text, err := table.CompareJSON(list, results[0].Scenario.Network, meta)
		if err != nil {
			return err
		}
		_, err = s.out.Write(text)
		return err
	}
	if err := (&sideBySide{r, results, list}).write(s.out); err != nil || c.Policy == "" {
		return err
	}
	return writeVerdicts(s.out, found)
}

// sideBySide is the comparison for people to read.
type sideBySide struct {
	*ready
	results []*study.Result
	list    []*study.Comparison
}

// write prints one table per alternative.
func (v *sideBySide) write(w io.Writer) error {
	var b strings.Builder
	b.WriteString(hang("", v.Title))
	status := "PRELIMINARY until the study names a reviewer."
	if v.Reviewer != "" {
		status = "Reviewer: " + v.Reviewer + "."
	}
	b.WriteString(hang("", status))
	for i, c := range v.list {
		v.one(&b, i, c)
	}
	b.WriteByte('\n')
	b.WriteString(block("queued is", queued(v.results[0].Criterion, v.units)))
	b.WriteString(block("caution", table.Caution))
	b.WriteString(block("files", v.out+string(os.PathSeparator)+"compare.csv, compare.json and a folder for each run"))
	_, err := io.WriteString(w, b.String())
	return err
}

// one prints one alternative beside the base.
func (v *sideBySide) one(b *strings.Builder, i int, c *study.Comparison) {
	a := v.alts[i]
	b.WriteByte('\n')
	b.WriteString(hang("", strings.TrimSuffix(a.Name+": "+a.Title, ": ")))
	for _, change := range a.Changes(v.units) {
		b.WriteString(block("change", change))
	}
	for _, note := range a.Notes {
		b.WriteString(block("note", note))
	}
	fmt.Fprintf(b, "\n%-27s %11s %11s %10s %8s\n", "", "base", "alternative", "change", "percent")
	for k := range c.Changes {
		if line := v.line(&c.Changes[k]); line != "" {
			b.WriteString(line)
		}
	}
	v.moved(b, c)
	for _, warning := range append(append([]string{}, c.Warnings...), v.results[i+1].Warnings...) {
		b.WriteString(block("warning", warning))
	}
}

// shown is how a measure is printed: a label with its unit, and its value and change without one.
type shown struct {
	label       string
	text, delta func(x float64, u unit.System) string
}

func count(x float64, _ unit.System) string   { return whole(x) }
func amount(x float64, _ unit.System) string  { return few(x) }
func minutes(x float64, _ unit.System) string { return fmt.Sprintf("%.1f", x/unit.Minute) }
func clock(x float64, _ unit.System) string   { return minute(x) }

// vehDistance writes vehicle-kilometres in the system's unit.
func vehDistance(x float64, u unit.System) string {
	if u == unit.US {
		return whole(x * unit.Kilometre / unit.Mile)
	}
	return whole(x)
}

// length writes metres in kilometres or miles.
func length(x float64, u unit.System) string {
	if u == unit.US {
		return fmt.Sprintf("%.2f", x/unit.Mile+0)
	}
	return fmt.Sprintf("%.2f", x/unit.Kilometre+0)
}

// shownMeasures are the lines of the table, by the measure's name. %s in a label is the unit of distance.
var shownMeasures = map[string]shown{
	"travel_veh_hours":                {"time on the road, veh·h", count, count},
	"travel_veh_km":                   {"distance, veh·%s", vehDistance, vehDistance},
	"delay_veh_hours":                 {"delay with waiting, veh·h", amount, amount},
	"waiting_veh_hours":               {"waiting outside, veh·h", amount, amount},
	"max_queue_m":                     {"longest queue, %s", length, length},
	"max_queue_time_s":                {"  its time; change in min", clock, minutes},
	"last_clearance_s":                {"last queue clears; min", clock, minutes},
	"bottleneck_throughput_veh_per_h": {"costliest discharges, veh/h", count, count},
	"worst_corridor_time_s":           {"worst corridor time, min", minutes, minutes},
	"links_reached_by_a_queue":        {"links reached by queues", count, count},
	"ramps_reached_by_a_queue":        {"ramps, junctions reached", count, count},
	"left_veh":                        {"vehicles arrived", count, count},
	"waiting_veh":                     {"vehicles waiting at the end", count, count},
}

// line prints one measure, "" where the table leaves it out.
func (v *sideBySide) line(c *study.Change) string {
	s, ok := shownMeasures[c.Measure]
	if !ok {
		return ""
	}
	cell := func(x float64, text func(float64, unit.System) string) string {
		if math.IsNaN(x) {
			return "-"
		}
		return text(x, v.units)
	}
	percent := "-"
	if p := c.Percent(); !math.IsNaN(p) && !strings.Contains(s.label, ";") { // a clock time has no percentage
		percent = fmt.Sprintf("%+.1f", p)
	}
	delta := cell(c.Diff(), s.delta)
	if c.Diff() > 0 {
		delta = "+" + delta
	}
	label := strings.ReplaceAll(s.label, "%s", v.far())
	return strings.TrimRight(fmt.Sprintf("%-27s %11s %11s %10s %8s  %s", label, cell(c.Base, s.text), cell(c.Value, s.text), delta, percent, c.Verdict()), " ") + "\n"
}

// far is the unit of distances.
func (v *sideBySide) far() string {
	if v.units == unit.US {
		return "mi"
	}
	return "km"
}

// moved prints what became of the base's vehicles.
func (v *sideBySide) moved(b *strings.Builder, c *study.Comparison) {
	m := &c.Moved
	total := 0.0
	n := v.results[0].Scenario.Network
	for _, move := range m.Moves {
		total += move.Vehicles
	}
	b.WriteString(block("vehicles", fmt.Sprintf("%s wanted to travel in the base; %s do: %s moved to other ways, %s do not travel, %s are new",
		whole(m.Base), whole(m.Travelled), whole(total), whole(m.Suppressed), whole(m.Added))))
	for _, move := range m.Moves {
		b.WriteString(block("", fmt.Sprintf("%s from %s to %s", whole(move.Vehicles), n.Links[move.From].Name, n.Links[move.To].Name)))
	}
}
