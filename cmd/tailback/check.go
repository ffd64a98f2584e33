package main

import (
	"fmt"
	"io"
	"math"
	"sort"
	"strings"

	"example.org/tailback/ctm"
	"example.org/tailback/io/studyfile"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
	"example.org/tailback/network/unit"
)

// checkCommand reads a study and prints what was understood.
type checkCommand struct {
	Study string `arg:"" help:"Study file (TOML)."`
	Units string `placeholder:"SYSTEM" default:"metric" help:"Units of the screen: metric or us."`
}

// Run reads, cuts the road into cells, and prints.
func (c *checkCommand) Run(s session) error {
	units, err := unit.ParseSystem(c.Units)
	if err != nil {
		return inputError{fmt.Errorf("--units: %w", err)}
	}
	st, err := studyfile.Read(c.Study)
	if err != nil {
		return inputError{err}
	}
	m, err := ctm.New(st.Base)
	if err != nil {
		return inputError{err}
	}
	return (&understanding{st, m.View().Scenario(), m.View().Grid(), units}).write(s.out)
}

// understanding is what check tells about a study.
type understanding struct {
	study *studyfile.Study
	sc    *ctm.Scenario
	grid  *ctm.Grid
	units unit.System
}

// write prints it.
func (u *understanding) write(w io.Writer) error {
	var b strings.Builder
	h := u.sc.Horizon
	b.WriteString(hang("", u.study.Title))
	b.WriteString(block("period", fmt.Sprintf("%s to %s, a result row every %s", minute(h.Start), minute(h.End), span(float64(u.grid.PerReport)*u.grid.Step))))
	b.WriteString(block("grid", fmt.Sprintf("%s, %s of %.3g s, Courant number %.4f at most",
		plural(u.grid.Cells, "cell"), plural(u.grid.Steps, "step"), u.grid.Step, u.grid.MaxCourant)))
	b.WriteString(block("queued is", queued(u.study.Queued, u.units)))
	u.links(&b)
	u.diagrams(&b)
	u.entries(&b)
	u.corridors(&b)
	b.WriteString(block("reviewer", u.reviewer()))
	for _, note := range append(append([]string(nil), u.study.Warnings...), u.grid.Notes...) {
		b.WriteString(block("note", note))
	}
	b.WriteString("No fault found.\n")
	_, err := io.WriteString(w, b.String())
	return err
}

// span writes a duration.
func span(seconds float64) string {
	if seconds < unit.Minute {
		return fmt.Sprintf("%.3g s", seconds)
	}
	return fmt.Sprintf("%.3g min", seconds/unit.Minute)
}

// reviewer says who stands for the results.
func (u *understanding) reviewer() string {
	if u.study.Reviewer == "" {
		return "none: results are marked PRELIMINARY"
	}
	return u.study.Reviewer
}

// links counts them by kind, with their length and lanes, and names the exits.
func (u *understanding) links(b *strings.Builder) {
	n := u.sc.Network
	type sum struct {
		links        int
		length, most float64
		least        float64
	}
	kinds := make(map[string]*sum)
	var names, exits []string
	for i := range n.Links {
		l := &n.Links[i]
		k := l.Kind
		if k == "" {
			k = "no kind"
		}
		if kinds[k] == nil {
			kinds[k] = &sum{least: math.Inf(1)}
			names = append(names, k)
		}
		s := kinds[k]
		s.links++
		s.length += l.Length
		s.most, s.least = max(s.most, l.Lanes), min(s.least, l.Lanes)
		if n.IsExit(network.LinkID(i)) {
			exits = append(exits, l.Name)
		}
	}
	sort.Strings(names)
	b.WriteString(block("network", fmt.Sprintf("%s, %s", plural(len(n.Links), "link"), plural(len(n.Nodes), "node"))))
	for _, k := range names {
		s := kinds[k]
		lanes := fmt.Sprintf("%.3g to %.3g lanes", s.least, s.most)
		if s.least == s.most {
			lanes = fmt.Sprintf("%.3g lanes", s.most)
		}
		b.WriteString(block("", fmt.Sprintf("%s: %s, %s, %s", k, plural(s.links, "link"), u.units.Length(s.length), lanes)))
	}
	b.WriteString(block("exits", strings.Join(exits, ", ")))
}

// diagrams lists the fundamental diagrams in use, per lane.
func (u *understanding) diagrams(b *strings.Builder) {
	n := u.sc.Network
	count := make(map[string]int)
	var texts []string
	for i := range n.Links {
		text := u.diagram(&n.Links[i])
		if count[text]++; count[text] == 1 {
			texts = append(texts, text)
		}
	}
	label := "diagrams"
	for _, text := range texts {
		b.WriteString(block(label, fmt.Sprintf("%s (%s)", text, plural(count[text], "link"))))
		label = ""
	}
	for _, s := range diagram.Shapes() {
		for i := range n.Links {
			if n.Links[i].Shape == s.Name && s.Notes != "" {
				b.WriteString(block("note", s.Name+": "+s.Notes))
				break
			}
		}
	}
}

// diagram describes a link's diagram.
func (u *understanding) diagram(l *network.Link) string {
	d := l.Diagram
	text := fmt.Sprintf("%s: free speed %s, capacity %s/lane, critical density %s/lane", l.Shape,
		u.units.Speed(d.FreeSpeed()), u.units.Flow(diagram.Capacity(d)), u.units.Density(d.Critical()))
	if jam := d.Jam(); math.IsInf(jam, 1) {
		text += ", no jam density"
	} else {
		text += fmt.Sprintf(", jam density %s/lane, wave speed %s", u.units.Density(jam), u.units.Speed(standingWave(d)))
	}
	if l.Drop > 0 {
		text += fmt.Sprintf(", %.3g %% less out of a queue", l.Drop*100)
	}
	return text
}

// standingWave is the speed of an upstream wave in standing traffic, m/s: -dq/dk at the jam density, by the flow a
// millionth below it, where the flow is 0.
func standingWave(d diagram.Diagram) float64 {
	const part = 1e-6
	return d.Flow(d.Jam()*(1-part)) / (d.Jam() * part)
}

// entries lists what wants to enter where.
func (u *understanding) entries(b *strings.Builder) {
	d, h := u.sc.Demand, u.sc.Horizon
	total := 0.0
	var list []string
	for i := range d.Entries {
		veh := d.Entries[i].Flow.Vehicles(h.Start, h.End)
		total += veh
		list = append(list, fmt.Sprintf("%s %s", u.sc.Network.Links[d.Entries[i].Link].Name, whole(veh)))
	}
	b.WriteString(block("entries", fmt.Sprintf("%s: %s; %s vehicles in the period", plural(len(list), "entry"), strings.Join(list, ", "), whole(total))))
	if len(d.Classes) > 1 {
		var classes []string
		for _, c := range d.Classes {
			classes = append(classes, fmt.Sprintf("%s (%.3g passenger cars)", c.Name, c.PCE))
		}
		b.WriteString(block("classes", strings.Join(classes, ", ")))
	}
}

// corridors lists them with their ends.
func (u *understanding) corridors(b *strings.Builder) {
	a := axis{u.sc.Network, u.sc.Corridors, u.units}
	for i := range u.sc.Corridors {
		c := &u.sc.Corridors[i]
		text := fmt.Sprintf("%s: %s, %s", c.Name, plural(len(c.Links), "link"), u.units.Length(c.Length(u.sc.Network)))
		if c.Chained {
			last := c.Links[len(c.Links)-1]
			text += fmt.Sprintf(", %s to %s", a.chainage(c.Links[0], 0), a.chainage(last, u.sc.Network.Links[last].Length))
		}
		b.WriteString(block("corridor", text))
	}
}
