package main

import (
	"fmt"
	"io"
	"math"
	"strings"

	"example.org/tailback/ctm/study"
	"example.org/tailback/io/table"
	"example.org/tailback/network/unit"
)

// write prints the chart, at most 80 columns wide and without colour.
func (h *chart) write(w io.Writer, folder string) error {
	var b strings.Builder
	b.WriteString(hang("", h.study.Title))
	status := "PRELIMINARY until the study names a reviewer."
	if h.study.Reviewer != "" {
		status = "Reviewer: " + h.study.Reviewer + "."
	}
	b.WriteString(hang("", fmt.Sprintf("Permitted hours of %s. %s", h.alternative.Name, status)))
	for _, change := range h.alternative.Changes(h.units) {
		b.WriteString(block("moved", change))
	}
	for i := range h.policy.Limits {
		b.WriteString(block("limit", limitText(&h.policy.Limits[i], h)))
	}
	b.WriteByte('\n')
	if len(h.days) == 1 {
		h.one(&b, &h.days[0])
	} else {
		h.week(&b)
	}
	b.WriteByte('\n')
	h.overrun(&b)
	b.WriteByte('\n')
	b.WriteString(block("counted", "queues, delay and places reached against the base run: a queue that lies within the queue that stands there anyway is the road's own. Travel times are of departures every report interval."))
	b.WriteString(block("queued is", queued(h.study.Queued, h.units)))
	b.WriteString(block("caution", table.Caution))
	b.WriteString(block("files", folder))
	_, err := io.WriteString(w, b.String())
	return err
}

// limitText describes a limit with its source.
func limitText(l *study.Limit, h *chart) string {
	var text string
	switch l.Kind {
	case study.QueueLimit:
		text = "no queue longer than " + h.units.Length(l.Length)
		if l.For > 0 {
			text += fmt.Sprintf(" for more than %s in all", span(l.For))
		}
	case study.DelayLimit:
		text = fmt.Sprintf("nobody delayed more than %s", span(l.PerVehicle))
		if l.AboveNormal {
			text += " above normal"
		}
	case study.FlowLimit:
		text = fmt.Sprintf("demand through the closure at most %s per open lane", h.units.Flow(l.PerLane))
	case study.LanesLimit:
		text = fmt.Sprintf("lanes that stay open: at least %g", l.Open)
	case study.ReachLimit:
		var names []string
		for _, n := range l.Nodes {
			names = append(names, h.study.Base.Network.Nodes[n].Name)
		}
		text = "no queue reaches " + strings.Join(names, ", ")
	}
	return fmt.Sprintf("%s: %s (%s, %s)", l.Name, text, l.Source, l.Date)
}

// latest is the longest permitted window of a start, what breaks a limit beyond, and how many windows were computed.
func (h *chart) latest(rows []study.WindowResult, start int) (best, beyond *study.WindowResult, fits int) {
	part := rows[start*len(h.durations) : (start+1)*len(h.durations)]
	for i := range part {
		switch part[i].State {
		case study.Kept:
			best = &part[i]
		case study.Broken:
			beyond = &part[i]
		}
		if part[i].State != study.NotComputed {
			fits++
		}
	}
	return best, beyond, fits
}

// one prints a line per start.
func (h *chart) one(b *strings.Builder, day *table.Day) {
	fmt.Fprintf(b, "%-6s %-7s %9s %8s %9s  %s\n", "start", "until", "queue", "delay", "added", "one step longer")
	out := 0 // starts before this one that were not computed
	for i, start := range h.starts {
		best, beyond, fits := h.latest(day.Rows, i)
		if fits == 0 {
			out++
			if i+1 < len(h.starts) {
				continue
			}
		}
		if out > 0 {
			last := i
			if fits > 0 {
				last--
			}
			b.WriteString(hang("", fmt.Sprintf("%s to %s not computed: no window fits into the study's period", minute(h.starts[last+1-out]), minute(h.starts[last]))))
			out = 0
		}
		if fits == 0 {
			break
		}
		line := fmt.Sprintf("%-6s ", minute(start))
		switch {
		case best == nil:
			line += "no      " + strings.Repeat(" ", 28) + " " + brokenText(beyond)
		default:
			line += fmt.Sprintf("%-7s %9s %8s %9s  ", minute(best.End), h.units.Length(best.Queue), few(best.Delay/unit.Minute)+" min", few(best.Added/unit.Hour)+" veh·h")
			switch {
			case beyond != nil:
				line += brokenText(beyond)
			case fits < len(h.durations):
				line += "does not fit into the period"
			default:
				line += "not tried"
			}
		}
		b.WriteString(strings.TrimRight(cut(line, columns), " ") + "\n")
	}
}

// brokenText says what breaks a limit.
func brokenText(r *study.WindowResult) string {
	return fmt.Sprintf("%s: %s", minute(r.End), r.Limit)
}

// cut shortens a line to a width.
func cut(line string, width int) string {
	runes := []rune(line)
	if len(runes) <= width {
		return line
	}
	return string(runes[:width-1]) + "~"
}

// week prints 7 days by 24 hours: each cell the longest permitted duration in hours.
func (h *chart) week(b *strings.Builder) {
	b.WriteString(hang("", "Each number is how many hours a closure may last that begins at that hour: 0 none, + the longest that was tried, . not computed."))
	perLine := 24
	for from := 0; from < len(h.starts); from += perLine {
		to := min(len(h.starts), from+perLine)
		fmt.Fprintf(b, "\n%-6s", "start")
		for _, s := range h.starts[from:to] {
			fmt.Fprintf(b, "%3s", minute(s)[:2])
		}
		b.WriteByte('\n')
		for d := range h.days {
			name := strings.ToUpper(h.days[d].Name[:1]) + h.days[d].Name[1:3]
			fmt.Fprintf(b, "%-6s", name)
			for i := from; i < to; i++ {
				fmt.Fprintf(b, "%3s", h.cell(h.days[d].Rows, i))
			}
			b.WriteByte('\n')
		}
	}
}

// cell is the grid's entry of a start.
func (h *chart) cell(rows []study.WindowResult, start int) string {
	best, _, fits := h.latest(rows, start)
	switch {
	case fits == 0:
		return "."
	case best == nil:
		return "0"
	}
	d := best.End - best.Start
	if d == h.durations[len(h.durations)-1] {
		return "+"
	}
	return fmt.Sprintf("%.2g", math.Floor(d/360)/10)
}

// overrun prints what reopening late adds, for the alternative as it stands in the study.
func (h *chart) overrun(b *strings.Builder) {
	title := fmt.Sprintf("Reopening late, works from %s to %s", minute(h.own.Start), minute(h.own.End))
	if h.days[0].Name != "" {
		title += " (" + h.days[0].Name + ")"
	}
	b.WriteString(hang("", title))
	cost := ""
	if h.study.Cost != nil {
		cost = h.study.Cost.Currency
	}
	b.WriteString(strings.TrimRight(fmt.Sprintf("%-8s %9s %12s %14s %9s %7s %12s", "reopened", "late", "added", "quarter hour", "queue", "gone", cost), " ") + "\n")
	for i := range h.late {
		row := &h.late[i]
		if row.State == study.NotComputed {
			fmt.Fprintf(b, "%-8s %5.0f min  not computed: the study's period ends before\n", minute(row.End), row.Late/unit.Minute)
			continue
		}
		further, gone, money := "", "later", ""
		if !math.IsNaN(row.Further) {
			further = few(row.Further/unit.Hour) + " veh·h"
		}
		if !math.IsNaN(row.Gone) {
			gone = minute(row.Gone)
		}
		if h.study.Cost != nil {
			money = whole(row.Money)
		}
		line := fmt.Sprintf("%-8s %5.0f min %12s %14s %9s %7s %12s", minute(row.End), row.Late/unit.Minute, few(row.Added/unit.Hour)+" veh·h", further, h.units.Length(row.Queue), gone, money)
		b.WriteString(strings.TrimRight(line, " ") + "\n")
	}
	switch {
	case h.clearBy == 0:
	case h.reopenErr != nil:
		b.WriteString(block("reopening", fmt.Sprintf("no reopening after %s lets the queue go by %s", minute(h.own.Start), minute(h.clearBy))))
	default:
		b.WriteString(block("reopening", fmt.Sprintf("all lanes must be open by %s for the queue to have gone by %s; begin earlier by the time that the reopening takes", minute(h.reopen), minute(h.clearBy))))
	}
	if h.study.Cost != nil {
		b.WriteString(block("cost", fmt.Sprintf("delay and distance above the base in %s, values from: %s", h.study.Cost.Currency, h.study.Cost.Source)))
	}
}
