package study

import (
	"errors"
	"fmt"
	"math"

	works "example.org/tailback/ctm/measure"
	"example.org/tailback/network"
)

// Kinds of limits.
const (
	QueueLimit = "queue" // length of a queue, with an allowed time above it
	DelayLimit = "delay" // delay of one vehicle
	FlowLimit  = "flow"  // demand flow through a closure, per open lane
	LanesLimit = "lanes" // lanes that must stay open
	ReachLimit = "reach" // places that a queue must not reach
)

// Limit is one rule of a policy. Which fields count depends on Kind.
type Limit struct {
	Name, Kind   string
	Length       float64          // queue: m
	For          float64          // queue: s in all that a queue may be longer; 0 none
	PerVehicle   float64          // delay: s above the free travel time
	AboveNormal  bool             // delay: above the base run's travel time in place of the free one
	PerLane      float64          // flow: veh/s per open lane
	Open         float64          // lanes
	Nodes        []network.NodeID // reach
	Source, Date string           // where the rule stands, and as of when
}

// Verdict is a limit against a run, in SI units.
type Verdict struct {
	Limit       *Limit
	Value       float64 // NaN where the run holds nothing that the limit speaks of
	Allowed     float64
	Margin      float64 // what is left of the allowance; negative where it is broken
	Unit        string  // m, s, veh/s/lane, lanes, nodes
	Kept        bool
	FirstBroken float64 // s after midnight, NaN where kept
}

// ErrNoCorridor says that a delay limit cannot be judged.
var ErrNoCorridor = errors.New("a delay limit needs the travel time of a [[corridor]], and the study has none")

// Judge holds a limit against a run. The base, which may be nil, is the run without the measures on the same grid:
// a queue counts as long as it does not lie within the queue that stands there anyway (see covered).
//
//   - queue: the longest queue that counts, or with For the time in all during which one is longer than Length, in
//     report intervals that end with such a queue;
//   - delay: the largest travel time above the free one, or above the base's of the same departure, of departures
//     at the report intervals on every corridor. A vehicle that has not arrived when the study ends counts with the
//     time until then, so the value is at least this;
//   - flow: the largest flow into a closure's links while it lasts, in the base where there is one, over the open
//     lanes;
//   - lanes: the fewest lanes that a closure leaves open;
//   - reach: the number of the named nodes that a queue reached from downstream while none does in the base.
//
// It returns ErrNoCorridor for a delay limit without a corridor, and an error for a kind that it does not know.
func Judge(l *Limit, r, base *Result) (Verdict, error) {
	v := Verdict{Limit: l, FirstBroken: math.NaN()}
	switch l.Kind {
	case QueueLimit:
		v.queue(r, base)
	case DelayLimit:
		if len(r.Corridors.Chains) == 0 {
			return v, ErrNoCorridor
		}
		if l.AboveNormal && base == nil {
			return v, fmt.Errorf("the limit `%s` is above normal: it needs the base run", l.Name)
		}
		v.delay(r, base)
	case FlowLimit:
		v.flow(r, base)
	case LanesLimit:
		v.lanes(r)
	case ReachLimit:
		v.reach(r, base)
	default:
		return v, fmt.Errorf("`%s` is no kind of limit: queue, delay, flow, lanes or reach", l.Kind)
	}
	return v, nil
}

// JudgeAll holds every limit against a run.
func JudgeAll(limits []Limit, r, base *Result) ([]Verdict, error) {
	list := make([]Verdict, len(limits))
	for i := range limits {
		var err error
		if list[i], err = Judge(&limits[i], r, base); err != nil {
			return nil, err
		}
	}
	return list, nil
}

// atMost settles a verdict on a value that must not exceed what is allowed; rounding is forgiven to a billionth.
func (v *Verdict) atMost(value, allowed float64, unit string) {
	v.Value, v.Allowed, v.Margin, v.Unit = value, allowed, allowed-value, unit
	v.Kept = !(value > allowed+1e-9*(1+allowed))
	if v.Kept {
		v.FirstBroken = math.NaN()
	}
}

// first keeps the earliest of the moments given to it.
func (v *Verdict) first(t float64) {
	if math.IsNaN(v.FirstBroken) || t < v.FirstBroken {
		v.FirstBroken = t
	}
}

func (v *Verdict) queue(r, base *Result) {
	l := v.Limit
	longest := 0.0
	long := make(map[float64]bool) // report times with a queue above the length
	for _, q := range caused(r, base) {
		longest = max(longest, q.Length)
		if q.Length > l.Length {
			v.first(q.Time)
			if q.Queue >= 0 {
				long[q.Time] = true
			}
		}
	}
	if l.For <= 0 {
		v.atMost(longest, l.Length, "m")
		return
	}
	above := 0.0
	broken := math.NaN()
	for k, t := range r.Links.Times {
		if !long[t] || k == 0 {
			continue
		}
		above += t - r.Links.Times[k-1]
		if above > l.For && math.IsNaN(broken) {
			broken = t
		}
	}
	v.FirstBroken = broken
	v.atMost(above, l.For, "s")
}

func (v *Verdict) delay(r, base *Result) {
	worst := 0.0
	for i := range r.Corridors.Chains {
		for _, t := range r.departures() {
			var normal *Result
			if v.Limit.AboveNormal {
				normal = base
			}
			d := delayOf(r, normal, i, t)
			worst = max(worst, d)
			if d > v.Limit.PerVehicle {
				v.first(t)
			}
		}
	}
	v.atMost(worst, v.Limit.PerVehicle, "s")
}

// departures are the beginnings of the report intervals.
func (r *Result) departures() []float64 { return r.Links.Times[:max(0, len(r.Links.Times)-1)] }

// delayOf is the travel time of a departure above the base's, or above the free one without a base; 0 where neither
// arrives before the end.
func delayOf(r, base *Result, corridor int, depart float64) float64 {
	normal := r.Corridors.FreeTime(corridor)
	if base != nil {
		normal = base.Corridors.TravelTime(corridor, depart)
	}
	x := r.Corridors.TravelTime(corridor, depart)
	if math.IsNaN(x) {
		x = r.Links.Times[len(r.Links.Times)-1] - depart
	}
	if math.IsNaN(normal) {
		return 0
	}
	return max(0, x-normal)
}

func (v *Verdict) flow(r, base *Result) {
	from := r
	if base != nil {
		from = base
	}
	worst := 0.0
	for _, m := range r.Scenario.Measures {
		c, ok := m.(*works.LaneClosure)
		if !ok {
			continue
		}
		for i := range c.Stretch {
			link := c.Stretch[i].Link
			open := r.Scenario.Network.Links[link].Lanes - c.Lanes
			for k := range from.Links.Rows {
				begin, end := from.Links.Times[k], from.Links.Times[k+1]
				if end <= c.Start || begin >= c.End {
					continue
				}
				q := from.Links.Rows[k][link].In / (end - begin) / open // +Inf with no lane left
				if math.IsNaN(q) {
					continue
				}
				worst = max(worst, q)
				if q > v.Limit.PerLane {
					v.first(max(begin, c.Start))
				}
			}
		}
	}
	v.atMost(worst, v.Limit.PerLane, "veh/s/lane")
}

func (v *Verdict) lanes(r *Result) {
	fewest := math.Inf(1)
	for _, m := range r.Scenario.Measures {
		c, ok := m.(*works.LaneClosure)
		if !ok {
			continue
		}
		for i := range c.Stretch {
			open := r.Scenario.Network.Links[c.Stretch[i].Link].Lanes - c.Lanes
			fewest = min(fewest, open)
			if open < v.Limit.Open-1e-9 {
				v.first(c.Start)
			}
		}
	}
	if math.IsInf(fewest, 1) {
		fewest = math.NaN()
	}
	v.Value, v.Allowed, v.Margin, v.Unit = fewest, v.Limit.Open, fewest-v.Limit.Open, "lanes"
	v.Kept = math.IsNaN(v.FirstBroken)
}

func (v *Verdict) reach(r, base *Result) {
	count := 0.0
	at := reached(r, base)
	for _, node := range v.Limit.Nodes {
		if t, ok := at[node]; ok {
			count++
			v.first(t)
		}
	}
	v.atMost(count, 0, "nodes")
}
