package observe

import (
	"math"
	"sort"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// Place is a point on a link.
type Place struct {
	Link network.LinkID
	At   float64 // m from the link's start
}

// QueueRow is one standing queue at the end of one report interval.
type QueueRow struct {
	Time       float64
	Queue      int // number from 1 in the order of onset
	Head, Tail Place
	Length     float64 // m along the longest branch
	Vehicles   float64
	Links      []network.LinkID
}

// Bottleneck is one activation of a place: from the onset of the queue before it until that queue has gone.
type Bottleneck struct {
	Queue        int
	Place        Place
	Onset        float64 // s after midnight
	Clearance    float64 // NaN where it still stands at the end
	Throughput   float64 // veh/s, mean over the time in which the queue's head stood at the place
	MaxQueue     float64 // m, greatest length at one moment
	MaxQueueTime float64
	MaxVehicles  float64
	Farthest     float64 // m, greatest distance of the tail from the place, also after the head has dissolved
	FarthestAt   Place
	FarthestTime float64
	Delay        float64 // vehicle-seconds lost in the queue
}

// ThroughputRow is what passed an active bottleneck in one report interval, or the part of it in which the
// queue's head stood there.
type ThroughputRow struct {
	Start, End float64
	Queue      int
	Place      Place
	Flow       float64 // veh/s
}

// Spillback says when a queue reached and left the upstream end of a link.
type Spillback struct {
	Queue         int
	Link          network.LinkID
	Reached, Left float64 // Left is NaN where it is still there at the end
}

// leastStanding is how long a queue must stand to count, s: shorter ones are ripples of the scheme (common
// practice, no source). Its onset is when it was first seen.
const leastStanding = 60

// Queues follows standing queues through a run. Watch it every half minute or so; the results are
// complete after the last state.
type Queues struct {
	Rows        []QueueRow
	Bottlenecks []Bottleneck
	Throughput  []ThroughputRow
	Spillbacks  []Spillback

	finder Finder
	joiner joiner
	live   []*queue
	past   []*queue
	time   float64 // of the last look
}

// NewQueues makes the observer.
func NewQueues(c Criterion) *Queues { return &Queues{finder: Finder{Criterion: c}} }

// Observe implements ctm.Observer.
func (o *Queues) Observe(v ctm.View) error {
	clusters := o.joiner.join(v, &o.finder, o.finder.Find(v))
	o.match(v, clusters)
	g := v.Grid()
	report := v.Step() > 0 && v.Step()%g.PerReport == 0 || v.Step() == g.Steps
	for _, q := range o.live {
		q.look(v, o.time)
		if report {
			q.report(v)
		}
	}
	o.time = v.Time()
	if v.Step() == g.Steps {
		o.finish()
	}
	return nil
}

// match hands each cluster to the queue it continues, or begins a new one; queues without a cluster end.
func (o *Queues) match(v ctm.View, clusters []cluster) {
	for _, q := range o.live {
		q.now = nil
	}
	taken := make([]bool, len(clusters))
	for _, q := range o.live { // the part that holds a queue's place goes on as that queue
		best, most := -1, 0
		for i := range clusters {
			shared := overlap(q.runs, clusters[i].runs)
			if shared > 0 && holds(clusters[i].runs, q.cell) {
				shared = math.MaxInt
			}
			if shared > most {
				best, most = i, shared
			}
		}
		if best < 0 {
			continue
		}
		if rival := o.owner(&clusters[best]); rival == nil || q.leads(rival, &clusters[best]) {
			if rival != nil {
				rival.now = nil
			}
			q.now, taken[best] = &clusters[best], true
		}
	}
	var live []*queue
	for _, q := range o.live {
		if q.now == nil {
			q.end(v)
			o.past = append(o.past, q)
			continue
		}
		if q.settled(v) { // its head has come to rest elsewhere: another bottleneck holds what is left of it
			q.end(v)
			o.past = append(o.past, q)
			live = append(live, newQueue(v, q.now))
			continue
		}
		live = append(live, q)
	}
	for i := range clusters {
		if !taken[i] {
			live = append(live, newQueue(v, &clusters[i]))
		}
	}
	o.live = live
}

// owner is the live queue that a cluster has been handed to so far.
func (o *Queues) owner(c *cluster) *queue {
	for _, q := range o.live {
		if q.now == c {
			return q
		}
	}
	return nil
}

// finish sorts queues by onset, drops those that never stood, and writes the results.
func (o *Queues) finish() {
	all := o.past
	for _, q := range o.live {
		q.clearance = math.NaN()
		q.closeSpillbacks(math.NaN())
		all = append(all, q)
	}
	sort.SliceStable(all, func(i, k int) bool { return all[i].onset < all[k].onset })
	number := 0
	for _, q := range all {
		if q.seen-q.onset < leastStanding {
			continue
		}
		number++
		q.write(o, number)
	}
	sort.SliceStable(o.Rows, func(i, k int) bool { return o.Rows[i].Time < o.Rows[k].Time })
	sort.SliceStable(o.Throughput, func(i, k int) bool { return o.Throughput[i].Start < o.Throughput[k].Start })
	o.live, o.past = nil, nil
}

// passed is the number of vehicles that have passed a place since the start: where one road leads on from the end
// of a link, all that entered it; else those that entered the link less those still before the place.
func passed(v ctm.View, p Place, cell int) float64 {
	n, l := v.Scenario().Network, v.Grid().Links[p.Link]
	out := n.Out(n.Links[p.Link].To)
	atEnd := cell == l.First+l.Cells-1
	veh := make([]float64, l.Cells)
	sum := 0.0
	for class := range demand.ClassID(v.Classes()) {
		switch {
		case atEnd && len(out) == 1:
			sum += v.In(out[0], class)
		case atEnd:
			sum += v.Out(p.Link, class)
		default:
			sum += v.In(p.Link, class)
			v.Vehicles(veh, p.Link, class)
			for i := l.First; i <= cell; i++ {
				sum -= veh[i-l.First]
			}
		}
	}
	return sum
}
