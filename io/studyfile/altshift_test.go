package studyfile

import (
	"errors"
	"math"
	"strings"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/ctm/measure"
	"example.org/tailback/ctm/study"
	"example.org/tailback/demand"
)

const movable = `
[[alternative]]
name = "night"
[[alternative.lane_closure]]
links = ["E5"]
lanes = 1
start = "20:00"
end = "29:00"
[[alternative.ramp_closure]]
link = "R4"
start = "20:00"
end = "28:30"
divert = [ { to = "R2", share = 0.6 } ]
`

// The closure begins at the window's start and ends with it; the ramp, shut until half an hour before the end, stays so;
// its traffic (500 veh/h) moves with it.
func TestShift(t *testing.T) {
	base := corridor(t)
	list, faulty, _ := readAlternatives(t, base, movable)
	if len(faulty) > 0 {
		t.Fatal(faulty)
	}
	own, err := list[0].Window()
	if err != nil || own != (study.Window{Start: 20 * 3600, End: 29 * 3600}) {
		t.Fatalf("%v, %v", own, err)
	}
	sc, err := list[0].Shift(own, study.Window{Start: 22 * 3600, End: 24 * 3600})
	if err != nil {
		t.Fatal(err)
	}
	for _, m := range sc.Measures {
		switch c := m.(type) {
		case *measure.LaneClosure:
			if c.Start != 22*3600 || c.End != 24*3600 {
				t.Errorf("closed %v to %v", c.Start, c.End)
			}
		case *measure.RampClosure:
			if c.Start != 22*3600 || c.End != 23.5*3600 {
				t.Errorf("ramp shut %v to %v", c.Start, c.End)
			}
		}
	}
	if len(sc.Measures) != 2 || len(sc.Cuts) != len(base.Cuts) {
		t.Errorf("%d measures, %d cuts; want 2 and the base's %d", len(sc.Measures), len(sc.Cuts), len(base.Cuts))
	}
	if got := vehicles(sc, 22, 23.5); math.Abs(got-(3000+400+500*0.6)*1.5) > 1e-6 {
		t.Errorf("%v vehicles while the ramp is shut", got)
	}
	if got := vehicles(sc, 20, 22); math.Abs(got-3900*2) > 1e-6 {
		t.Errorf("%v vehicles before", got)
	}
	if got := vehicles(list[0].Scenario, 20, 22); math.Abs(got-3700*2) > 1e-6 {
		t.Errorf("%v vehicles in the alternative itself, which must stay as it is", got)
	}
	if _, err := list[0].Shift(own, study.Window{Start: 22 * 3600, End: 22*3600 + 1200}); !errors.Is(err, study.ErrShort) {
		t.Errorf("20 min leave the ramp no time: %v", err)
	}
}

// vehicles counts those who want to enter between two hours.
func vehicles(sc *ctm.Scenario, from, to float64) float64 {
	return sc.Demand.Vehicles(demand.Window{From: from * 3600, To: to * 3600})
}

func TestShiftRefuses(t *testing.T) {
	for text, want := range map[string]string{
		"[[alternative]]\nname = \"a\"\n[[alternative.speed_limit]]\nlinks = [\"E1\"]\nlimit = \"60 km/h\"\nstart = \"20:00\"\n": "its speed_limit holds all the time",
		"[[alternative]]\nname = \"a\"\n": "no measure with a start and an end",
		movable + "[[alternative.diagram_change]]\ndiagram = \"ramp\"\ncapacity = \"1700 veh/h/lane\"\n": "its diagram_change holds all the time",
	} {
		list, _, _ := readAlternatives(t, corridor(t), text)
		if _, err := list[0].Window(); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%v, want %q", err, want)
		}
	}
}
