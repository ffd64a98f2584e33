package study

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
)

// Window is a time in which a closure lasts, s after midnight.
type Window struct{ Start, End float64 }

// ErrShort says that a window is too short for an alternative's measures.
var ErrShort = errors.New("the window is too short for the alternative's measures")

// Shift makes the scenario of an alternative whose measures last over another window. It may return ErrShort.
type Shift func(w Window) (*ctm.Scenario, error)

// State says what is known of a window.
type State int

// The states of a window. NotComputed is never permitted.
const (
	NotComputed State = iota // the window does not fit into the study's period, or is too short for the measures
	Kept                     // every limit is kept
	Broken                   // a limit is broken
	Pruned                   // a shorter closure with the same start broke a limit already
)

// WindowResult is what a closure over a window does, against the base. The numbers are NaN where the window was not
// computed.
type WindowResult struct {
	Window
	State    State
	Queue    float64          // m, longest queue that the base does not have
	QueueAt  float64          // s after midnight, NaN for none
	Delay    float64          // s, worst delay of a vehicle above the base; NaN without corridors
	Added    float64          // vehicle-seconds of delay above the base, waiting outside included
	Reaches  []network.NodeID // that a queue reached and does not in the base, in order of number
	Gone     float64          // s after midnight: from this report time on no queue is longer than the base's; NaN where one still stands at the end
	Limit    string           // the first limit that is broken, or Outlasts
	Computed float64          // s after midnight: until when it was computed; from there on it is the base
}

// Outlasts stands for a limit where the queue of a window still stands when the study ends, so that nobody knows
// what becomes of it.
const Outlasts = "queue outlasts the study"

// Hours finds, for every start, how each longer closure fares against limits. Durations must rise. Runs share the
// base's state until their start, end where they have become the base again, and stop at the first duration that
// breaks a limit: a longer closure that contains it breaks it too. The rows stand by start, then by duration. It runs on
// all cores; progress, which may be nil, is called with the windows done.
func Hours(ctx context.Context, b *Trunk, shift Shift, limits []Limit, starts, durations []float64, progress func(done, total float64)) ([]WindowResult, error) {
	rows := make([]WindowResult, len(starts)*len(durations))
	tell := counter(progress, len(rows))
	err := each(ctx, len(starts), func(i int) error {
		part := rows[i*len(durations) : (i+1)*len(durations)]
		broken := ""
		for k, d := range durations {
			w := Window{starts[i], starts[i] + d}
			var err error
			switch {
			case !b.Fits(w):
				part[k] = unknown(w, NotComputed)
			case broken != "":
				part[k] = unknown(w, Pruned)
				part[k].Limit = broken
			default:
				part[k], err = b.Window(ctx, shift, w, limits)
				broken = part[k].Limit
			}
			if errors.Is(err, ErrShort) {
				part[k], err = unknown(w, NotComputed), nil
			}
			if err != nil {
				return err
			}
			tell()
		}
		return nil
	})
	return rows, err
}

// unknown is a window without numbers.
func unknown(w Window, s State) WindowResult {
	nan := math.NaN()
	return WindowResult{Window: w, State: s, Queue: nan, QueueAt: nan, Delay: nan, Added: nan, Gone: nan, Computed: nan}
}

// Fits reports whether a window lies within the study's period.
func (b *Trunk) Fits(w Window) bool {
	h := &b.Base.Scenario.Horizon
	return w.Start >= h.Start-1e-6 && w.End <= h.End+1e-6 && w.End > w.Start
}

// Window computes one window and holds the limits against it.
func (b *Trunk) Window(ctx context.Context, shift Shift, w Window, limits []Limit) (WindowResult, error) {
	sc, err := shift(w)
	if err != nil {
		return WindowResult{}, err
	}
	r, err := b.branch(ctx, sc, w)
	if err != nil {
		return WindowResult{}, fmt.Errorf("closure from %.0f s to %.0f s: %w", w.Start, w.End, err)
	}
	row := b.sum(r, w)
	verdicts, err := JudgeAll(limits, r, b.Base)
	if err != nil {
		return row, err
	}
	row.State = Kept
	for i := range verdicts {
		if !verdicts[i].Kept {
			row.State, row.Limit = Broken, verdicts[i].Limit.Name
			return row, nil
		}
	}
	if math.IsNaN(row.Gone) {
		row.State, row.Limit = Broken, Outlasts
	}
	return row, nil
}

// sum describes a run of a window against the base.
func (b *Trunk) sum(r *Result, w Window) WindowResult {
	row := unknown(w, Kept)
	row.Queue, row.Added, row.Gone = 0, b.added(r), w.Start
	row.Computed = r.Links.Times[len(r.Links.Times)-1]
	for _, q := range caused(r, b.Base) {
		if q.Length > row.Queue {
			row.Queue, row.QueueAt = q.Length, q.Time
		}
		row.Gone = max(row.Gone, (math.Floor((q.Time-r.Grid.Start)/r.interval()+1e-6)+1)*r.interval()+r.Grid.Start)
	}
	if row.Gone > row.Computed+1e-6 {
		row.Gone = math.NaN()
	}
	for i := range r.Corridors.Chains {
		if i == 0 {
			row.Delay = 0
		}
		for _, t := range r.departures() {
			row.Delay = max(row.Delay, delayOf(r, b.Base, i, t))
		}
	}
	for node := range reached(r, b.Base) {
		row.Reaches = append(row.Reaches, node)
	}
	slices.Sort(row.Reaches)
	return row
}

// added is the delay of a run above the base's over the time that it was recorded, vehicle-seconds.
func (b *Trunk) added(r *Result) float64 {
	offset := int(math.Round((r.Links.Times[0] - r.Grid.Start) / r.interval()))
	sum := 0.0
	for k := range r.Links.Rows {
		sum += intervalDelay(r, k) - intervalDelay(b.Base, offset+k)
	}
	return sum
}

// intervalDelay is the delay of one report interval, waiting outside included, vehicle-seconds.
func intervalDelay(r *Result, k int) float64 {
	sum := r.Entries.Network[k].WaitingSeconds
	for i := range r.Links.Rows[k] {
		sum += r.Links.Rows[k][i].Delay
	}
	return sum
}
