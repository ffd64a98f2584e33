// Package study makes runs: one scenario with everything that is recorded about it, and many at once.
package study

import (
	"context"
	"errors"
	"math"
	"time"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/observe"
	"example.org/tailback/network"
)

// Options say how to run. The zero value is the default.
type Options struct {
	Queued   observe.Criterion         // what counts as queued; default density above critical
	Progress func(done, total float64) // called now and then with model time in seconds; default nobody
}

// Result is a run and all that was recorded of it.
type Result struct {
	Scenario  *ctm.Scenario // with link lengths as used
	Grid      *ctm.Grid
	Criterion observe.Criterion
	Links     *observe.Links
	Entries   *observe.Entries
	Queues    *observe.Queues
	Corridors *observe.Corridors
	Totals    Totals
	Lost      float64 // vehicles in less out, inside and waiting: the conservation error
	Solve     float64 // s, time stepping alone
	Wall      float64 // s, the whole run
	Warnings  []string
}

// Totals of a whole run, in SI units, all classes.
type Totals struct {
	Entered, Left, Inside, Waiting float64 // vehicles
	Wanted                         float64 // vehicles that wanted to enter
	Seconds, Metres                float64 // vehicle-seconds and vehicle-metres on the road
	Delay                          float64 // vehicle-seconds above free flow, waiting outside included
	WaitingSeconds                 float64 // vehicle-seconds outside
	MaxQueue                       float64 // m, longest standing queue; 0 for none
	MaxQueueLink                   network.LinkID
	MaxQueueTime                   float64 // s after midnight
}

// lookEvery is about how often the queues and the corridors' speeds are looked at, s.
const lookEvery = 30

// Run computes a scenario and records everything.
func Run(ctx context.Context, sc *ctm.Scenario, opt *Options) (*Result, error) {
	begin := time.Now()
	m, err := ctm.New(sc)
	if err != nil {
		return nil, err
	}
	r, err := record(ctx, m, opt)
	if err != nil {
		return nil, err
	}
	r.warn()
	r.Wall = time.Since(begin).Seconds()
	return r, nil
}

// record runs a model from its present state to the end of its period, or until one more watch says that it has
// settled. What it records begins at that state.
func record(ctx context.Context, m *ctm.Model, opt *Options, more ...ctm.Watch) (*Result, error) {
	g := m.View().Grid()
	r := &Result{
		Scenario: m.View().Scenario(), Grid: g, Criterion: opt.Queued,
		Links: observe.NewLinks(opt.Queued), Entries: &observe.Entries{},
		Queues: observe.NewQueues(opt.Queued), Corridors: observe.NewCorridors(m.View().Scenario().Corridors),
	}
	often := looks(g)
	watches := []ctm.Watch{
		{Every: g.PerReport, Observer: r.Links},
		{Every: g.PerReport, Observer: r.Entries},
		{Every: often, Observer: r.Queues},
		{Every: often, Observer: r.Corridors},
	}
	if opt.Progress != nil {
		watches = append(watches, ctm.Watch{Every: g.PerReport, Observer: progress{opt.Progress, float64(g.Steps) * g.Step}})
	}
	var err error
	if r.Solve, err = m.Run(ctx, append(watches, more...)...); err != nil && !errors.Is(err, errSettled) {
		return nil, err
	}
	r.Queues.Close()
	if r.Lost, err = m.Check(); err != nil {
		return nil, err
	}
	r.total()
	return r, nil
}

// looks is the number of steps between two looks: the divisor of a report interval closest to lookEvery seconds.
func looks(g *ctm.Grid) int {
	best := 1
	for n := 1; n <= g.PerReport; n++ {
		if g.PerReport%n == 0 && math.Abs(float64(n)*g.Step-lookEvery) < math.Abs(float64(best)*g.Step-lookEvery) {
			best = n
		}
	}
	return best
}

// progress tells how far a run is.
type progress struct {
	tell  func(done, total float64)
	total float64
}

// Observe implements ctm.Observer.
func (p progress) Observe(v ctm.View) error {
	p.tell(v.Time()-v.Grid().Start, p.total)
	return nil
}

// total sums the rows.
func (r *Result) total() {
	t := &r.Totals
	e := r.Entries.Totals
	t.Wanted, t.Entered, t.Left, t.Inside, t.Waiting = e.Wanted, e.Entered, e.Left, e.Inside, e.Waiting
	t.WaitingSeconds, t.Delay = e.WaitingSeconds, e.WaitingSeconds
	for _, rows := range r.Links.Rows {
		for i := range rows {
			t.Seconds += rows[i].Seconds
			t.Metres += rows[i].Metres
			t.Delay += rows[i].Delay
		}
	}
	r.longest()
}
