package exact

import (
	"fmt"
	"math"
)

// Bottleneck is a road with a triangular diagram, empty at first, whose downstream end lets only so much through.
type Bottleneck struct {
	Road     Triangular // all lanes
	Length   float64    // L, m
	Demand   Rate       // at the upstream end, at most the road's capacity
	Capacity Rate       // of the downstream end; what exceeds the road's capacity counts as that
	Drop     float64    // share of Capacity lost while a queue stands, in [0, 1)
}

// TailPoint is a corner of the path of a queue's tail.
type TailPoint struct {
	Time   float64 // s
	Length float64 // from the tail to the downstream end, m
}

// SpatialQueue is the queue behind a bottleneck. Its delay, onset and clearance are those of a point queue at the
// downstream end, as the free speed is constant; its length and the vehicles in it are not.
type SpatialQueue struct {
	*PointQueue
	b    Bottleneck
	path []TailPoint
}

// Track finds the path of the tail by wave tracking. With queue density kq = kj - mu/w where the discharge mu is that
// of the moment when the wave now at the tail left the downstream end, and lambda the arriving flow, the length y of
// the queue changes by Rankine and Hugoniot:
//
//	dy/dt = (lambda - mu) / (kq - lambda/v)
//
// until a change of demand (at speed v) or of discharge (at speed w) meets the tail. Newell 1993 gives the same tail
// as the place where his two cumulative counts are equal. Track returns an error if demand exceeds the road's
// capacity or if the queue fills the road, where no closed form holds.
func Track(b Bottleneck) (*SpatialQueue, error) {
	q := b.Road.Capacity()
	for _, s := range b.Demand {
		if s.Flow > q*(1+1e-12) {
			return nil, fmt.Errorf("exact: demand %g veh/s exceeds the road's capacity, at most %g", s.Flow, q)
		}
	}
	service := make(Rate, len(b.Capacity))
	for i, s := range b.Capacity {
		service[i] = Step{s.At, min(s.Flow, q)}
	}
	arrival := b.Demand.Later(b.Length / b.Road.V)
	sq := &SpatialQueue{NewPointQueue(arrival, service, b.Drop), b, nil}
	for i, s := range sq.spans {
		if s.queued && (i == 0 || !sq.spans[i-1].queued) {
			if err := sq.follow(arrival, i); err != nil {
				return nil, err
			}
		}
	}
	return sq, nil
}

// follow adds the path of the queue that begins with span i. Arrival is the demand as it would come to the
// downstream end.
func (q *SpatialQueue) follow(arrival Rate, i int) error {
	v, w, kj := q.b.Road.V, q.b.Road.W, q.b.Road.Kj
	t, y := q.spans[i].from, 0.0
	next := 0 // step of the demand that has not met the tail
	for next < len(arrival) && arrival[next].At <= t {
		next++
	}
	last := math.NaN()
	for {
		if y > q.b.Length {
			return fmt.Errorf("exact: the queue is %g m long at %g s, more than the road's %g m", y, t, q.b.Length)
		}
		lambda, mu := 0.0, q.spans[i].leaves
		if next > 0 {
			lambda = arrival[next-1].Flow
		}
		speed := (lambda - mu) / (kj - mu/w - lambda/v)
		if speed != last { // not a corner if the discharge stays the same
			q.path, last = append(q.path, TailPoint{t, y}), speed
		}
		gone, demand, discharge := math.Inf(1), math.Inf(1), math.Inf(1)
		if speed < 0 {
			gone = t - y/speed
		}
		if next < len(arrival) && speed > -v*(1-1e-12) { // the change is at v (At - t)
			demand = max(t, (v*arrival[next].At-y+speed*t)/(v+speed))
		}
		if end := q.end(i); !math.IsInf(end, 1) && speed < w*(1-1e-12) { // the change is at w (t - end)
			discharge = max(t, (y-speed*t+w*end)/(w-speed))
		}
		step := min(gone, demand, discharge)
		switch {
		case math.IsInf(step, 1) && speed > 0:
			return fmt.Errorf("exact: the queue grows for ever")
		case math.IsInf(step, 1):
			return nil // stands still
		case gone <= step+1e-12*math.Abs(step):
			q.path = append(q.path, TailPoint{gone, 0})
			return nil
		case demand == step:
			next++
		default:
			i++
		}
		y += speed * (step - t)
		t = step
	}
}

// Path is the path of the tail, straight between points; each queue begins and ends with length 0. The slice is the
// queue's own.
func (q *SpatialQueue) Path() []TailPoint { return q.path }

// Length is the distance in metres from the tail to the downstream end at time t, 0 without a queue.
func (q *SpatialQueue) Length(t float64) float64 {
	for i := 1; i < len(q.path); i++ {
		a, b := q.path[i-1], q.path[i]
		if t >= a.Time && t <= b.Time && b.Time > a.Time {
			return a.Length + (b.Length-a.Length)*(t-a.Time)/(b.Time-a.Time)
		}
	}
	if n := len(q.path); n > 0 && t > q.path[n-1].Time {
		return q.path[n-1].Length
	}
	return 0
}

// Longest is how far in metres the queue reaches and when it does so first.
func (q *SpatialQueue) Longest() (length, at float64) {
	for _, p := range q.path {
		if p.Length > length {
			length, at = p.Length, p.Time
		}
	}
	return length, at
}

// Vehicles is the number of vehicles between the tail and the downstream end at time t: those that passed the tail's
// place and have not left.
func (q *SpatialQueue) Vehicles(t float64) float64 {
	y := q.Length(t)
	if y == 0 {
		return 0
	}
	return q.b.Demand.Until(t-(q.b.Length-y)/q.b.Road.V) - q.Served(t)
}
