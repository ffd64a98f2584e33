package demand

import (
	"math"

	"example.org/tailback/network"
)

// Window is a period of time, [From, To) in s after midnight.
type Window struct{ From, To float64 }

// Share is a part of some traffic and the link to which it goes.
type Share struct {
	To    network.LinkID
	Share float64 // 0..1
}

// Move says how many vehicles were told to use another link.
type Move struct {
	From, To network.LinkID
	Vehicles float64
}

// Record says what a revision did to the vehicles of a period, so that two runs reconcile:
//
//	Travelled == Base - Suppressed + Added
//
// Moved vehicles travel; they stand in Moves.
type Record struct {
	Base       float64 // vehicles that want to travel before
	Travelled  float64 // vehicles that want to travel after
	Moves      []Move
	Suppressed float64 // vehicles that no longer travel
	Added      float64 // vehicles that would not have travelled before
}

// Revision is a demand under change, step by step, with a record of what became of its vehicles. The demand it
// began from is not modified.
type Revision struct {
	period Window
	d      Demand
	rec    Record
}

// Revise begins a revision of a demand over the period of a study.
func Revise(d *Demand, period Window) *Revision {
	r := &Revision{period: period, d: *d}
	r.rec.Base = d.Vehicles(period)
	return r
}

// Demand is the demand as revised so far.
func (r *Revision) Demand() *Demand {
	d := r.d
	return &d
}

// Record is what the revision did so far.
func (r *Revision) Record() Record {
	rec := r.rec
	rec.Travelled = r.d.Vehicles(r.period)
	return rec
}

// Vehicles is how many vehicles want to enter in a period.
func (d *Demand) Vehicles(w Window) float64 {
	sum := 0.0
	for i := range d.Entries {
		sum += d.Entries[i].Flow.Vehicles(w.From, w.To)
	}
	return sum
}

// inside counts an entry's vehicles in the part of a window that the period covers.
func (r *Revision) inside(e *Entry, w Window) float64 {
	from, to := max(w.From, r.period.From), min(w.To, r.period.To)
	if from >= to {
		return 0
	}
	return e.Flow.Vehicles(from, to)
}

// outside gives an entry's traffic before and after a window.
func (e *Entry) outside(w Window) [2]Entry {
	return [2]Entry{
		{e.Link, e.Mix, e.Flow.Between(math.Inf(-1), w.From)},
		{e.Link, e.Mix, e.Flow.Between(w.To, math.Inf(1))},
	}
}

// part is a share of an entry's traffic in a window, at a link.
func (e *Entry) part(link network.LinkID, share float64, w Window) Entry {
	flow := e.Flow.Scaled(share)
	return Entry{link, e.Mix, flow.Between(w.From, w.To)}
}

// Scale multiplies the traffic that begins on some links (nil for all) by a factor during a window. A factor below 1
// suppresses vehicles, one above 1 adds some.
func (r *Revision) Scale(links []network.LinkID, factor float64, w Window) {
	if factor == 1 {
		return
	}
	var entries []Entry
	for i := range r.d.Entries {
		e := &r.d.Entries[i]
		if links != nil && !contains(links, e.Link) {
			entries = append(entries, *e)
			continue
		}
		out := e.outside(w)
		entries = append(entries, out[0], e.part(e.Link, factor, w), out[1])
		veh := r.inside(e, w) * (factor - 1)
		r.rec.Added += max(0, veh)
		r.rec.Suppressed += max(0, -veh)
	}
	r.d.Entries = entries
}

// MoveEntry moves the traffic that begins on a link during a window to other entries, in the given shares; what the
// shares leave does not travel. Vehicles that wait outside when the window begins stay where they are.
func (r *Revision) MoveEntry(from network.LinkID, to []Share, w Window) {
	moved := make([]float64, len(to))
	var entries, added []Entry
	for i := range r.d.Entries {
		e := &r.d.Entries[i]
		if e.Link != from {
			entries = append(entries, *e)
			continue
		}
		out := e.outside(w)
		entries = append(entries, out[0], out[1])
		veh, rest := r.inside(e, w), 1.0
		for k, s := range to {
			added = append(added, e.part(s.To, s.Share, w))
			moved[k] += veh * s.Share
			rest -= s.Share
		}
		r.rec.Suppressed += veh * clean(rest)
	}
	r.d.Entries = append(entries, added...)
	r.note(from, to, moved)
}

// note adds moves to the record, but for those of nobody.
func (r *Revision) note(from network.LinkID, to []Share, moved []float64) {
	for k, s := range to {
		if moved[k] == 0 {
			continue
		}
		r.rec.Moves = append(r.rec.Moves, Move{from, s.To, moved[k]})
	}
}

// clean takes round-off out of what is left of 1 after shares were taken away: shares are given with few digits, and
// ten of them add up to 1 within 1e-15 each.
func clean(rest float64) float64 {
	if rest < 1e-12 {
		return 0
	}
	return rest
}

func contains(links []network.LinkID, l network.LinkID) bool {
	for _, x := range links {
		if x == l {
			return true
		}
	}
	return false
}
