package study

import (
	"example.org/tailback/ctm"
	"example.org/tailback/demand"
)

// Cost turns delay and distance into money: the delay and vehicle operating components of road-user cost (Mallela &
// Sadasivam 2011, FHWA-HOP-12-005, chapter 2). Every number is the study's.
type Cost struct {
	Currency  string
	Time      []float64 // by class: money per vehicle-second
	Operating float64   // money per vehicle-metre
	Source    string    // where the values come from
}

// Money is the cost of vehicle-seconds of delay and of vehicle-metres, shared over the classes like the vehicles that
// want to travel in the study's period:
//
//	cost = sum over classes of delay x share x value of time + distance x operating cost
func (c *Cost) Money(d *demand.Demand, h ctm.Horizon, delay, metres float64) float64 {
	sum := metres * c.Operating
	for class, share := range shares(d, h) {
		sum += delay * share * c.Time[class]
	}
	return sum
}

// shares are the shares of the classes among the vehicles that want to travel; the first class has all where none
// does.
func shares(d *demand.Demand, h ctm.Horizon) []float64 {
	list := make([]float64, max(1, len(d.Classes)))
	total := 0.0
	for i := range d.Entries {
		veh := d.Entries[i].Flow.Vehicles(h.Start, h.End)
		total += veh
		for class, share := range d.Entries[i].Mix {
			list[class] += veh * share
		}
	}
	if total <= 0 {
		list[0], total = 1, 1
	}
	for i := range list {
		list[i] /= total
	}
	return list
}
