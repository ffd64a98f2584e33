package demand

import (
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"
)

func close(a, b float64) bool { return math.Abs(a-b) <= 1e-9*(1+math.Abs(b)) }

// Vehicles by hand: 600 veh/h for an hour, then 1200: half of each around 1 h is 300 + 600 in an hour.
func TestSteps(t *testing.T) {
	p := Steps(0, 3600, []float64{600.0 / 3600, 1200.0 / 3600})
	for _, c := range []struct{ from, to, want float64 }{
		{0, 3600, 600}, {1800, 5400, 900}, {3600, 7200, 1200}, {-3600, 0, 0}, {7200, 9000, 0}, {-1800, 9000, 1800}, {900, 900, 0},
	} {
		if got := p.Vehicles(c.from, c.to); !close(got, c.want) {
			t.Errorf("%v to %v: %v vehicles, want %v", c.from, c.to, got, c.want)
		}
	}
	if p.Start() != 0 || p.End() != 7200 {
		t.Errorf("given from %v to %v", p.Start(), p.End())
	}
	double := p.Scaled(2)
	if got := double.Vehicles(0, 7200); !close(got, 3600) {
		t.Errorf("scaled: %v, want 3600", got)
	}
	if flow, until := p.Level(3700); !close(flow, 1200.0/3600) || until != 7200 {
		t.Errorf("level %v until %v", flow, until)
	}
}

func TestConstant(t *testing.T) {
	p := Constant(0.5)
	if got := p.Vehicles(-10, 10); got != 10 {
		t.Errorf("%v vehicles, want 10", got)
	}
	if !math.IsInf(p.End(), 1) || !math.IsInf(p.Start(), -1) {
		t.Error("a constant flow has no beginning and no end")
	}
	var none Profile
	if none.Vehicles(0, 100) != 0 {
		t.Error("the zero value is no flow")
	}
}

// Straight lines between mid-points keep every interval's total, are never negative, and are continuous: within an
// interval the flow of adjacent short spans changes little.
func TestRamped(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		values := rapid.SliceOfN(rapid.Float64Range(0, 2), 1, 12).Draw(rt, "values")
		p, err := Ramped(100, 900, values)
		if errors.Is(err, ErrRamp) {
			return
		}
		for i, q := range values {
			from := 100 + 900*float64(i)
			if got := p.Vehicles(from, from+900); math.Abs(got-900*q) > 1e-6 {
				rt.Fatalf("interval %d: %v vehicles, want %v", i, got, 900*q)
			}
		}
		for x := 100.0; x < p.End()-10; x += 10 {
			if got := p.Vehicles(x, x+10); got < -1e-9 {
				rt.Fatalf("%v vehicles from %v", got, x)
			}
		}
	})
}

// By hand: means 0, 1, 0 need the mid-points m of 7/8 a + 1/8 b = 0, a/8 + 3/4 b + c/8 = 1, so a = -b/7 < 0.
func TestRampedRefusesNegativeFlow(t *testing.T) {
	if _, err := Ramped(0, 900, []float64{0, 1, 0}); !errors.Is(err, ErrRamp) {
		t.Errorf("got %v, want ErrRamp", err)
	}
	p, err := Ramped(0, 900, []float64{1, 1, 1}) // level stays level
	if err != nil || !close(p.Vehicles(450, 460), 10) {
		t.Errorf("level flow: %v, %v", p.Vehicles(450, 460), err)
	}
}

func TestRowsOfTurning(t *testing.T) {
	turn := Turning{Start: 3600, Every: 1800, Fractions: [][]float64{{1, 0}, {0.5, 0.5}, {0, 1}}}
	for _, c := range []struct {
		at   float64
		want int
	}{{0, 0}, {3600, 0}, {5399, 0}, {5400, 1}, {7200, 2}, {1e6, 2}} {
		if got := turn.Row(c.at); got != c.want {
			t.Errorf("at %v s: row %d, want %d", c.at, got, c.want)
		}
	}
}

func TestLookupPrefersTheClass(t *testing.T) {
	d := Demand{
		Classes:  []Class{{"car", 1}, {"truck", 2}},
		Turnings: []Turning{{From: 3, Class: AllClasses}, {From: 3, Class: 1}, {From: 4, Class: 1}},
	}
	turns := d.Turns()
	if turns.Lookup(3, 0) != &d.Turnings[0] || turns.Lookup(3, 1) != &d.Turnings[1] {
		t.Error("one class wins over all classes")
	}
	if turns.Lookup(4, 0) != nil {
		t.Error("fractions of trucks are none of cars")
	}
	if got := d.PCE([]float64{0.9, 0.1}); !close(got, 1.1) {
		t.Errorf("equivalent of the mix %v, want 1.1", got)
	}
}
