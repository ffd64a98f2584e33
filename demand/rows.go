package demand

import (
	"math"
	"sort"

	"example.org/tailback/network"
)

// lags sets each entry's free travel time to the closed link, from the first interval in which any of its traffic goes
// there.
func (v *diversion) lags(g *group) {
	g.lag = make([]float64, len(v.d.Entries))
	for i := range v.d.Entries {
		for k := range g.parts {
			if g.parts[k].bound[i] > 0 {
				g.lag[i] = g.parts[k].time[v.d.Entries[i].Link]
				break
			}
		}
	}
}

// boundFor counts the vehicles of an entry and a group that are bound for the closed link.
func (r *Revision) boundFor(v *diversion, g *group, i int) float64 {
	e, sum := &r.d.Entries[i], 0.0
	for k, s := range v.spans {
		shift := Window{s.From - g.lag[i], s.To - g.lag[i]}
		sum += r.inside(e, shift) * e.mix(g.class) * g.parts[k].bound[i]
	}
	return sum
}

// thin gives an entry's traffic without the vehicles that do not travel.
func (v *diversion) thin(i int) []Entry {
	e := v.d.Entries[i]
	touched := false
	for k := range v.list {
		for _, p := range v.list[k].parts {
			touched = touched || p.bound[i] > 0
		}
	}
	if v.rest == 0 || !touched {
		return []Entry{e}
	}
	var list []Entry
	for k := range v.list {
		g := &v.list[k]
		own := e
		if g.class != AllClasses {
			own.Flow = e.Flow.Scaled(e.mix(g.class))
			own.Mix = make([]float64, len(v.d.Classes))
			own.Mix[g.class] = 1
		}
		first, last := v.spans[0].From-g.lag[i], v.spans[len(v.spans)-1].To-g.lag[i]
		out := own.outside(Window{first, last})
		list = append(list, out[0])
		for j, s := range v.spans {
			list = append(list, own.part(e.Link, 1-v.rest*g.parts[j].bound[i], Window{s.From - g.lag[i], s.To - g.lag[i]}))
		}
		list = append(list, out[1])
	}
	return list
}

// moments lists the times (ms after the period's start) at which a window begins and ends, fractions change, or an
// entry's flow does, within the window.
func (r *Revision) moments(w Window) []int64 {
	var list []int64
	begin, end := max(w.From, r.period.From), min(w.To, r.period.To)
	add := func(t float64) {
		if t >= begin && t <= end {
			list = append(list, int64(math.Round((t-r.period.From)*1000)))
		}
	}
	add(begin)
	add(end)
	for i := range r.d.Turnings {
		t := &r.d.Turnings[i]
		for row := 1; t.Every > 0 && row < len(t.Fractions); row++ {
			add(t.Start + float64(row)*t.Every)
		}
	}
	for i := range r.d.Entries {
		p := &r.d.Entries[i].Flow
		for k := 0; p.every > 0 && k <= len(p.values); k++ {
			add(p.start + float64(k)*p.every)
		}
		if p.clipped {
			add(p.from)
			add(p.to)
		}
	}
	sort.Slice(list, func(i, j int) bool { return list[i] < list[j] })
	return list
}

// spans divides the part of a window within the period into intervals in which fractions and flows are steady.
func (r *Revision) spans(w Window) []Window {
	var spans []Window
	list := r.moments(w)
	for i := 1; i < len(list); i++ {
		if list[i] > list[i-1] {
			spans = append(spans, Window{r.period.From + float64(list[i-1])/1000, r.period.From + float64(list[i])/1000})
		}
	}
	return spans
}

// turns makes the turning fractions that differ from the base's.
func (r *Revision) turns(v *diversion) []Turning {
	var list []Turning
	for k := range v.list {
		g := &v.list[k]
		for l := range v.n.Links {
			old := v.old(g, l)
			if old == nil {
				continue
			}
			every := r.every(v.spans, old)
			t := Turning{Node: old.Node, From: old.From, To: old.To, Class: g.class, Start: r.period.From, Every: every}
			for row := 0; float64(row)*every < r.period.To-r.period.From; row++ {
				t.Fractions = append(t.Fractions, v.row(g, old, l, t.Start+float64(row)*every))
			}
			list = append(list, t)
		}
	}
	return list
}

// old finds the fractions in force for a link that change in some interval, else nil.
func (v *diversion) old(g *group, l int) *Turning {
	for i := range g.parts {
		base, way := g.parts[i].base[l], g.parts[i].way[l]
		if len(base) > 1 && &base[0] != &way[0] {
			return v.d.Lookup(network.LinkID(l), g.class)
		}
	}
	return nil
}

// row is the fractions from a time on.
func (v *diversion) row(g *group, old *Turning, l int, t float64) []float64 {
	for i, s := range v.spans {
		if t < s.From-tick || t >= s.To-tick {
			continue
		}
		row := make([]float64, len(old.To))
		for k, to := range old.To {
			for _, s := range g.parts[i].way[l] {
				if s.To == to {
					row[k] = s.Share
				}
			}
		}
		return row
	}
	return old.At(t)
}

// tick is how exactly a moment is met, s.
const tick = 0.5e-3

// every is the longest row (s, at least one second) that begins at each change.
func (r *Revision) every(spans []Window, old *Turning) float64 {
	unit := int64(math.Round((r.period.To - r.period.From) * 1000))
	at := func(t float64) { unit = divisor(unit, int64(math.Round((t-r.period.From)*1000))) }
	for _, s := range spans {
		at(s.From)
		at(s.To)
	}
	if old.Every > 0 {
		at(old.Start)
		at(old.Start + old.Every)
	}
	return max(1, float64(unit)/1000)
}

// divisor is the greatest common divisor of a and the size of b.
func divisor(a, b int64) int64 {
	if b < 0 {
		b = -b
	}
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// replace puts new fractions in the place of those with the same approach and class, and the rest behind.
func replace(old, turns []Turning) []Turning {
	list := append([]Turning(nil), old...)
next:
	for _, t := range turns {
		for i := range list {
			if list[i].From == t.From && list[i].Class == t.Class {
				list[i] = t
				continue next
			}
		}
		list = append(list, t)
	}
	return list
}
