package studyfile

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"example.org/tailback/ctm/measure"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// laneClosure reads one [[alternative.lane_closure]].
func (d *altDraft) laneClosure(t *table) {
	t.known("links from to lanes start end capacity discharge source work_zone speed_limit")
	links, w := d.links(t, "links"), d.window(t)
	c := &measure.LaneClosure{
		Start: w.From, End: w.To, Lanes: t.number("lanes", 0), Source: t.text("source"),
		Capacity: t.quantity("capacity", unit.FlowPerLane, 0), Discharge: t.quantity("discharge", unit.FlowPerLane, 0),
		Speed: t.quantity("speed_limit", unit.Speed, 0),
	}
	if t.bad {
		return
	}
	d.chain(t, links)
	c.Stretch = d.stretch(t, links)
	d.lanes(t, c)
	for key, x := range map[string]float64{"capacity": c.Capacity, "discharge": c.Discharge, "speed_limit": c.Speed} {
		if t.has(key) && x == 0 {
			t.fault(key, "to stop all traffic, take all lanes", "`%s` must be above 0", key)
		}
	}
	if c.Capacity > 0 && c.Discharge > c.Capacity {
		t.fault("discharge", "a queue discharges at most what the lanes carried before it formed", "%.6g veh/h/lane out of the queue is more than the capacity of %.6g veh/h/lane", c.Discharge*3600, c.Capacity*3600)
	}
	if zone := t.table("work_zone"); zone != nil && !t.bad {
		d.workZone(t, zone, c)
	}
	if c.Source == "" && c.Capacity > 0 {
		c.Source = "given in the study"
	}
	d.add(t, c)
}

// chain makes sure that links follow each other.
func (d *altDraft) chain(t *table, links []network.LinkID) {
	c := network.Corridor{Name: "closure", Links: links}
	if err := c.Check(d.road); err != nil {
		t.fault("links", "give the links from upstream to downstream, or one closure for each road", "%s", strings.Replace(err.Error(), "corridor `closure`", "the closure", 1))
	}
}

// stretch lays from and to, which count from the start of the first link, on the links.
func (d *altDraft) stretch(t *table, links []network.LinkID) []measure.Span {
	total := 0.0
	for _, l := range links {
		total += d.road.Links[l].Length
	}
	from, to := t.quantity("from", unit.Length, 0), t.quantity("to", unit.Length, total)
	what := fmt.Sprintf("the %s of its links", altMetres(total))
	if len(links) == 1 {
		what = fmt.Sprintf("link `%s`, which is %s long", d.road.Links[links[0]].Name, altMetres(total))
	}
	switch {
	case from >= total:
		t.fault("from", "", "the closure begins at %s, outside %s", altMetres(from), what)
	case to > total*(1+1e-9):
		t.fault("to", "", "the closure ends at %s, outside %s", altMetres(to), what)
	case to <= from:
		t.fault("to", "", "the closure ends at %s, not after its begin at %s", altMetres(to), altMetres(from))
	}
	var spans []measure.Span
	at := 0.0
	for _, l := range links {
		length := d.road.Links[l].Length
		s := measure.Span{Link: l, From: max(0, from-at), To: math.Inf(1)}
		if to < at+length {
			s.To = to - at
		}
		if s.From < length && s.To > 0 {
			spans = append(spans, s)
		}
		at += length
	}
	return spans
}

// lanes checks the lanes taken against every link of the stretch.
func (d *altDraft) lanes(t *table, c *measure.LaneClosure) {
	if !(c.Lanes > 0) {
		t.fault("lanes", "", "`lanes` must say how many lanes are taken, more than 0")
	}
	for _, s := range c.Stretch {
		if l := &d.road.Links[s.Link]; c.Lanes > l.Lanes {
			t.fault("lanes", "", "%g lanes are to be closed, but link `%s` has %g", c.Lanes, l.Name, l.Lanes)
			return
		}
	}
}

// altMetres writes a length for a message, to the metre.
func altMetres(x float64) string {
	if x < 999.5 {
		return strconv.FormatFloat(math.Round(x), 'f', -1, 64) + " m"
	}
	return strconv.FormatFloat(math.Round(x)/1000, 'f', -1, 64) + " km"
}
