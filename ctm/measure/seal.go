package measure

import (
	"example.org/tailback/ctm"
	"example.org/tailback/network"
)

// seal shuts every place where traffic could enter a stretch with no lane left, and no place inside such a
// stretch, so that what is inside drains. It looks at the lanes that all measures together have taken so far.
//
// At a node where a sealed link goes on into another one, traffic of other approaches is held at the end of its
// own link, if that leads nowhere else. Where such an approach has a choice of ways, or an entry begins at the
// node, the second link is shut at its beginning instead: then the traffic inside the first one waits.
func seal(v ctm.View, lim *ctm.Limits) {
	g, n := v.Grid(), v.Scenario().Network
	sealed := func(s int) bool {
		return lim.Segments[s].LanesTaken >= n.Links[g.Segments[s].Link].Lanes
	}
	for i := range g.Links {
		l := g.Links[i]
		for s := l.FirstSegment + 1; s <= l.Last(); s++ {
			if sealed(s) {
				lim.Segments[s].Shut = !sealed(s - 1)
			}
		}
		if sealed(l.FirstSegment) {
			lim.Segments[l.FirstSegment].Shut = sealStart(v, lim, network.LinkID(i), sealed)
		}
	}
}

// sealStart holds back the approaches of a sealed link that are not sealed themselves, and reports whether the
// link must be shut at its beginning instead.
func sealStart(v ctm.View, lim *ctm.Limits, link network.LinkID, sealed func(int) bool) bool {
	g, n := v.Grid(), v.Scenario().Network
	node := n.Links[link].From
	var open []network.LinkID
	for _, l := range n.In(node) {
		if !sealed(g.Links[l].Last()) {
			open = append(open, l)
		}
	}
	if len(open) == len(n.In(node)) || len(open) > 0 && len(n.Out(node)) > 1 {
		return true
	}
	for i := range v.Sources() {
		if v.Source(i, 0).Link == link {
			return true
		}
	}
	for _, l := range open {
		lim.LinkEnd[l] = 0
	}
	return false
}
