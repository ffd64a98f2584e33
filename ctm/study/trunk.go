package study

import (
	"context"
	"errors"
	"math"
	"runtime"
	"sync"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// Trunk is a base run from which runs branch off that differ from it only from some moment on. Many goroutines may
// branch at once.
type Trunk struct {
	Base   *Result
	opt    Options
	models []*ctm.Model // by report interval, at its beginning; nil where nothing branches
	states [][]float64  // by report interval, of the base
	lead   float64      // s, the longest travel time on a corridor of the base
}

// same is how far a number of a state may be from the base's to count as the base's, passenger cars or vehicles: a
// thousand cells hold less than a thousandth of a vehicle then.
const same = 1e-6

// errSettled ends a run that has become its base again.
var errSettled = errors.New("the run has become the base")

// NewTrunk runs the base and keeps its state before every start, so that branches can begin there.
func NewTrunk(ctx context.Context, base *ctm.Scenario, starts []float64, opt *Options) (*Trunk, error) {
	b := &Trunk{opt: Options{Queued: opt.Queued}}
	var err error
	if b.Base, err = Run(ctx, base, opt); err != nil {
		return nil, err
	}
	for i := range b.Base.Corridors.Chains {
		b.lead = max(b.lead, b.Base.Corridors.FreeTime(i))
		for _, t := range b.Base.departures() {
			if x := b.Base.Corridors.TravelTime(i, t); x > b.lead {
				b.lead = x
			}
		}
	}
	g := b.Base.Grid
	b.models = make([]*ctm.Model, g.Steps/g.PerReport+1)
	needed := make([]bool, len(b.models))
	for _, s := range starts {
		needed[b.from(s)] = true
	}
	m, err := ctm.New(base)
	if err != nil {
		return nil, err
	}
	keep := keeper{func(v ctm.View) error {
		k := v.Step() / g.PerReport
		if v.Step()%g.PerReport != 0 {
			return nil
		}
		b.states = append(b.states, state(v))
		if needed[k] {
			b.models[k], err = m.Fork(base)
		}
		return err
	}}
	_, err = m.Run(ctx, ctm.Watch{Every: g.PerReport, Observer: keep})
	return b, err
}

// keeper is an observer made of a function.
type keeper struct{ look func(ctm.View) error }

// Observe implements ctm.Observer.
func (k keeper) Observe(v ctm.View) error { return k.look(v) }

// from is the report interval at whose beginning a branch of a start leaves: the longest travel time before it, so
// that every vehicle which meets the measure has departed on the branch's record.
func (b *Trunk) from(start float64) int {
	g := b.Base.Grid
	k := int(math.Floor((start-b.lead-g.Start)/b.Base.interval() + 1e-6))
	return max(0, min(k, g.Steps/g.PerReport))
}

// branch runs a scenario from the base's state before a window. It ends early when its state has been the base's
// twice after the window, and every vehicle that departed before has arrived.
func (b *Trunk) branch(ctx context.Context, sc *ctm.Scenario, w Window) (*Result, error) {
	k := b.from(w.Start)
	if b.models[k] == nil {
		return nil, errors.New("no state of the base is kept for it")
	}
	m, err := b.models[k].Fork(sc)
	if err != nil {
		return nil, err
	}
	settled, times := math.NaN(), 0
	g := b.Base.Grid
	stop := keeper{func(v ctm.View) error {
		t := v.Time()
		switch {
		case t < w.End || v.Step()%g.PerReport != 0:
		case times >= 2:
			if t >= settled+b.lead && v.Step() < g.Steps {
				return errSettled
			}
		case !alike(state(v), b.states[v.Step()/g.PerReport]):
			times = 0
		default:
			times++
			settled = t
		}
		return nil
	}}
	return record(ctx, m, &b.opt, ctm.Watch{Every: g.PerReport, Observer: stop})
}

// state lists what decides how a run goes on: contents of cells and vehicles that wait, by class where there are
// some.
func state(v ctm.View) []float64 {
	list := append([]float64(nil), v.Cars()...)
	for c := range demand.ClassID(v.Classes()) {
		for i := range v.Sources() {
			list = append(list, v.Source(i, c).Waiting)
		}
		if v.Classes() == 1 {
			continue
		}
		for l := range v.Grid().Links {
			veh := make([]float64, v.Grid().Links[l].Cells)
			v.Vehicles(veh, network.LinkID(l), c)
			list = append(list, veh...)
		}
	}
	return list
}

// alike reports whether two states agree.
func alike(a, b []float64) bool {
	for i := range a {
		if !(math.Abs(a[i]-b[i]) <= same) {
			return false
		}
	}
	return true
}

// each calls f with 0..n-1 on all cores and returns the error with the smallest number.
func each(ctx context.Context, n int, f func(i int) error) error {
	errs := make([]error, n)
	next := make(chan int)
	var group sync.WaitGroup
	for range min(n, runtime.GOMAXPROCS(0)) {
		group.Add(1)
		go func() {
			defer group.Done()
			for i := range next {
				if errs[i] = ctx.Err(); errs[i] == nil {
					errs[i] = f(i)
				}
			}
		}()
	}
	for i := range n {
		next <- i
	}
	close(next)
	group.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}

// counter makes a function that counts and tells; many goroutines may call it.
func counter(progress func(done, total float64), total int) func() {
	var lock sync.Mutex
	done := 0
	return func() {
		lock.Lock()
		defer lock.Unlock()
		done++
		if progress != nil {
			progress(float64(done), float64(total))
		}
	}
}
