package measure

import (
	"fmt"
	"math"

	"example.org/tailback/ctm"
	"example.org/tailback/network"
)

// tick is how exactly a moment is met, s: the schedule of a run calls Apply at the first step that begins less
// than this before it.
const tick = 1e-3

// within reports whether t lies in [start, end).
func within(t, start, end float64) bool { return start <= t+tick && t+tick < end }

// Span is a stretch of one link, in metres from the link's start. To may be +Inf for the link's end.
type Span struct {
	Link     network.LinkID
	From, To float64
}

// defaultCell is the target cell length in metres where a study names none.
const defaultCell = 100

// laid gives a span's ends on a link. A stretch shorter than half a target cell is lengthened to that, because the
// grid moves cuts that are closer to each other together.
func (s *Span) laid(length, cell float64) (from, to float64) {
	if cell <= 0 {
		cell = defaultCell
	}
	least := min(cell/2, length)
	to = min(s.To, length)
	from = max(0, min(s.From, to))
	if to-from < least {
		from = max(0, min((from+to-least)/2, length-least))
		to = from + least
	}
	return from, to
}

// cuts lists the ends of the spans.
func cuts(spans []Span, n *network.Network, cell float64) []ctm.Cut {
	list := make([]ctm.Cut, 0, 2*len(spans))
	for i := range spans {
		from, to := spans[i].laid(n.Links[spans[i].Link].Length, cell)
		list = append(list, ctm.Cut{Link: spans[i].Link, At: from}, ctm.Cut{Link: spans[i].Link, At: to})
	}
	return list
}

// tighten calls change with the limits of every segment whose midpoint lies in one of the spans.
func tighten(v ctm.View, lim *ctm.Limits, spans []Span, change func(*ctm.SegmentLimits)) {
	g := v.Grid()
	for i := range spans {
		l := g.Links[spans[i].Link]
		from, to := spans[i].laid(l.Length, v.Scenario().Horizon.Cell)
		for s := l.FirstSegment; s <= l.Last(); s++ {
			if mid := (g.Segments[s].From + g.Segments[s].To) / 2; from <= mid && mid < to {
				change(&lim.Segments[s])
			}
		}
	}
}

// lower returns the lower of two limits of which 0 means none.
func lower(a, b float64) float64 {
	if a == 0 || b > 0 && b < a {
		return b
	}
	return a
}

// checkSpan says what is wrong with a stretch, or returns nil.
func checkSpan(s *Span, n *network.Network) error {
	l := &n.Links[s.Link]
	switch {
	case s.From < 0 || s.From >= l.Length:
		return fmt.Errorf("begins at %s, outside link `%s`, which is %s long", metres(s.From), l.Name, metres(l.Length))
	case s.To > l.Length*(1+1e-9) && !math.IsInf(s.To, 1):
		return fmt.Errorf("ends at %s, outside link `%s`, which is %s long", metres(s.To), l.Name, metres(l.Length))
	case s.To <= s.From:
		return fmt.Errorf("ends at %s of link `%s`, not after its begin at %s", metres(s.To), l.Name, metres(s.From))
	}
	return nil
}

// checkTimes says what is wrong with a period, or returns nil.
func checkTimes(start, end float64) error {
	if !(start < end) {
		return fmt.Errorf("ends at %s, not after its start at %s", clock(end), clock(start))
	}
	return nil
}
