package exact

import "math"

// PointQueue is a deterministic queue with one server (D/D/1) and no length on the road: arrivals and service are
// constant between steps (Newell, Applications of Queueing Theory, 2nd ed. 1982, ch. 2).
type PointQueue struct {
	spans []span
}

// span is a stretch of time in which nothing changes.
type span struct {
	from             float64
	arrived, served  float64 // vehicles up to from
	arriving, leaves float64 // flows
	queued           bool
}

// NewPointQueue solves the queue. With a drop, a share in [0, 1), service is (1 - drop) of its rate from the moment
// that arrivals exceed it until the queue has gone.
func NewPointQueue(arrival, service Rate, drop float64) *PointQueue {
	t := math.Inf(1)
	for _, r := range []Rate{arrival, service} {
		if len(r) > 0 {
			t = min(t, r[0].At)
		}
	}
	p := &PointQueue{}
	s := span{from: t}
	for !math.IsInf(s.from, 1) {
		s.arriving, s.leaves = arrival.At(s.from), service.At(s.from)
		s.queued = s.queued || s.arriving > s.leaves
		if s.queued {
			s.leaves *= 1 - drop
		} else {
			s.leaves = s.arriving
		}
		p.spans = append(p.spans, s)
		end := min(arrival.next(s.from), service.next(s.from))
		clears := math.Inf(1)
		if s.queued && s.leaves > s.arriving {
			clears = s.from + s.queue()/(s.leaves-s.arriving)
		}
		if clears <= end {
			end = clears
		}
		next := s.at(end)
		if clears == end {
			next.queued, next.served = false, next.arrived
		}
		s = next
	}
	return p
}

func (s span) queue() float64 { return max(0, s.arrived-s.served) }

// at moves the counts of a span on to time t.
func (s span) at(t float64) span {
	s.arrived += s.arriving * (t - s.from)
	s.served += s.leaves * (t - s.from)
	s.from = t
	return s
}

// state is the span at time t, moved on to t.
func (p *PointQueue) state(t float64) span {
	var now span
	for _, s := range p.spans {
		if s.from > t {
			break
		}
		now = s
	}
	return now.at(t)
}

// end is the time at which span i ends, +Inf for the last.
func (p *PointQueue) end(i int) float64 {
	if i+1 < len(p.spans) {
		return p.spans[i+1].from
	}
	return math.Inf(1)
}

// Arrived is the number of vehicles that have arrived by time t.
func (p *PointQueue) Arrived(t float64) float64 { return p.state(t).arrived }

// Served is the number of vehicles that have left by time t.
func (p *PointQueue) Served(t float64) float64 { return p.state(t).served }

// Queue is the number of vehicles that wait at time t.
func (p *PointQueue) Queue(t float64) float64 { return p.state(t).queue() }

// Largest is the largest queue in vehicles and the first time at which it stands. A queue that grows for ever gives
// +Inf for both.
func (p *PointQueue) Largest() (queue, at float64) {
	for _, s := range p.spans {
		if s.queue() > queue {
			queue, at = s.queue(), s.from
		}
	}
	if n := len(p.spans); n > 0 && p.spans[n-1].arriving > p.spans[n-1].leaves {
		return math.Inf(1), math.Inf(1)
	}
	return queue, at
}

// Clears is the time at which the last queue has gone: +Inf if it never does, NaN if there was none.
func (p *PointQueue) Clears() float64 {
	clears := math.NaN()
	for i, s := range p.spans {
		if s.queued {
			clears = p.end(i)
		}
	}
	return clears
}

// Delay is the total delay in vehicle-seconds, the area between the cumulative curves; +Inf if the queue stays.
func (p *PointQueue) Delay() float64 {
	total := 0.0
	for i, s := range p.spans {
		if !s.queued {
			continue
		}
		end := p.end(i)
		if math.IsInf(end, 1) {
			return end
		}
		total += (s.queue() + s.at(end).queue()) / 2 * (end - s.from)
	}
	return total
}

// Delayed is the number of vehicles that arrive while there is a queue.
func (p *PointQueue) Delayed() float64 {
	n := 0.0
	for i, s := range p.spans {
		if s.queued && s.arriving > 0 {
			n += s.arriving * (p.end(i) - s.from)
		}
	}
	return n
}

// DelayOf is the delay in seconds of the n-th vehicle, n > 0 counted from the first step and not necessarily whole:
// the time between the cumulative curves at height n. It is NaN if the vehicle never arrives.
func (p *PointQueue) DelayOf(n float64) float64 {
	arrives := p.reach(n, func(s span) (float64, float64) { return s.arrived, s.arriving })
	leaves := p.reach(n, func(s span) (float64, float64) { return s.served, s.leaves })
	if math.IsInf(arrives, 1) {
		return math.NaN()
	}
	return leaves - arrives
}

// reach is the first time at which a cumulative curve reaches n, +Inf for never.
func (p *PointQueue) reach(n float64, curve func(span) (count, flow float64)) float64 {
	for i, s := range p.spans {
		count, flow := curve(s)
		if count >= n {
			return s.from
		}
		if t := s.from + (n-count)/flow; flow > 0 && t <= p.end(i) {
			return t
		}
	}
	return math.Inf(1)
}
