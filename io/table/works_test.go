package table

import (
	"errors"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/ctm/observe"
	"example.org/tailback/ctm/study"
	"example.org/tailback/demand"
	"example.org/tailback/network"
	"example.org/tailback/network/diagram"
)

// worksRun is 1 h of a road of 3 km, 2 lanes (2000 veh/h each), one of which is closed from 2 km on with 1400 veh/h left;
// flow in veh/h arrives. Its chainage falls from 20 km.
func worksRun(t *testing.T, flow float64) *study.Result {
	t.Helper()
	d, err := diagram.New("triangular", diagram.Params{FreeSpeed: 100 / 3.6, WaveSpeed: 20 / 3.6, JamDensity: 0.12})
	if err != nil {
		t.Fatal(err)
	}
	n, err := network.New([]network.Node{{Name: "A"}, {Name: "B"}}, []network.Link{{Name: "L", From: 0, To: 1, Length: 3000, Lanes: 2, Diagram: d}})
	if err != nil {
		t.Fatal(err)
	}
	closure := &measure.LaneClosure{Stretch: []measure.Span{{Link: 0, From: 2000, To: math.Inf(1)}}, Lanes: 1, End: 3600, Capacity: 1400.0 / 3600}
	sc := &ctm.Scenario{
		Name: "works", Network: n, Horizon: ctm.Horizon{End: 3600, Cell: 100, Report: 300},
		Demand: &demand.Demand{
			Classes: []demand.Class{{Name: "vehicle", PCE: 1}},
			Entries: []demand.Entry{{Link: 0, Mix: []float64{1}, Flow: demand.Constant(flow / 3600)}},
		},
		Measures: []ctm.Measure{closure}, Cuts: closure.Cuts(n, 100),
		Corridors: []network.Corridor{{Name: "down, hill", Links: []network.LinkID{0}, StartAt: 20000, Descending: true, Chained: true}},
	}
	r, err := study.Run(t.Context(), sc, &study.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// lines reads a written file.
func lines(t *testing.T, dir, name string) []string {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(dir, name))
	if err != nil {
		t.Fatal(err)
	}
	return strings.Split(strings.TrimSpace(string(data)), "\n")
}

func TestVerdicts(t *testing.T) {
	dir := t.TempDir()
	nan := math.NaN()
	err := WriteVerdicts(dir, []string{"base", "night"}, [][]study.Verdict{{
		{Limit: &study.Limit{Name: "a, b", Kind: "queue"}, Value: 1250.26, Allowed: 1207.008, Margin: -43.252, Unit: "m", FirstBroken: 26400},
	}, {
		{Limit: &study.Limit{Name: "c", Kind: "delay"}, Value: 90, Allowed: 900, Margin: 810, Unit: "s", Kept: true, FirstBroken: nan},
		{Limit: &study.Limit{Name: "d", Kind: "flow"}, Value: 0.375, Allowed: 0.5, Margin: 0.125, Unit: "veh/s/lane", Kept: true, FirstBroken: nan},
		{Limit: &study.Limit{Name: "e", Kind: "lanes"}, Value: nan, Allowed: 2, Margin: nan, Unit: "lanes", Kept: true, FirstBroken: nan},
	}})
	if err != nil {
		t.Fatal(err)
	}
	want := []string{
		"alternative,limit,kind,value,allowed,margin,unit,kept,first_broken",
		`base,"a, b",queue,1250.3,1207,-43.3,m,no,07:20:00`,
		"night,c,delay,1.5,15,13.5,min,yes,",
		"night,d,flow,1350,1800,450,veh/h/lane,yes,",
		"night,e,lanes,,2,,lanes,yes,",
	}
	if got := lines(t, dir, "verdicts.csv"); strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
}

func TestHoursFiles(t *testing.T) {
	dir := t.TempDir()
	n, err := network.New([]network.Node{{Name: "A"}, {Name: "B"}}, nil)
	if err != nil {
		t.Fatal(err)
	}
	nan := math.NaN()
	rows := []study.WindowResult{
		{Window: study.Window{Start: 72000, End: 79200}, State: study.Kept, Queue: 123.44, QueueAt: 73800, Delay: 90, Added: 5400, Reaches: []network.NodeID{0, 1}, Gone: 79500},
		{Window: study.Window{Start: 72000, End: 90000}, State: study.Pruned, Queue: nan, QueueAt: nan, Delay: nan, Added: nan, Limit: "short"},
		{Window: study.Window{Start: 72000, End: 97200}, State: study.NotComputed, Queue: nan, QueueAt: nan, Delay: nan, Added: nan},
	}
	if err := WriteHours(dir, []Day{{"friday", n, rows}}); err != nil {
		t.Fatal(err)
	}
	want := []string{
		"day,start,end,max_queue_m,max_queue_time,max_delay_min,added_delay_veh_hours,reaches,limit_broken,permitted",
		"friday,20:00:00,22:00:00,123.4,20:30:00,1.5,1.5,A B,,yes",
		"friday,20:00:00,25:00:00,,,,,,short,no",
		"friday,20:00:00,27:00:00,,,,,,,not computed",
	}
	if got := lines(t, dir, "hours.csv"); strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("got\n%s\nwant\n%s", strings.Join(got, "\n"), strings.Join(want, "\n"))
	}
	late := []study.Late{{WindowResult: rows[0], Late: 900, Further: 1800, Money: 54097.2}}
	if err := WriteOverrun(dir, late, n, &study.Cost{Currency: "USD"}); err != nil {
		t.Fatal(err)
	}
	if got := lines(t, dir, "overrun.csv"); got[0] != "reopened,late_min,added_delay_veh_hours,further_delay_veh_hours,max_queue_m,max_queue_time,max_delay_min,gone,reaches,cost_USD" ||
		got[1] != "22:00:00,15,1.5,0.5,123.4,20:30:00,1.5,22:05:00,A B,54097.2" {
		t.Errorf("%q", got)
	}
	if err := WriteOverrun(dir, late, n, nil); err != nil {
		t.Fatal(err)
	}
	if got := lines(t, dir, "overrun.csv"); strings.Contains(got[0], "cost") || strings.Contains(got[1], "54097") {
		t.Errorf("without [cost] there is no money: %q", got)
	}
}

// Upstream is where the chainage falls on a road whose chainage rises, and the other way round.
func TestRoundUpstream(t *testing.T) {
	for _, c := range []struct {
		start, x, to float64
		descending   bool
		want         float64
	}{
		{10000, 2349, 100, false, 12300},
		{10000, 2300, 100, false, 12300},
		{20000, 7651, 100, true, 12400},
		{20000, 7600, 100, true, 12400},
		{0, 1609.344 * 5.3, 160.9344, false, 1609.344 * 5.3},
	} {
		if got := RoundUpstream(c.start, c.x, c.to, c.descending); math.Abs(got-c.want) > 1e-6 {
			t.Errorf("%+v: %v", c, got)
		}
	}
}

// 2000 veh/h arrive (20 veh/km) before 1400 veh/h: the queue holds 2 (120 - 700/20) = 170 veh/km, 150 more, and grows at
// 600/150 = 4 km/h. It leaves the 2 km upstream of the works, and the map, after half an hour.
func TestWarning(t *testing.T) {
	dir := t.TempDir()
	r := worksRun(t, 2000)
	if err := writeWarning(dir, r); err != nil {
		t.Fatal(err)
	}
	rows := lines(t, dir, "warning.csv")
	if len(rows) != 5 {
		t.Fatalf("%d lines, want a header and four quarters:\n%s", len(rows), strings.Join(rows, "\n"))
	}
	// After 15 min (less the 72 s in which the first vehicles come 2 km) the tail is 1 km - 80 m before the works, 1080 m
	// from the start: chainage 20,000 - 1,080 = 18,920, give or take a cell.
	f := strings.Split(rows[1], `"`)
	if !strings.HasPrefix(rows[1], `00:00:00,00:15:00,"down, hill",18`) && !strings.HasPrefix(rows[1], `00:00:00,00:15:00,"down, hill",19`) {
		t.Errorf("%q", rows[1])
	}
	if !strings.Contains(f[2], ",L,") || !strings.Contains(rows[1], "density above critical; rounded upstream; distance from the closure's upstream end") {
		t.Errorf("%q", rows[1])
	}
	for _, row := range rows[3:] {
		if !strings.Contains(row, `"down, hill",,,,,,,,,,,,,the queue left the map`) {
			t.Errorf("the queue is off the map, but the row says %q", row)
		}
	}
	if err := writeWarning(t.TempDir(), worksRun(t, 1000)); err != nil {
		t.Error(err)
	}
	r.Scenario.Measures = nil
	base := t.TempDir()
	if err := writeWarning(base, r); err != nil {
		t.Error(err)
	}
	if _, err := os.Stat(filepath.Join(base, "warning.csv")); err == nil {
		t.Error("a run without measures has a warning.csv")
	}
}

func TestAttributionFile(t *testing.T) {
	dir := t.TempDir()
	r := worksRun(t, 1000)
	a := study.Attribution{What: study.MovedTo, Place: observe.Place{Link: 0, At: 3000}, To: observe.Place{Link: 0, At: 2000}, Base: 3600, Alt: 9000, Onset: 1800, Clearance: math.NaN(), TakesOver: true}
	if err := WriteAttribution(dir, r, []study.Attribution{a}); err != nil {
		t.Fatal(err)
	}
	want := "link,at_m,what,to_link,to_at_m,base_delay_veh_hours,delay_veh_hours,change_veh_hours,onset,clearance,takes_over\nL,3000,moved,L,2000,1,2.5,1.5,00:30:00,,yes"
	if got := strings.Join(lines(t, dir, "attribution.csv"), "\n"); got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

// A failure leaves what was there.
func TestPlace(t *testing.T) {
	dir := t.TempDir()
	old := filepath.Join(dir, "a.csv")
	if err := os.WriteFile(old, []byte("old"), 0o666); err != nil {
		t.Fatal(err)
	}
	wrong := errors.New("disk full")
	if err := Place(dir, func(tmp string) error {
		os.WriteFile(filepath.Join(tmp, "a.csv"), []byte("half"), 0o666)
		return wrong
	}); !errors.Is(err, wrong) {
		t.Errorf("%v", err)
	}
	if got := lines(t, dir, "a.csv"); got[0] != "old" {
		t.Errorf("%q after a failure", got)
	}
	if err := Place(dir, func(tmp string) error { return os.WriteFile(filepath.Join(tmp, "a.csv"), []byte("new"), 0o666) }); err != nil {
		t.Fatal(err)
	}
	if got := lines(t, dir, "a.csv"); got[0] != "new" {
		t.Errorf("%q after a success", got)
	}
	files, _ := os.ReadDir(dir)
	if len(files) != 1 {
		t.Errorf("%d files, want 1: nothing temporary stays", len(files))
	}
}
