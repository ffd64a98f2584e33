package unit_test

import (
	"math"
	"strings"
	"testing"

	"example.org/tailback/network/unit"
	"pgregory.net/rapid"
)

// Expected values follow from the definitions of the units: the international mile is 1609.344 m and the
// international foot 0.3048 m (international yard and pound agreement of 1959), an hour 3600 s.
func TestParse(t *testing.T) {
	for _, c := range []struct {
		kind unit.Kind
		text string
		want float64
	}{
		{unit.Speed, "36 km/h", 10},
		{unit.Speed, "100 km/h", 100000.0 / 3600},
		{unit.Speed, "65 mph", 65 * 0.44704},
		{unit.Speed, "12.5 m/s", 12.5},
		{unit.Speed, "65mph", 65 * 0.44704},
		{unit.Speed, "  65   mph ", 65 * 0.44704},
		{unit.Speed, "0 km/h", 0},
		{unit.Length, "100 m", 100},
		{unit.Length, "1.1 km", 1100},
		{unit.Length, "0.75 mi", 1207.008},
		{unit.Length, "12 ft", 3.6576},
		{unit.Length, "1e3 m", 1000},
		{unit.Length, "+5 m", 5},
		{unit.Flow, "3600 veh/h", 1},
		{unit.Flow, "30 veh/min", 0.5},
		{unit.Flow, "0.5 veh/s", 0.5},
		{unit.FlowPerLane, "1800 veh/h/lane", 0.5},
		{unit.DensityPerLane, "130 veh/km/lane", 0.13},
		{unit.DensityPerLane, "1609.344 veh/mi/lane", 1},
		{unit.DensityPerLane, "0.12 veh/m/lane", 0.12},
		{unit.Duration, "90 s", 90},
		{unit.Duration, "5 min", 300},
		{unit.Duration, "1.5 h", 5400},
		{unit.Share, "12 %", 0.12},
		{unit.Share, "12%", 0.12},
		{unit.Share, "0.12", 0.12},
		{unit.Share, "150 %", 1.5}, // the upper bound is the caller's matter
	} {
		got, err := unit.Parse(c.kind, c.text)
		if err != nil {
			t.Errorf("%v %q: %v", c.kind, c.text, err)
		} else if math.Abs(got-c.want) > 1e-15*c.want {
			t.Errorf("%v %q: %v, want %v", c.kind, c.text, got, c.want)
		}
	}
}

func TestParseErrors(t *testing.T) {
	const (
		speeds    = "use km/h, mph or m/s"
		lengths   = "use m, km, mi or ft"
		durations = "use s, min or h"
	)
	for _, c := range []struct {
		kind unit.Kind
		text string
		want string
	}{
		{unit.Speed, "65 kph", "`65 kph` is no speed: " + speeds},
		{unit.Speed, "65 km", "`65 km` is no speed: " + speeds},
		{unit.Speed, "65", "`65` has no unit: " + speeds},
		{unit.Speed, "", "`` is no speed: " + speeds},
		{unit.Speed, "fast", "`fast` is no speed: " + speeds},
		{unit.Speed, "mph", "`mph` is no speed: " + speeds},
		{unit.Speed, "65 MPH", "`65 MPH` is no speed: " + speeds},
		{unit.Speed, "-65 mph", "`-65 mph` is negative: it must be 0 or more"},
		{unit.Speed, "NaN mph", "`NaN mph` is not finite: give a number with km/h, mph or m/s"},
		{unit.Speed, "Inf", "`Inf` is not finite: give a number with km/h, mph or m/s"},
		{unit.Speed, "+inf km/h", "`+inf km/h` is not finite: give a number with km/h, mph or m/s"},
		{unit.Speed, "1e999 m/s", "`1e999 m/s` is not finite: give a number with km/h, mph or m/s"},
		{unit.Length, "1e308 km", "`1e308 km` is not finite: give a smaller number"},
		{unit.Length, "5 s", "`5 s` is no length: " + lengths},
		{unit.Length, "5 m m", "`5 m m` is no length: " + lengths},
		{unit.Length, "1,000 m", "`1,000 m` is no length: " + lengths},
		{unit.Length, "1_000 m", "`1_000 m` is no length: " + lengths},
		{unit.Length, "0x10 m", "`0x10 m` is no length: " + lengths},
		{unit.Length, "1.2.3 m", "`1.2.3 m` is no length: " + lengths},
		{unit.Flow, "900 veh/h/lane", "`900 veh/h/lane` is no flow: use veh/h, veh/min or veh/s"},
		{unit.FlowPerLane, "2000 veh/h", "`2000 veh/h` is no flow per lane: use veh/h/lane"},
		{unit.DensityPerLane, "130 veh/km", "`130 veh/km` is no density per lane: use veh/km/lane, veh/mi/lane or veh/m/lane"},
		{unit.Duration, "5", "`5` has no unit: " + durations},
		{unit.Duration, "5 minutes", "`5 minutes` is no duration: " + durations},
		{unit.Share, "a tenth", "`a tenth` is no share: use a fraction such as 0.12, or %"},
		{unit.Share, "12 m", "`12 m` is no share: use a fraction such as 0.12, or %"},
		{unit.Share, "-1 %", "`-1 %` is negative: it must be 0 or more"},
	} {
		got, err := unit.Parse(c.kind, c.text)
		switch {
		case err == nil:
			t.Errorf("%v %q: %v, want an error", c.kind, c.text, got)
		case err.Error() != c.want:
			t.Errorf("%v %q: error %q, want %q", c.kind, c.text, err, c.want)
		}
	}
}

// Default units as the file formats name them.
func TestFromNumber(t *testing.T) {
	for _, c := range []struct {
		kind    unit.Kind
		x, want float64
	}{
		{unit.Speed, 36, 10},
		{unit.Length, 250, 250},
		{unit.Flow, 1800, 0.5},
		{unit.FlowPerLane, 1800, 0.5},
		{unit.DensityPerLane, 120, 0.12},
		{unit.Share, 0.3, 0.3},
	} {
		got, err := unit.FromNumber(c.kind, c.x)
		if err != nil || math.Abs(got-c.want) > 1e-15 {
			t.Errorf("%v %v: %v, %v, want %v", c.kind, c.x, got, err, c.want)
		}
	}
	for _, c := range []struct {
		kind unit.Kind
		x    float64
		want string
	}{
		{unit.Duration, 5, "`5` has no unit: use s, min or h"},
		{unit.Speed, -1, "`-1` is negative: it must be 0 or more"},
		{unit.Speed, math.NaN(), "`NaN` is not finite: give a smaller number"},
		{unit.Length, math.Inf(1), "`+Inf` is not finite: give a smaller number"},
	} {
		if _, err := unit.FromNumber(c.kind, c.x); err == nil || err.Error() != c.want {
			t.Errorf("%v %v: error %v, want %q", c.kind, c.x, err, c.want)
		}
	}
}

func TestParseClock(t *testing.T) {
	for text, want := range map[string]float64{
		"00:00": 0, "05:00": 18000, "5:00": 18000, "07:20": 26400, "07:20:30": 26430, "24:00": 86400, "29:00": 104400, "100:00:01": 360001,
		" 06:00 ": 21600,
	} {
		got, err := unit.ParseClock(text)
		if err != nil || got != want {
			t.Errorf("%q: %v, %v, want %v", text, got, err, want)
		}
	}
	for text, want := range map[string]string{
		"":            "use HH:MM or HH:MM:SS",
		"5":           "use HH:MM or HH:MM:SS",
		"05.00":       "use HH:MM or HH:MM:SS",
		"05:0":        "use HH:MM or HH:MM:SS",
		"05:000":      "use HH:MM or HH:MM:SS",
		"05:00:00:00": "use HH:MM or HH:MM:SS",
		"-05:00":      "use HH:MM or HH:MM:SS",
		"+5:00":       "use HH:MM or HH:MM:SS",
		"05:00 pm":    "use HH:MM or HH:MM:SS",
		"1000:00":     "use HH:MM or HH:MM:SS",
		"05:60":       "minutes and seconds run to 59",
		"05:00:99":    "minutes and seconds run to 59",
	} {
		if got, err := unit.ParseClock(text); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %v, %v, want an error with %q", text, got, err, want)
		}
	}
}

func TestClock(t *testing.T) {
	for _, c := range []struct {
		seconds float64
		want    string
	}{
		{0, "00:00:00"},
		{59.4, "00:00:59"},
		{59.5, "00:01:00"},
		{3599.7, "01:00:00"},
		{26430, "07:20:30"},
		{104400, "29:00:00"},
		{-60, "-00:01:00"},
		{-0.2, "00:00:00"},
		{math.Inf(1), "--:--:--"},
		{math.NaN(), "--:--:--"},
	} {
		if got := unit.Clock(c.seconds); got != c.want {
			t.Errorf("%v: %q, want %q", c.seconds, got, c.want)
		}
	}
}

func TestSystem(t *testing.T) {
	for _, c := range []struct{ got, want string }{
		{unit.Metric.Length(3218.688), "3.2 km"},
		{unit.US.Length(3218.688), "2.0 mi"},
		{unit.Metric.Length(850), "850 m"},
		{unit.US.Length(850), "2,790 ft"}, // 2788.7
		{unit.Metric.Length(999.6), "1.0 km"},
		{unit.Metric.Length(0), "0 m"},
		{unit.Metric.Length(-0.2), "0 m"},
		{unit.Metric.Length(-850), "-850 m"},
		{unit.US.Length(30.48), "100 ft"},
		{unit.Metric.Length(1234567), "1,234.6 km"},
		{unit.Metric.Speed(100 / 3.6), "100 km/h"},
		{unit.Metric.Speed(5), "18.0 km/h"},
		{unit.Metric.Speed(-5), "-18.0 km/h"},
		{unit.Metric.Speed(19.96 / 3.6), "20 km/h"},
		{unit.US.Speed(65 * 0.44704), "65 mph"},
		{unit.Metric.Density(0.024), "24.0 veh/km"},
		{unit.US.Density(0.024), "38.6 veh/mi"}, // 24 * 1.609344 = 38.62
		{unit.Metric.Flow(1.5), "5,400 veh/h"},
		{unit.US.Flow(1.5), "5,400 veh/h"},
		{unit.US.Flow(math.Inf(1)), "+Inf veh/h"},
	} {
		if c.got != c.want {
			t.Errorf("%q, want %q", c.got, c.want)
		}
	}
	for _, s := range []unit.System{unit.Metric, unit.US} {
		if got, err := unit.ParseSystem(s.String()); err != nil || got != s {
			t.Errorf("%v: %v, %v", s, got, err)
		}
	}
	if _, err := unit.ParseSystem("imperial"); err == nil || err.Error() != "`imperial` is no unit system: use metric or us" {
		t.Errorf("imperial: %v", err)
	}
}

// Every whole second survives being written and read.
func TestClockRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 999*3600).Draw(t, "seconds")
		got, err := unit.ParseClock(unit.Clock(float64(n)))
		if err != nil || got != float64(n) {
			t.Fatalf("%v, %v", got, err)
		}
	})
}

// Whatever the text, a value is finite and not negative, and an error has a message that quotes the text.
func FuzzParse(f *testing.F) {
	for _, s := range []string{"65 mph", "2000 veh/h/lane", "12 %", "0.75 mi", "5 min", "1e400 m", "-1 s", "NaN", "é m", "1e 5 m"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		for kind := unit.Speed; kind <= unit.Share; kind++ {
			x, err := unit.Parse(kind, s)
			if err == nil && !(x >= 0 && x <= math.MaxFloat64) {
				t.Errorf("%v: %v", kind, x)
			}
			if err != nil && !strings.Contains(err.Error(), "`"+s+"`") {
				t.Errorf("%v: %v", kind, err)
			}
		}
	})
}

// Whatever the text, an accepted time is finite, and what Clock makes of it reads as the same time.
func FuzzParseClock(f *testing.F) {
	for _, s := range []string{"05:00", "29:00:01", "5:0", "-1:00", "::", "99:59:59"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		x, err := unit.ParseClock(s)
		if err != nil {
			return
		}
		if y, err := unit.ParseClock(unit.Clock(x)); err != nil || y != x {
			t.Errorf("%q: %v, then %v, %v", s, x, y, err)
		}
	})
}
