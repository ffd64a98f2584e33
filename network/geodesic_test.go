package network

import (
	"math"
	"testing"
)

// The equator is a circle of the equatorial radius, so a degree of longitude on it is a pi/180; the meridian
// quadrant of WGS 84 is 10,001,965.729 m (NIMA TR8350.2, table 3.5, from memory). The test line of Rainsford (1955)
// and Vincenty (1975), Flinders Peak to Buninyong, is 54,972.271 m on GRS 80 (Geoscience Australia, Geodetic
// calculations, from memory), whose flattening differs from WGS 84's in the ninth digit: less than 0.1 mm here.
func TestGeodesic(t *testing.T) {
	dms := func(d, m, s float64) float64 { return d + m/60 + s/3600 }
	for _, c := range []struct {
		name        string
		p, q        [2]float64
		want, share float64
	}{
		{"a degree of the equator", [2]float64{0, 0}, [2]float64{1, 0}, 6378137 * math.Pi / 180, 1e-9},
		{"a meridian quadrant", [2]float64{17, 0}, [2]float64{17, 90}, 10001965.729, 1e-9},
		{
			"Flinders Peak to Buninyong",
			[2]float64{dms(144, 25, 29.52440), -dms(37, 57, 3.72030)},
			[2]float64{dms(143, 55, 35.38390), -dms(37, 39, 10.15610)},
			54972.271, 1e-7,
		},
		{"one point", [2]float64{-40, 12}, [2]float64{-40, 12}, 0, 0},
	} {
		for _, got := range []float64{Geodesic(c.p, c.q), Geodesic(c.q, c.p)} {
			if math.Abs(got-c.want) > c.share*c.want {
				t.Errorf("%s: %.4f m, want %.4f", c.name, got, c.want)
			}
		}
	}
	if d := Geodesic([2]float64{0, 0}, [2]float64{179.9, 0.1}); !math.IsNaN(d) {
		t.Errorf("nearly antipodal points: %v, want NaN", d)
	}
}

// Ten metres of ramp and forty kilometres of road: the error is below 1 part in 10,000 on both. The exact values are
// arcs of the equator and of its chord across it.
func TestLineLength(t *testing.T) {
	metre := 180 / (math.Pi * 6378137)
	for _, want := range []float64{10, 40000} {
		line := [][2]float64{{0, 0}, {want / 2 * metre, 0}, {want * metre, 0}}
		if got := LineLength(line); math.Abs(got-want) > 1e-6*want {
			t.Errorf("%v m: got %v", want, got)
		}
	}
	if LineLength([][2]float64{{1, 2}}) != 0 {
		t.Error("one position has a length")
	}
}
