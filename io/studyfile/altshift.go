package studyfile

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/study"
	"example.org/tailback/demand"
)

// Window is when the alternative's measures last: from the first start to the last end. It returns an error where it
// has none, or where one of them has neither start nor end, so that it cannot be moved.
func (a *Alternative) Window() (study.Window, error) {
	w := study.Window{Start: math.Inf(1), End: math.Inf(-1)}
	_, err := a.again(func(x demand.Window) demand.Window {
		w.Start, w.End = min(w.Start, x.From), max(w.End, x.To)
		return x
	})
	if err == nil && w.Start >= w.End {
		err = errors.New("it has no measure with a start and an end to move")
	}
	return w, err
}

// Shift makes the alternative's scenario over another window: with [s, e) the alternative's own window, a measure of
// [from, to) lasts over
//
//	[w.Start + from - s, w.End + to - e)
//
// and its diverted or changed demand with it. It returns study.ErrShort where a measure would have no time left. Many
// goroutines may call it.
func (a *Alternative) Shift(own, w study.Window) (*ctm.Scenario, error) {
	short := false
	sc, err := a.again(func(x demand.Window) demand.Window {
		x = demand.Window{From: w.Start + x.From - own.Start, To: w.End + x.To - own.End}
		if x.To <= x.From {
			short = true
			x.To = x.From + 1
		}
		return x
	})
	if short {
		return nil, study.ErrShort
	}
	return sc, err
}

// rereader makes the function that reads an alternative again with other windows.
func rereader(base *ctm.Scenario, keys map[string]any, diagrams []string) func(func(demand.Window) demand.Window) (*ctm.Scenario, error) {
	return func(shift func(demand.Window) demand.Window) (*ctm.Scenario, error) {
		if err := fixed(keys); err != nil {
			return nil, err
		}
		var first error
		t := &table{keys: keys, report: func(path, text, hint string) {
			if first == nil {
				first = errors.New(text)
			}
		}}
		d := &altDraft{base: base, road: base.Network, diagrams: diagrams, period: demand.Window{From: base.Horizon.Start, To: base.Horizon.End}}
		d.warn = func(path, text, hint string) {}
		d.shift = shift
		d.demand = demand.Revise(base.Demand, d.period)
		d.read(t, make(map[string]bool))
		return d.alt.Scenario, first
	}
}

// fixed returns an error where a part of an alternative holds all the time.
func fixed(keys map[string]any) error {
	var kinds []string
	for kind := range keys {
		if kind != "name" && kind != "title" {
			kinds = append(kinds, kind)
		}
	}
	slices.Sort(kinds)
	t := &table{keys: keys, report: func(string, string, string) {}}
	for _, kind := range kinds {
		for _, part := range t.tables(kind) {
			if kind == "diagram_change" || !part.has("start") || !part.has("end") {
				return fmt.Errorf("its %s holds all the time: only measures with a start and an end can be moved", kind)
			}
		}
	}
	return nil
}
