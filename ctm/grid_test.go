package ctm_test

import (
	"math"
	"strings"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
)

// grid makes the grid of a scenario with one entry on the first link.
func grid(t *testing.T, roads []road, h ctm.Horizon, cuts ...ctm.Cut) *ctm.Grid {
	t.Helper()
	d := &demand.Demand{Entries: []demand.Entry{{Link: 0, Mix: []float64{1}, Flow: demand.Constant(0.1)}}}
	sc := build(t, roads, d, h)
	sc.Cuts = cuts
	m, err := ctm.New(sc)
	if err != nil {
		t.Fatal(err)
	}
	return m.View().Grid()
}

// The Courant condition by hand: 90 km/h = 25 m/s and cells of 100 m allow 4 s, which divides 300 s. A street of
// 45 km/h then takes cells of 50 m.
func TestStepAndCells(t *testing.T) {
	fast, slow := triangular(t, 90, 18, 120), triangular(t, 45, 18, 120)
	g := grid(t, []road{{0, 1, 2, 1, fast, 0}, {1, 2, 1, 1, slow, 0}}, ctm.Horizon{End: 3600, Cell: 100})
	if g.Step != 4 || g.Steps != 900 || g.PerReport != 75 {
		t.Errorf("step %v s, %d steps, %d in a row; want 4, 900, 75", g.Step, g.Steps, g.PerReport)
	}
	if g.Links[0].Cells != 20 || g.Links[1].Cells != 20 || g.Cells != 40 {
		t.Errorf("cells %d and %d of %d, want 20 and 20 of 40", g.Links[0].Cells, g.Links[1].Cells, g.Cells)
	}
	if math.Abs(g.MaxCourant-1) > 1e-12 || len(g.Notes) != 0 {
		t.Errorf("Courant number %v, notes %q; want 1 and none", g.MaxCourant, g.Notes)
	}
}

// A step that does not divide the report interval is lowered until it does: 300 s / 86 = 3.488 s.
func TestStepDividesReport(t *testing.T) {
	d := triangular(t, 90, 18, 120)
	g := grid(t, []road{{0, 1, 2, 1, d, 0}}, ctm.Horizon{End: 3600, Step: 3.5})
	if math.Abs(g.Step-300.0/86) > 1e-12 || g.PerReport != 86 {
		t.Errorf("step %v, %d in a row", g.Step, g.PerReport)
	}
	if len(g.Notes) != 1 || !strings.Contains(g.Notes[0], "does not divide the report interval") {
		t.Errorf("notes %q", g.Notes)
	}
	g = grid(t, []road{{0, 1, 2, 1, d, 0}}, ctm.Horizon{End: 1000, Report: 300, Cell: 100}) // 100 s divides both
	if got := float64(g.Steps) * g.Step; math.Abs(got-1000) > 1e-9 {
		t.Errorf("%d steps of %v s are %v s, want 1000", g.Steps, g.Step, got)
	}
}

// A link of 10 m at 25 m/s forces a step of 0.4 s, ten times as many; stretched it is 100 m long.
func TestShortLink(t *testing.T) {
	d := triangular(t, 90, 18, 120)
	roads := []road{{0, 1, 2, 1, d, 0}, {1, 2, 0.01, 1, d, 0}, {2, 3, 40, 1, d, 0}}
	g := grid(t, roads, ctm.Horizon{End: 3600, Cell: 100})
	if math.Abs(g.Step-0.4) > 1e-12 || g.Links[1].Cells != 1 || g.Links[2].Cells != 4000 {
		t.Errorf("step %v, cells %d and %d", g.Step, g.Links[1].Cells, g.Links[2].Cells)
	}
	for _, part := range []string{"`L1`", "10.0 m", "0.4 s instead of 4 s", "10.0 times", "stretch_short_links"} {
		if len(g.Notes) != 1 || !strings.Contains(g.Notes[0], part) {
			t.Errorf("note %q lacks %q", g.Notes, part)
		}
	}
	g = grid(t, roads, ctm.Horizon{End: 3600, Cell: 100, Stretch: true})
	if g.Step != 4 || g.Links[1].Cells != 1 || math.Abs(g.Links[1].Length-100) > 1e-9 {
		t.Errorf("stretched: step %v, %d cells, %v m", g.Step, g.Links[1].Cells, g.Links[1].Length)
	}
	if len(g.Notes) != 1 || !strings.Contains(g.Notes[0], "`L1` is lengthened by 90.0 m") {
		t.Errorf("note %q", g.Notes)
	}
}

// A measure's ends cut the link into segments; one that lies within half a cell of the link's end moves there.
func TestCuts(t *testing.T) {
	d := triangular(t, 90, 18, 120)
	g := grid(t, []road{{0, 1, 2, 3, d, 0}}, ctm.Horizon{End: 3600, Cell: 100}, ctm.Cut{Link: 0, At: 1200}, ctm.Cut{Link: 0, At: 500}, ctm.Cut{Link: 0, At: 1970}, ctm.Cut{Link: 0, At: 500})
	if len(g.Segments) != 3 {
		t.Fatalf("%d segments, want 3", len(g.Segments))
	}
	for i, want := range [][2]float64{{0, 500}, {500, 1200}, {1200, 2000}} {
		if s := g.Segments[i]; s.From != want[0] || s.To != want[1] || s.Dx != 100 {
			t.Errorf("segment %d from %v to %v in cells of %v, want %v in cells of 100", i, s.From, s.To, s.Dx, want)
		}
	}
	if len(g.Notes) != 1 || !strings.Contains(g.Notes[0], "1970 m") {
		t.Errorf("notes %q", g.Notes)
	}
	if g.CellAt(0, 0) != 0 || g.CellAt(0, 1999) != 19 || g.CellAt(0, 550) != 5 {
		t.Errorf("cells at 0, 1999 and 550 m: %d %d %d", g.CellAt(0, 0), g.CellAt(0, 1999), g.CellAt(0, 550))
	}
}

func TestPeriodAndReportMustFit(t *testing.T) {
	d := triangular(t, 90, 18, 120)
	dem := &demand.Demand{Entries: []demand.Entry{hourly(0, 100)}}
	for _, h := range []ctm.Horizon{{End: 200, Report: 300}, {End: 0}, {Start: 10, End: 5}} {
		if _, err := ctm.New(build(t, []road{{0, 1, 2, 1, d, 0}}, dem, h)); err == nil {
			t.Errorf("period %v to %v with rows of %v s: no error", h.Start, h.End, h.Report)
		}
	}
}
