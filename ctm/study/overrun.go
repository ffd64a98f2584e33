package study

import (
	"context"
	"errors"
	"math"
)

// Late is what a closure does that reopens late.
type Late struct {
	WindowResult
	Late    float64 // s after the planned end
	Further float64 // vehicle-seconds of delay above the row before; NaN in the first row and where not computed
	Money   float64 // of what is added to the base's delay and distance; NaN without [cost]
	Metres  float64 // vehicle-metres above the base
}

// Step and end of the table of late reopenings, s.
const (
	lateEvery = 15 * 60
	lateMost  = 2 * 3600
)

// Overrun computes a closure as planned and reopened late by each further quarter of an hour up to two hours. Where
// the study has a cost (nil for none), each row has its money.
func Overrun(ctx context.Context, b *Trunk, shift Shift, planned Window, cost *Cost) ([]Late, error) {
	rows := make([]Late, lateMost/lateEvery+1)
	err := each(ctx, len(rows), func(i int) error {
		late := float64(i) * lateEvery
		w := Window{planned.Start, planned.End + late}
		row := &rows[i]
		*row = Late{WindowResult: unknown(w, NotComputed), Late: late, Further: math.NaN(), Money: math.NaN(), Metres: math.NaN()}
		if !b.Fits(w) {
			return nil
		}
		sc, err := shift(w)
		if err != nil {
			return err
		}
		r, err := b.branch(ctx, sc, w)
		if err != nil {
			return err
		}
		row.WindowResult = b.sum(r, w)
		row.Metres = b.metres(r)
		if cost != nil {
			row.Money = cost.Money(sc.Demand, sc.Horizon, row.Added, row.Metres)
		}
		return nil
	})
	for i := 1; i < len(rows); i++ {
		rows[i].Further = rows[i].Added - rows[i-1].Added
	}
	return rows, err
}

// metres is the distance travelled above the base's over the time that a run was recorded, vehicle-metres.
func (b *Trunk) metres(r *Result) float64 {
	offset := int(math.Round((r.Links.Times[0] - r.Grid.Start) / r.interval()))
	sum := 0.0
	for k := range r.Links.Rows {
		for i := range r.Links.Rows[k] {
			sum += r.Links.Rows[k][i].Metres - b.Base.Links.Rows[offset+k][i].Metres
		}
	}
	return sum
}

// ErrTooLate says that no reopening lets the queue go in time.
var ErrTooLate = errors.New("no reopening lets the queue go by then")

// reopenTo is how exactly the moment of reopening is sought, s.
const reopenTo = 60

// LatestReopening finds the latest moment (to the minute, rounded down) at which all lanes of a closure that began at
// start may be open again so that from a time on no queue is longer than the base's, by bisection: a longer closure
// queues longer. How long the reopening itself takes is for the caller to take off. It returns ErrTooLate where even
// an end one minute after the start is too late.
func LatestReopening(ctx context.Context, b *Trunk, shift Shift, start, clearBy float64) (float64, error) {
	limit := min(clearBy, b.Base.Scenario.Horizon.End)
	low, high := 0, int(math.Floor((limit-start)/reopenTo)) // low is good once above 0, high is too late
	try := func(n int) (bool, error) {
		w := Window{start, start + float64(n)*reopenTo}
		if n <= 0 || !b.Fits(w) {
			return false, nil
		}
		row, err := b.Window(ctx, shift, w, nil)
		return row.Gone <= clearBy, err // false where NaN
	}
	if good, err := try(high); err != nil || good {
		return start + float64(high)*reopenTo, err
	}
	for high-low > 1 {
		mid := (low + high) / 2
		good, err := try(mid)
		if err != nil {
			return 0, err
		}
		if good {
			low = mid
		} else {
			high = mid
		}
	}
	if low == 0 {
		return 0, ErrTooLate
	}
	return start + float64(low)*reopenTo, nil
}
