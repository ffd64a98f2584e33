package observe

import (
	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// EntryRow is what happened at one entry in one report interval, all classes together.
type EntryRow struct {
	Wanted, Entered float64 // vehicles
	Waiting         float64 // vehicles outside at the interval's end
	WaitingSeconds  float64 // vehicle-seconds waited in the interval
}

// NetworkRow is what happened in the whole network in one report interval, but for time and distance, which are the
// sums of the link rows.
type NetworkRow struct {
	Entered, Left   float64 // vehicles in the interval
	Inside, Waiting float64 // vehicles at its end
	WaitingSeconds  float64 // in the interval
}

// Entries records every entry and the network's totals in every report interval.
type Entries struct {
	Links   []network.LinkID // of the entries
	Rows    [][]EntryRow     // by interval and entry
	Network []NetworkRow     // by interval
	Totals  ctm.Totals       // at the last look
	last    []EntryRow       // since the start
	before  ctm.Totals
	begun   bool
}

// Observe implements ctm.Observer; watch it at every report interval.
func (o *Entries) Observe(v ctm.View) error {
	now := make([]EntryRow, v.Sources())
	for i := range now {
		for class := range demand.ClassID(v.Classes()) {
			s := v.Source(i, class)
			now[i].Wanted += s.Wanted
			now[i].Entered += s.Entered
			now[i].Waiting += s.Waiting
			now[i].WaitingSeconds += s.Seconds
		}
	}
	t := v.Totals()
	if o.begun {
		rows := make([]EntryRow, len(now))
		for i, n := range now {
			l := o.last[i]
			rows[i] = EntryRow{n.Wanted - l.Wanted, n.Entered - l.Entered, n.Waiting, n.WaitingSeconds - l.WaitingSeconds}
		}
		o.Rows = append(o.Rows, rows)
		o.Network = append(o.Network, NetworkRow{
			t.Entered - o.before.Entered, t.Left - o.before.Left, t.Inside, t.Waiting, t.WaitingSeconds - o.before.WaitingSeconds,
		})
	} else {
		for i := range now {
			o.Links = append(o.Links, v.Source(i, 0).Link)
		}
	}
	o.last, o.before, o.Totals, o.begun = now, t, t, true
	return nil
}
