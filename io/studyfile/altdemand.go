package studyfile

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"example.org/tailback/ctm/measure"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/unit"
)

// demandChange reads one [[alternative.demand_change]].
func (d *altDraft) demandChange(t *table) {
	t.known("entries factor start end")
	var entries []network.LinkID
	if t.has("entries") {
		entries = d.links(t, "entries")
	}
	for _, l := range entries {
		d.entry(t, "entries", l)
	}
	w, factor := d.window(t), t.number("factor", 1)
	switch {
	case !t.has("factor"):
		t.fault("", "", "a demand change needs a `factor`, such as 0.9")
	case !(factor >= 0) || factor > 1000:
		t.fault("factor", "", "a factor of %g is no use: it must be 0 or more", factor)
	}
	if t.bad {
		return
	}
	d.demand.Scale(entries, factor, w)
	what := "all entries"
	if entries != nil {
		what = d.names(entries)
	}
	d.say(func(unit.System) string {
		return fmt.Sprintf("demand of %s times %g, %s-%s", what, factor, altClock(w.From), altClock(w.To))
	})
}

// entry makes sure that traffic begins on a link.
func (d *altDraft) entry(t *table, key string, l network.LinkID) bool {
	entries := d.base.Demand.EntryLinks()
	if slices.Contains(entries, l) {
		return true
	}
	slices.Sort(entries)
	t.fault(key, "entries are "+d.names(slices.Compact(entries)), "no traffic begins on link `%s`", d.road.Links[l].Name)
	return false
}

// names lists links, at most ten of them.
func (d *altDraft) names(links []network.LinkID) string {
	var list []string
	for _, l := range links {
		if len(list) == 10 {
			list = append(list, fmt.Sprintf("and %d more", len(links)-10))
			break
		}
		list = append(list, "`"+d.road.Links[l].Name+"`")
	}
	return strings.Join(list, ", ")
}

// rampClosure reads the closure of one [[alternative.ramp_closure]]; divert reads where its traffic goes, once all
// closures are known.
func (d *altDraft) rampClosure(t *table) {
	t.known("link start end divert")
	link, w := d.link(t, "link"), d.window(t)
	for _, o := range d.shut {
		if link >= 0 && o.link == link && sameTime(o.window, w) {
			t.fault("link", "give one closure for each link and time", "link `%s` is closed twice at once", d.road.Links[link].Name)
		}
	}
	d.add(t, &measure.RampClosure{Link: link, Start: w.From, End: w.To})
	if !t.bad {
		d.shut = append(d.shut, occupied{t, link, w})
	}
}

// divert moves a closed ramp's traffic. Traffic that begins on the ramp goes to other entries, traffic that arrives by
// road to other exits.
func (d *altDraft) divert(t *table, link network.LinkID, w demand.Window) {
	to := d.shares(t, link, w)
	begins := slices.Contains(d.base.Demand.EntryLinks(), link)
	if begins {
		for i, s := range to {
			if s.To >= 0 {
				d.entry(t, fmt.Sprintf("divert[%d].to", i), s.To)
			}
		}
	}
	if t.bad {
		return
	}
	before := d.demand.Record()
	if begins {
		d.demand.MoveEntry(link, to, w)
	}
	if len(d.road.In(d.road.Links[link].From)) > 0 && (!begins || d.turnsInto(link)) {
		if err := d.demand.MoveThrough(d.road, link, to, w); err != nil {
			if !errors.Is(err, demand.ErrNoWay) {
				panic("studyfile: " + err.Error())
			}
			t.fault("divert", "traffic that arrives by road can only leave at exits that it can reach", "%v", err)
			return
		}
	}
	d.account(link, before)
}

// turnsInto reports whether any turning fraction leads into a link, or its node gives no choice.
func (d *altDraft) turnsInto(link network.LinkID) bool {
	node := d.road.Links[link].From
	if len(d.road.Out(node)) == 1 {
		return true
	}
	for i := range d.base.Demand.Turnings {
		if slices.Contains(d.base.Demand.Turnings[i].To, link) {
			return true
		}
	}
	return false
}

// shares reads divert.
func (d *altDraft) shares(t *table, link network.LinkID, w demand.Window) []demand.Share {
	var list []demand.Share
	sum := 0.0
	for _, s := range t.tables("divert") {
		s.known("to share")
		to, share := d.link(s, "to"), s.quantity("share", unit.Share, 0)
		if !s.has("share") {
			s.fault("", "", "`divert` needs a `share` for each `to`")
		}
		if to == link {
			s.fault("to", "", "link `%s` cannot take its own traffic while it is closed", d.road.Links[to].Name)
		}
		for _, o := range d.shut {
			if o.link == to && to != link && sameTime(o.window, w) {
				s.fault("to", "name one that stays open", "link `%s` is closed too, from %s to %s", d.road.Links[to].Name, altClock(o.window.From), altClock(o.window.To))
			}
		}
		sum += share
		t.bad = t.bad || s.bad
		list = append(list, demand.Share{To: to, Share: share})
	}
	if sum > 1+1e-9 {
		t.fault("divert", "what the shares leave of 1 does not travel", "the shares sum to %.6g: at most 1 can be diverted", sum)
	}
	return list
}

// account notes what became of a closed ramp's traffic.
func (d *altDraft) account(link network.LinkID, before demand.Record) {
	after := d.demand.Record()
	var parts []string
	for _, m := range after.Moves[len(before.Moves):] {
		parts = append(parts, fmt.Sprintf("%.1f vehicles go to `%s`", m.Vehicles, d.road.Links[m.To].Name))
	}
	parts = append(parts, fmt.Sprintf("%.1f do not travel", after.Suppressed-before.Suppressed))
	d.alt.Notes = append(d.alt.Notes, fmt.Sprintf("closed link `%s`: %s", d.road.Links[link].Name, strings.Join(parts, ", ")))
}
