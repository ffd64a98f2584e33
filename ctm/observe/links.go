package observe

import (
	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// LinkRow is what happened on one link in one report interval, all classes together, in SI units.
type LinkRow struct {
	In, Out  float64 // vehicles that crossed its ends
	Seconds  float64 // vehicle-seconds spent on it
	Metres   float64 // vehicle-metres travelled on it
	Delay    float64 // vehicle-seconds above the link's own free speed
	Vehicles float64 // on it at the interval's end
	Queue    float64 // m queued at the interval's end
	Queued   float64 // vehicles queued at the interval's end
}

// Links records every link in every report interval. The distance travelled is exact without a look at every
// step: with M the sum over vehicles of the upstream end of the cell they are in,
//
//	metres = M(end) - M(begin) + vehicles out x length
//
// since whatever crosses from cell to cell moves by a cell. The time of a step is that of the vehicles on the
// link at its beginning, so that at free speed seconds = metres / free speed to round-off.
type Links struct {
	Times  []float64   // ends of the intervals, s after midnight; the first is the beginning
	Rows   [][]LinkRow // by interval and link
	finder Finder
	last   []counts
	cells  []float64
}

// counts are a link's numbers at the last look.
type counts struct{ in, out, seconds, moment float64 }

// NewLinks makes the observer; watch it at every report interval.
func NewLinks(c Criterion) *Links { return &Links{finder: Finder{Criterion: c}} }

// Observe implements ctm.Observer.
func (o *Links) Observe(v ctm.View) error {
	g := v.Grid()
	now := make([]counts, len(g.Links))
	for i := range g.Links {
		now[i] = o.count(v, network.LinkID(i))
	}
	if o.last != nil {
		o.finder.Find(v)
		rows := make([]LinkRow, len(g.Links))
		for i := range rows {
			o.row(v, network.LinkID(i), &rows[i], now[i])
		}
		o.Rows = append(o.Rows, rows)
	}
	o.Times = append(o.Times, v.Time())
	o.last = now
	return nil
}

// count sums a link's counts over the classes and finds the moment of its vehicles' places.
func (o *Links) count(v ctm.View, link network.LinkID) counts {
	var c counts
	l := v.Grid().Links[link]
	for class := range demand.ClassID(v.Classes()) {
		c.in += v.In(link, class)
		c.out += v.Out(link, class)
		c.seconds += v.Seconds(link, class)
		o.cells = append(o.cells[:0], make([]float64, l.Cells)...)
		v.Vehicles(o.cells, link, class)
		for s := l.FirstSegment; s <= l.Last(); s++ {
			seg := &v.Grid().Segments[s]
			for i := range seg.Cells {
				c.moment += o.cells[seg.First-l.First+i] * (seg.From + float64(i)*seg.Dx)
			}
		}
	}
	return c
}

// row fills a link's row from its counts at both ends of the interval.
func (o *Links) row(v ctm.View, link network.LinkID, r *LinkRow, now counts) {
	last := o.last[link]
	l := &v.Scenario().Network.Links[link]
	r.In, r.Out, r.Seconds = now.in-last.in, now.out-last.out, now.seconds-last.seconds
	r.Metres = max(0, now.moment-last.moment+r.Out*l.Length)
	r.Delay = r.Seconds - r.Metres/l.Diagram.FreeSpeed()
	if r.Delay < 1e-9*r.Seconds { // round-off; the true value is never negative
		r.Delay = 0
	}
	for class := range demand.ClassID(v.Classes()) {
		r.Vehicles += v.Inside(link, class)
	}
	for _, run := range o.finder.Of(link) {
		r.Queue += run.Length()
		r.Queued += run.Vehicles
	}
}

// Speed is the space-mean speed of a row in m/s, or free where nothing travelled.
func (r *LinkRow) Speed(free float64) float64 {
	if r.Seconds <= 0 {
		return free
	}
	return r.Metres / r.Seconds
}
