package ctm

import (
	"fmt"
	"math"
	"sort"

	"example.org/tailback/network"
)

// Segment is a run of equal cells of one link with one set of parameters at a time.
type Segment struct {
	Link     network.LinkID
	From, To float64 // m from the link's start
	First    int     // number of its first cell
	Cells    int
	Dx       float64 // cell length, m
}

// LinkCells says where a link's segments and cells stand in the flat lists.
type LinkCells struct {
	Length       float64 // m, after stretching
	FirstSegment int
	Segments     int
	First        int // number of the link's first cell
	Cells        int
}

// Last is the number of the link's last segment.
func (l LinkCells) Last() int { return l.FirstSegment + l.Segments - 1 }

// Grid is the road cut into cells, and time into steps. It does not change once built.
type Grid struct {
	Step       float64 // s
	Steps      int
	PerReport  int // steps in a result row; the last row may be shorter
	Start      float64
	Segments   []Segment // by link, upstream to downstream
	Links      []LinkCells
	Cells      int
	MaxCourant float64 // largest wave speed times step over cell length, at most 1
	Notes      []string
}

// Time is the clock at the beginning of a step, s after midnight.
func (g *Grid) Time(step int) float64 { return g.Start + float64(step)*g.Step }

// CellAt is the number of the cell of a link that holds the point at metres from its start.
func (g *Grid) CellAt(link network.LinkID, at float64) int {
	l := g.Links[link]
	for s := l.FirstSegment; s <= l.Last(); s++ {
		seg := &g.Segments[s]
		if at < seg.To || s == l.Last() {
			return seg.First + max(0, min(seg.Cells-1, int((at-seg.From)/seg.Dx)))
		}
	}
	return l.First
}

// defaultCell is the target cell length in metres where a study names neither cell nor step.
const defaultCell = 100

// newGrid cuts the links and picks the step: the largest that meets the Courant condition for the target cell
// length, divides the report interval, and fits the shortest segment (unless that is stretched). Each segment
// then takes as many cells as its own wave speed allows, so that its Courant number is close to 1.
func newGrid(sc *Scenario) (*Grid, error) {
	h := &sc.Horizon
	report := h.Report
	if report <= 0 {
		report = 300
	}
	unit, err := commonUnit(report, h.End-h.Start)
	if err != nil {
		return nil, err
	}
	g := &Grid{Start: h.Start, Links: make([]LinkCells, len(sc.Network.Links))}
	g.cut(sc)
	target := h.Step
	if target <= 0 {
		target = g.courantStep(sc, h.Cell)
	}
	step := unit / math.Ceil(unit/target-1e-9)
	if h.Step > 0 && math.Abs(step-h.Step) > 1e-9*h.Step {
		g.note("the step of %.6g s does not divide the report interval of %g s: %.6g s is used", h.Step, report, step)
	}
	if h.Stretch {
		g.stretch(sc, step)
	} else {
		step = g.shrink(sc, step, unit)
	}
	g.Step = step
	g.Steps = int(math.Round((h.End - h.Start) / step))
	g.PerReport = int(math.Round(report / step))
	g.fill(sc)
	return g, nil
}

func (g *Grid) note(format string, args ...any) {
	g.Notes = append(g.Notes, fmt.Sprintf(format, args...))
}

// commonUnit is the longest time in seconds that divides both the report interval and the period, in whole
// milliseconds.
func commonUnit(report, period float64) (float64, error) {
	a, b := int64(math.Round(report*1000)), int64(math.Round(period*1000))
	if a <= 0 || b <= 0 {
		return 0, fmt.Errorf("the period of %g s and the report interval of %g s must be at least a millisecond long", period, report)
	}
	if a > b {
		return 0, fmt.Errorf("the report interval of %g s is longer than the period of %g s", report, period)
	}
	for b != 0 {
		a, b = b, a%b
	}
	return float64(a) / 1000, nil
}

// cut makes the segments, without cells yet. Cuts closer to each other or to a link's end than half a target
// cell are moved together and noted.
func (g *Grid) cut(sc *Scenario) {
	least := sc.Horizon.Cell / 2
	if least <= 0 {
		least = defaultCell / 2
	}
	places := make([][]float64, len(sc.Network.Links))
	for _, c := range sc.Cuts {
		places[c.Link] = append(places[c.Link], c.At)
	}
	for i := range sc.Network.Links {
		link := &sc.Network.Links[i]
		sort.Float64s(places[i])
		ends := []float64{0}
		for _, at := range places[i] {
			last := ends[len(ends)-1]
			switch {
			case at <= 0 || at >= link.Length || at == last:
			case at-last < least || link.Length-at < least:
				near := last
				if link.Length-at < at-last {
					near = link.Length
				}
				g.note("the place %.0f m along link `%s` is less than half a cell from %.0f m and is moved there", at, link.Name, near)
			default:
				ends = append(ends, at)
			}
		}
		ends = append(ends, link.Length)
		g.Links[i] = LinkCells{Length: link.Length, FirstSegment: len(g.Segments), Segments: len(ends) - 1}
		for k := 1; k < len(ends); k++ {
			g.Segments = append(g.Segments, Segment{Link: network.LinkID(i), From: ends[k-1], To: ends[k]})
		}
	}
}

// wave is the fastest wave of a segment in m/s.
func (g *Grid) wave(sc *Scenario, s int) float64 {
	return sc.Network.Links[g.Segments[s].Link].Diagram.MaxWaveSpeed()
}

// courantStep is the step in which the fastest wave of the network crosses one target cell.
func (g *Grid) courantStep(sc *Scenario, cell float64) float64 {
	if cell <= 0 {
		cell = defaultCell
	}
	fastest := 0.0
	for s := range g.Segments {
		fastest = max(fastest, g.wave(sc, s))
	}
	return cell / fastest
}

// shrink lowers the step until the fastest wave of every segment stays within it, and notes what that costs.
func (g *Grid) shrink(sc *Scenario, step, unit float64) float64 {
	shortest, limit := -1, step
	for s := range g.Segments {
		seg := &g.Segments[s]
		if t := (seg.To - seg.From) / g.wave(sc, s); t < limit*(1-1e-12) {
			shortest, limit = s, t
		}
	}
	if shortest < 0 {
		return step
	}
	small := unit / math.Ceil(unit/limit-1e-9)
	seg := &g.Segments[shortest]
	g.note("link `%s` has a part of only %.1f m: the step is %.3g s instead of %.3g s, which makes the run about %.1f times as long; `stretch_short_links = true` under [time] avoids this",
		sc.Network.Links[seg.Link].Name, seg.To-seg.From, small, step, step/small)
	return small
}

// stretch lengthens every segment that the fastest wave crosses within a step to one cell, and notes by how
// much each link grew.
func (g *Grid) stretch(sc *Scenario, step float64) {
	for i := range g.Links {
		l := &g.Links[i]
		shift := 0.0
		for s := l.FirstSegment; s <= l.Last(); s++ {
			seg := &g.Segments[s]
			length := seg.To - seg.From
			seg.From += shift
			shift += max(0, g.wave(sc, s)*step-length)
			seg.To += shift
		}
		if shift > 1e-9 {
			l.Length += shift
			g.note("link `%s` is lengthened by %.1f m to one cell, %.1f m", sc.Network.Links[i].Name, shift, l.Length)
		}
	}
}

// fill divides the segments into cells.
func (g *Grid) fill(sc *Scenario) {
	for i := range g.Links {
		l := &g.Links[i]
		l.First = g.Cells
		for s := l.FirstSegment; s <= l.Last(); s++ {
			seg := &g.Segments[s]
			length, reach := seg.To-seg.From, g.wave(sc, s)*g.Step
			seg.First = g.Cells
			seg.Cells = max(1, int(length/reach*(1+1e-12)))
			seg.Dx = length / float64(seg.Cells)
			g.Cells += seg.Cells
			g.MaxCourant = max(g.MaxCourant, min(1, reach/seg.Dx))
		}
		l.Cells = g.Cells - l.First
	}
}
