package demand

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"example.org/tailback/network"
)

// ErrNoWay says that traffic cannot be led where it was told.
var ErrNoWay = errors.New("no way")

// MoveThrough moves the traffic that arrives at a link X by road during a window to other links Y, in the given
// shares s_Y; what the shares leave (1-S, S their sum) does not travel. The turning fractions of every approach
// between the entries and the Y change so that the right number leaves at each place.
//
// Take the turning fractions P of one time as a chain. Let h(l) be the share of what is on link l that reaches X,
// g_Y(l) the share that reaches Y when X is shut, and x the flows that P makes of the entries' flows (means of each
// interval in which fractions and flows are steady; travel times within the network are neglected here). Then
//
//   - the traffic not bound for X is x(l) (1-h(l)) and goes on in proportion to P(l,m) (1-h(m));
//   - the traffic bound for X goes on in proportion to P(l,m) h(m) as long as Y can still be reached
//     (g_Y(m) > 0), and from the last such place in proportion to P(l,m) g_Y(m): it leaves the way to X as late as it
//     can. Beyond Y it goes on like the traffic not bound for X.
//
// The new fractions are the flows of all these together, movement over approach. Behind a single diverge with
// fraction f to X, with no other traffic joining before an exit Y of fraction P, the new fraction of Y is
//
//	P' = ((1-f) P + f s)/(1 - f (1-s))
//
// The vehicles that do not travel are missing from each entry in the share (1-S) h(entry), earlier than the window by
// the free travel time from the entry to X. Totals are therefore exact; the numbers counted on the road at X and Y
// differ for as long as vehicles of before the window are under way.
//
// It returns an error that wraps ErrNoWay, and changes nothing, where an entry sends traffic to X but the turning
// fractions lead none of its traffic to a Y without X.
func (r *Revision) MoveThrough(n *network.Network, closed network.LinkID, to []Share, w Window) error {
	v := &diversion{n: n, d: &r.d, closed: closed, to: to, rest: 1}
	for _, s := range to {
		v.rest -= s.Share
	}
	v.rest = clean(v.rest)
	v.spans = r.spans(w)
	for _, class := range v.groups() {
		g := group{class: class}
		for _, s := range v.spans {
			p, err := v.solve(class, s)
			if err != nil {
				return err
			}
			g.parts = append(g.parts, p)
		}
		v.lags(&g)
		v.list = append(v.list, g)
	}
	moved := make([]float64, len(to))
	var entries []Entry
	for i := range r.d.Entries {
		bound := 0.0
		for k := range v.list {
			bound += r.boundFor(v, &v.list[k], i)
		}
		for j := range to {
			moved[j] += bound * to[j].Share
		}
		r.rec.Suppressed += bound * v.rest
		entries = append(entries, v.thin(i)...)
	}
	turns := r.turns(v)
	r.d.Entries, r.d.Turnings = entries, replace(r.d.Turnings, turns)
	r.note(closed, to, moved)
	return nil
}

// diversion is the work of MoveThrough.
type diversion struct {
	n      *network.Network
	d      *Demand
	closed network.LinkID
	to     []Share
	rest   float64  // share that does not travel
	spans  []Window // intervals in which fractions are steady and flows are averaged
	list   []group
}

// group is a class, or all of them, with the answers by interval.
type group struct {
	class ClassID
	parts []part
	lag   []float64 // by entry: free travel time to the closed link, s
}

// part is the answer for one interval.
type part struct {
	bound []float64 // by entry: share that goes to the closed link
	time  []float64 // by link: free travel time to the closed link, s
	base  chain
	way   chain // the new shares
}

// groups lists the classes to be solved for: all together where no fraction is given for one class.
func (v *diversion) groups() []ClassID {
	for i := range v.d.Turnings {
		if v.d.Turnings[i].Class != AllClasses {
			var list []ClassID
			for c := range v.d.Classes {
				list = append(list, ClassID(c))
			}
			return list
		}
	}
	return []ClassID{AllClasses}
}

// mix is the share of a class in an entry's traffic.
func (e *Entry) mix(class ClassID) float64 {
	switch {
	case class == AllClasses:
		return 1
	case e.Mix != nil:
		return e.Mix[class]
	case class == 0:
		return 1
	}
	return 0
}

// solve finds the new shares for one class in one interval.
func (v *diversion) solve(class ClassID, w Window) (part, error) {
	base := newChain(v.d, v.n, class, w.From)
	h := base.reach(v.closed)
	p := part{base: base, bound: make([]float64, len(v.d.Entries))}
	p.time = base.weigh(func(l network.LinkID) float64 { return h[l] }).times(v.n, v.closed)
	stay := base.weigh(func(l network.LinkID) float64 { return 1 - h[l] })
	begin, bound := make([]float64, len(base)), make([]float64, len(base)) // not for the closed link, and for it
	for i := range v.d.Entries {
		e := &v.d.Entries[i]
		if e.Link == v.closed {
			continue
		}
		q := e.Flow.Vehicles(w.From, w.To) / (w.To - w.From) * e.mix(class)
		p.bound[i] = h[e.Link]
		begin[e.Link] += q * (1 - h[e.Link])
		bound[e.Link] += q * h[e.Link]
	}
	ways, flows := []chain{stay}, [][]float64{nil}
	for _, s := range v.to {
		way, err := v.lead(base, h, bound, s.To)
		if err != nil {
			return p, err
		}
		x := way.flows(scale(bound, s.Share))
		begin[s.To] += x[s.To]
		x[s.To] = 0
		ways, flows = append(ways, way), append(flows, x)
	}
	flows[0] = stay.flows(begin)
	p.way = merge(base, v.closed, ways, flows)
	return p, nil
}

// lead is the way to a target: that of the traffic bound for the closed link as long as the target can still be
// reached, then to the target.
func (v *diversion) lead(base chain, h, bound []float64, target network.LinkID) (chain, error) {
	cut := base.without(v.closed)
	g := cut.reach(target)
	for l, q := range bound {
		if q > 0 && g[l] <= 0 {
			return nil, v.noWay(cut, bound, network.LinkID(l), target)
		}
	}
	along := cut.weigh(func(m network.LinkID) float64 {
		if g[m] > 0 {
			return h[m]
		}
		return 0
	})
	direct := cut.weigh(func(m network.LinkID) float64 { return g[m] })
	for l := range along {
		if len(along[l]) == 0 {
			along[l] = direct[l]
		}
	}
	along[target] = nil
	return along, nil
}

// noWay says which exits the traffic could be led to.
func (v *diversion) noWay(cut chain, bound []float64, from, target network.LinkID) error {
	var possible []string
	for i := range v.n.Links {
		exit := network.LinkID(i)
		if exit == v.closed || !v.n.IsExit(exit) {
			continue
		}
		g, all := cut.reach(exit), true
		for l, q := range bound {
			all = all && (q <= 0 || g[l] > 0)
		}
		if all {
			possible = append(possible, "`"+v.n.Links[i].Name+"`")
		}
	}
	hint := "no exit is possible"
	if len(possible) > 0 {
		hint = "possible are " + strings.Join(possible, ", ")
	}
	return fmt.Errorf("%w from entry `%s` to `%s` while `%s` is closed: %s", ErrNoWay, v.n.Links[from].Name, v.n.Links[target].Name, v.n.Links[v.closed].Name, hint)
}

// merge adds the flows of all ways up and returns their common shares. Links whose shares do not change keep those of
// the base to the last bit.
func merge(base chain, closed network.LinkID, ways []chain, flows [][]float64) chain {
	way := make(chain, len(base))
	for l := range base {
		movement := make(map[network.LinkID]float64, len(base[l]))
		sum := 0.0
		for k := range ways {
			for _, s := range ways[k][l] {
				movement[s.To] += flows[k][l] * s.Share
				sum += flows[k][l] * s.Share
			}
		}
		if sum <= 0 { // nobody comes: what went to the closed link goes with the rest
			for _, s := range base[l] {
				if s.To != closed {
					movement[s.To] = s.Share
					sum += s.Share
				}
			}
		}
		way[l] = base[l]
		for _, s := range base[l] {
			if sum > 0 && math.Abs(movement[s.To]/sum-s.Share) > 1e-12 {
				way[l] = divided(base[l], movement, sum)
				break
			}
		}
	}
	return way
}

// divided turns movements into shares, in the order of the base's.
func divided(base []Share, movement map[network.LinkID]float64, sum float64) []Share {
	list := make([]Share, len(base))
	for k, s := range base {
		list[k] = Share{s.To, movement[s.To] / sum}
	}
	return list
}
