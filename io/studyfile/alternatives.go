package studyfile

import (
	"strings"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// Alternative is the base with something changed. As long as it does not change diagrams, its Scenario stands on the
// base's grid: the cuts of all measures of the study are in both.
type Alternative struct {
	Name, Title string
	Scenario    *ctm.Scenario
	Notes       []string      // which numbers were used and where they come from; what a reader should know
	Moved       demand.Record // what became of the base's vehicles
	texts       []func(unit.System) string
	again       func(shift func(demand.Window) demand.Window) (*ctm.Scenario, error) // reads it with other windows
}

// Changes describes what the alternative changes, one line each, in the order in which it was read.
func (a *Alternative) Changes(sys unit.System) []string {
	list := make([]string, len(a.texts))
	for i, text := range a.texts {
		list[i] = text(sys)
	}
	return list
}

// altMeasure is a measure that this reader can make.
type altMeasure interface {
	ctm.Measure
	Check(n *network.Network) error
	Cuts(n *network.Network, cell float64) []ctm.Cut
	Text(n *network.Network, sys unit.System) string
}

// altDraft is an alternative being read.
type altDraft struct {
	alt      Alternative
	base     *ctm.Scenario
	road     *network.Network // with the alternative's diagrams
	demand   *demand.Revision
	period   demand.Window // of the study
	measures []ctm.Measure
	cuts     []ctm.Cut
	diagrams []string   // names of the study's diagrams
	shut     []occupied // ramp closures
	meters   []occupied
	shift    func(demand.Window) demand.Window // nil leaves windows as they are given
	warn     func(path, text, hint string)
}

// occupied remembers what happens to a link when, for checks of measures against each other.
type occupied struct {
	table  *table
	link   network.LinkID
	window demand.Window
}

// sameTime reports whether two windows share a moment.
func sameTime(a, b demand.Window) bool { return a.From < b.To && b.From < a.To }

// alternatives reads every [[alternative]] and adds the cuts of all measures to the base, so that the base and every
// alternative stand on one grid. Faults and warnings go to report and warn with the path of the key.
func alternatives(base *ctm.Scenario, tables []map[string]any, diagrams []string, report, warn func(path, text, hint string)) []Alternative {
	root := &table{keys: map[string]any{"alternative": tables}, report: func(path, text, hint string) { report(path[1:], text, hint) }}
	names := map[string]bool{"base": true}
	var list []Alternative
	for _, t := range root.tables("alternative") {
		d := &altDraft{base: base, road: base.Network, diagrams: diagrams, period: demand.Window{From: base.Horizon.Start, To: base.Horizon.End}}
		d.warn = func(path, text, hint string) { warn(path[1:], text, hint) }
		d.demand = demand.Revise(base.Demand, d.period)
		d.read(t, names)
		base.Cuts = append(base.Cuts, d.cuts...)
		d.alt.again = rereader(base, t.keys, diagrams)
		list = append(list, d.alt)
	}
	for i := range list {
		list[i].Scenario.Cuts = base.Cuts
	}
	return list
}

// read reads one alternative: first what changes the road, then the demand, then the measures.
func (d *altDraft) read(t *table, names map[string]bool) {
	t.known("name title lane_closure ramp_closure incident speed_limit demand_change meter diagram_change")
	d.name(t, names)
	d.each(t, "diagram_change", d.diagramChange)
	d.each(t, "demand_change", d.demandChange)
	d.each(t, "ramp_closure", d.rampClosure)
	for _, o := range d.shut {
		d.divert(o.table, o.link, o.window)
	}
	d.each(t, "lane_closure", d.laneClosure)
	d.each(t, "incident", d.incident)
	d.each(t, "speed_limit", d.speedLimit)
	d.each(t, "meter", d.meter)
	sc := *d.base
	sc.Name, sc.Title, sc.Network, sc.Demand = d.alt.Name, d.alt.Title, d.road, d.demand.Demand()
	sc.Measures = append(append([]ctm.Measure(nil), d.base.Measures...), d.measures...)
	d.alt.Scenario, d.alt.Moved = &sc, d.demand.Record()
}

func (d *altDraft) each(t *table, key string, read func(*table)) {
	for _, s := range t.tables(key) {
		read(s)
	}
}

// name reads name and title. The name is that of a folder of results too.
func (d *altDraft) name(t *table, names map[string]bool) {
	name := t.text("name")
	d.alt.Name, d.alt.Title = name, t.text("title")
	switch {
	case name == "":
		t.fault("", `add name = "night" or the like`, "an alternative needs a `name`")
	case strings.ContainsAny(name, `/\:*?"<>|`) || strings.HasPrefix(name, "."):
		t.fault("name", "use letters, digits, `-` and `_`", "`%s` cannot name a folder of results", name)
	case names[name]:
		t.fault("name", "", "the name `%s` is taken: every alternative needs its own, and `base` is the study without any", name)
	}
	names[name] = true
}

// window reads start and end, by default the study's. A window outside the study's period is a warning.
func (d *altDraft) window(t *table) demand.Window {
	w := demand.Window{From: t.clock("start", d.period.From), To: t.clock("end", d.period.To)}
	switch {
	case t.bad:
	case d.shift != nil:
		return d.shift(w)
	case w.From >= w.To:
		t.fault("end", "hours run past 24 for the following day: 05:00 of day 2 is \"29:00\"", "it ends at %s, not after its start at %s", altClock(w.To), altClock(w.From))
	case w.To <= d.period.From || w.From >= d.period.To:
		d.warn(t.at("start"), "it lasts from "+altClock(w.From)+" to "+altClock(w.To)+", outside the study's period from "+altClock(d.period.From)+" to "+altClock(d.period.To)+": it changes nothing", "")
	}
	return w
}

// altClock writes a time as HH:MM, or HH:MM:SS where it has seconds.
func altClock(t float64) string { return strings.TrimSuffix(unit.Clock(t), ":00") }

// link reads the name of a link; -1 after a fault.
func (d *altDraft) link(t *table, key string) network.LinkID {
	name := t.text(key)
	if name == "" {
		if !t.bad {
			t.fault(key, "", "`%s` must name a link", key)
		}
		return -1
	}
	return d.named(t, key, name)
}

// links reads a list of links.
func (d *altDraft) links(t *table, key string) []network.LinkID {
	var list []network.LinkID
	for _, name := range t.texts(key) {
		if l := d.named(t, key, name); l >= 0 {
			list = append(list, l)
		}
	}
	if len(list) == 0 && !t.bad {
		t.fault(key, "", "`%s` must name at least one link", key)
	}
	return list
}

// named finds a link by its name; -1 after a fault.
func (d *altDraft) named(t *table, key, name string) network.LinkID {
	if l, ok := d.road.Link(name); ok {
		return l
	}
	hint, all := "", make([]string, len(d.road.Links))
	for i := range all {
		all[i] = d.road.Links[i].Name
	}
	if near := nearest(name, all); near != "" {
		hint = "did you mean `" + near + "`?"
	}
	t.fault(key, hint, "the network has no link `%s`", name)
	return -1
}

// add takes a measure in, unless something is wrong with it.
func (d *altDraft) add(t *table, m altMeasure) {
	if t.bad {
		return
	}
	if err := m.Check(d.road); err != nil {
		t.fault("", "", "%v", err)
		return
	}
	d.measures = append(d.measures, m)
	d.cuts = append(d.cuts, m.Cuts(d.road, d.base.Horizon.Cell)...)
	road := d.road
	d.say(func(sys unit.System) string { return m.Text(road, sys) })
}

func (d *altDraft) say(text func(unit.System) string) { d.alt.texts = append(d.alt.texts, text) }

// incident reads one [[alternative.incident]].
func (d *altDraft) incident(t *table) {
	t.known("link at capacity_left start end")
	link, w := d.link(t, "link"), d.window(t)
	m := &measure.Incident{Link: link, At: t.quantity("at", unit.Length, 0), CapacityLeft: d.left(t), Start: w.From, End: w.To}
	if link >= 0 && m.At >= d.road.Links[link].Length {
		t.fault("at", "", "%s lies outside link `%s`, which is %s long", altMetres(m.At), d.road.Links[link].Name, altMetres(d.road.Links[link].Length))
	}
	d.add(t, m)
}

// left reads an incident's capacity_left.
func (d *altDraft) left(t *table) float64 {
	left := t.quantity("capacity_left", unit.Share, 0)
	switch {
	case !t.has("capacity_left"):
		t.fault("", "", "an incident needs `capacity_left`, the share of the capacity that remains (0 to 1)")
	case left > 1:
		t.fault("capacity_left", "", "a share of %g of the capacity cannot be left: 0 to 1 can", left)
	}
	return left
}

// speedLimit reads one [[alternative.speed_limit]].
func (d *altDraft) speedLimit(t *table) {
	t.known("links limit start end")
	links, w := d.links(t, "links"), d.window(t)
	m := &measure.SpeedLimit{Links: links, Limit: t.quantity("limit", unit.Speed, 0), Start: w.From, End: w.To}
	if m.Limit == 0 && !t.bad {
		t.fault("limit", "", "`limit` must be a speed above 0, such as \"80 km/h\"")
	}
	d.add(t, m)
}

// meter reads one [[alternative.meter]] of a fixed rate.
func (d *altDraft) meter(t *table) {
	t.known("link rate start end")
	link, w := d.link(t, "link"), d.window(t)
	m := &measure.Meter{Link: link, Rate: t.quantity("rate", unit.Flow, 0), Start: w.From, End: w.To}
	if !t.has("rate") {
		t.fault("", "", "a meter needs a `rate`, such as \"900 veh/h\"")
	}
	for _, o := range d.meters {
		if link >= 0 && o.link == link && sameTime(o.window, w) {
			t.fault("link", "end one before the other begins", "link `%s` has two meters at once, from %s", d.road.Links[link].Name, altClock(max(o.window.From, w.From)))
		}
	}
	d.meters = append(d.meters, occupied{t, link, w})
	d.add(t, m)
}

// nearest is the name that is spelled most like a word, "" where none is near.
func nearest(word string, names []string) string {
	best, least := "", len(word)/2+1
	for _, name := range names {
		if x := spelling(word, name); x < least {
			best, least = name, x
		}
	}
	return best
}

// spelling counts the letters to insert, delete or replace between two words (Levenshtein 1966), ignoring case.
func spelling(a, b string) int {
	a, b = strings.ToLower(a), strings.ToLower(b)
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		corner := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := corner
			if a[i] != b[j] {
				cost++
			}
			corner, row[j+1] = row[j+1], min(cost, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(b)]
}
