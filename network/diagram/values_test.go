package diagram_test

import (
	"math"
	"testing"

	"example.org/tailback/network/diagram"
)

const (
	kmh  = 1000.0 / 3600
	vehh = 1.0 / 3600
	vkm  = 1e-3
)

// digits is the rounding of a value given to nine digits.
const digits = 5e-9

// params builds parameters from km/h, veh/h, veh/km in the order free speed, capacity, critical density, jam density,
// wave speed, exponent.
func params(vf, q, kc, kj, w, n float64) diagram.Params {
	return diagram.Params{
		FreeSpeed: vf * kmh, Capacity: q * vehh, CriticalDensity: kc * vkm,
		JamDensity: kj * vkm, WaveSpeed: w * kmh, Exponent: n,
	}
}

func build(t testing.TB, shape string, p diagram.Params) diagram.Diagram {
	t.Helper()
	d, err := diagram.New(shape, p)
	if err != nil {
		t.Fatalf("%s: %v", shape, err)
	}
	return d
}

func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s: %.12g, want %.12g within %g", what, got, want, tolerance)
	}
}

type point struct{ k, q float64 } // veh/km, veh/h

type slope struct{ k, w float64 } // veh/km, km/h

// checks are the check values of the design notes on theory, section 1: computed there independently of this program
// in double precision from the published formulas (sources in each shape's file), given to nine digits.
var checks = []struct {
	name, shape string
	p           diagram.Params
	kc, q       float64 // veh/km, veh/h
	jam         float64 // wave speed in standing traffic, km/h; 0 for none
	points      []point
	slopes      []slope
}{
	{"greenshields", "greenshields", params(100, 0, 0, 120, 0, 0), 60, 3000, 100, []point{{30, 2250}, {90, 2250}}, []slope{{30, 50}}},
	{"greenberg", "greenberg", params(100, 0, 0, 120, 30, 0), 44.1455329, 1324.36599, 30, []point{{30, 1247.66493}, {4.2808792, 428.08792}}, []slope{{30, 11.5888308}}},
	{"greenberg at the corner", "greenberg", params(25, 0, 0, 120, 30, 0), 52.151785, 1303.79463, 30, nil, []slope{{20, 25}, {52.16, -5.0047269}}},
	{"underwood", "underwood", params(100, 0, 40, 0, 0, 0), 40, 1471.51776, 0, []point{{30, 1417.09966}, {120, 597.44482}}, []slope{{30, 11.8091638}, {80, -13.5335283}}},
	{"drake", "drake", params(100, 0, 40, 0, 0, 0), 40, 2426.12264, 0, []point{{30, 2264.51881}, {120, 133.307958}}, []slope{{30, 33.0242326}, {69.2820323, -44.626032}}},
	{"pipes-munjal 0.5", "pipes-munjal", params(100, 0, 0, 120, 0, 0.5), 53.3333333, 1777.77778, 50, []point{{30, 1500}}, nil},
	{"pipes-munjal 2", "pipes-munjal", params(100, 0, 0, 120, 0, 2), 69.2820323, 4618.80215, 200, []point{{30, 2812.5}}, nil},
	{"pipes-munjal 3", "pipes-munjal", params(100, 0, 0, 120, 0, 3), 75.595263, 5669.64472, 300, []point{{30, 2953.125}}, nil},
	{"newell-franklin", "newell-franklin", params(100, 0, 0, 120, 20, 0), 31.0780256, 1354.21088, 20, []point{{30, 1353.56509}, {60, 1087.61548}, {100, 392.105608}}, nil},
	{"del-castillo 1995", "del-castillo", params(100, 0, 0, 120, 20, 0), 25.8118592, 1699.94779, 20, []point{{30, 1681.50163}, {60, 1191.63692}}, nil},
	{"del-castillo 2", "del-castillo", params(100, 0, 0, 120, 20, 2), 30.5809015, 1543.77784, 20, []point{{10, 910.366477}, {60, 1176.69681}}, nil},
	{"del-castillo 5", "del-castillo", params(100, 0, 0, 120, 20, 5), 24.8775689, 1816.07289, 20, []point{{10, 996.16379}, {60, 1199.92321}}, nil},
	{"del-castillo 20", "del-castillo", params(100, 0, 0, 120, 20, 20), 21.3101606, 1954.59596, 20, nil, nil},
	{"triangular", "triangular", params(100, 0, 0, 120, 20, 0), 20, 2000, 20, []point{{60, 1200}}, []slope{{10, 100}, {60, -20}}},
	{"trapezoidal", "trapezoidal", params(100, 1800, 0, 120, 20, 0), 18, 1800, 20, []point{{18, 1800}, {30, 1800}, {31, 1780}}, []slope{{10, 100}, {25, 0}, {60, -20}}},
	{"smulders", "smulders", params(100, 0, 25, 120, 0, 0), 25, 1979.16667, 20.8333333, []point{{15, 1312.5}, {60, 1250}}, []slope{{25 - 1e-4, 58.3335}}},
	// the peak below the junction: kj/2, vf kj/4 (section 1, below the table)
	{"smulders above half", "smulders", params(100, 0, 80, 120, 0, 0), 60, 3000, 66.6666667, []point{{80, 8000.0 / 3}}, nil},
	{"quadratic-linear", "quadratic-linear", params(100, 2000, 25, 120, 0, 0), 25, 2000, 21.0526316, []point{{15, 1320}, {60, 1263.15789}}, []slope{{25 - 1e-4, 60.00016}}},
	// vb = 40 < vf/2: the peak is at 25*100/(2*60) = 20.8333333, with vf kc/2 (section 1, below the table)
	{"quadratic-linear below half", "quadratic-linear", params(100, 1000, 25, 120, 0, 0), 20.8333333, 1041.66667, 10.5263158, []point{{25, 1000}}, nil},
	{"van-aerde", "van-aerde", params(105, 2000, 25, 120, 0, 0), 25, 2000, 22.459893, []point{{15, 1517.75165}, {40, 1769.86564}, {60, 1340.03102}, {100, 448.779294}}, nil},
	// by hand: k1 = 2200/100, beyond it 20 (120 - k)
	{"inverse-lambda", "inverse-lambda", params(100, 2200, 0, 120, 20, 0), 22, 2200, 20, []point{{21, 2100}, {22, 2200}, {22.001, 1959.98}, {60, 1200}}, []slope{{10, 100}, {60, -20}}},
	// by hand: straight lines between the points
	{"piecewise", "piecewise", diagram.Params{Points: [][2]float64{{0, 0}, {15 * vkm, 1500 * vehh}, {25 * vkm, 2000 * vehh}, {60 * vkm, 1200 * vehh}, {120 * vkm, 0}}}, 25, 2000, 20, []point{{10, 1000}, {20, 1750}, {60, 1200}, {90, 600}}, []slope{{20, 50}, {40, -160.0 / 7}}},
}

func TestCheckValues(t *testing.T) {
	for _, c := range checks {
		t.Run(c.name, func(t *testing.T) {
			d := build(t, c.shape, c.p)
			near(t, "critical density", d.Critical(), c.kc*vkm, 4*digits) // some found there as a flat maximum
			near(t, "capacity", diagram.Capacity(d), c.q*vehh, digits)
			for _, p := range c.points {
				near(t, "flow", d.Flow(p.k*vkm), p.q*vehh, digits)
				near(t, "speed", diagram.Speed(d, p.k*vkm), p.q/p.k*kmh, digits)
			}
			for _, s := range c.slopes {
				// central difference with step h: truncation and rounding are both below 1e-6 of the free speed
				if got := derivative(d, s.k*vkm); math.Abs(got-s.w*kmh) > 1e-6*d.FreeSpeed() {
					t.Errorf("dq/dk at %v: %v km/h, want %v", s.k, got/kmh, s.w)
				}
			}
			if c.jam > 0 {
				h := 1e-7 * d.Jam()
				if got := d.Flow(d.Jam()-h) / h; math.Abs(got-c.jam*kmh) > 1e-4*c.jam*kmh { // one-sided: error of the order h
					t.Errorf("wave speed in standing traffic: %v km/h, want %v", got/kmh, c.jam)
				}
			}
			ends(t, d)
			sharp(t, d)
		})
	}
}

// sharp checks that some slope comes within 2 % of the largest wave speed, so that time steps are not shorter than
// they must be: steepest slopes are at 0, at the jam or at an inflection. The mean slope over the first of 4000 parts
// misses 1.6 % where v = vf (1 - sqrt(k/kj)), the most pointed of the table.
func sharp(t testing.TB, d diagram.Diagram) {
	t.Helper()
	end := min(d.Jam(), 10*d.Critical())
	const n = 4000
	steepest := 0.0
	for i := range n {
		k, next := end*float64(i)/n, end*float64(i+1)/n
		if k < d.Critical() && next > d.Critical() {
			continue // a corner, or the jump of inverse-lambda
		}
		steepest = max(steepest, math.Abs(d.Flow(next)-d.Flow(k))/(next-k))
	}
	near(t, "largest wave speed", d.MaxWaveSpeed(), steepest, 0.02)
}

func derivative(d diagram.Diagram, k float64) float64 {
	h := 1e-6 * k
	return (d.Flow(k+h) - d.Flow(k-h)) / (2 * h)
}

// ends checks what holds at both ends of every diagram.
func ends(t testing.TB, d diagram.Diagram) {
	t.Helper()
	for _, k := range []float64{0, -1, d.Jam(), 2 * d.Jam()} {
		if q := d.Flow(k); q != 0 {
			t.Errorf("flow at %v: %v, want 0", k, q)
		}
	}
	if v := diagram.Speed(d, 0); v != d.FreeSpeed() {
		t.Errorf("speed of the empty road: %v, want %v", v, d.FreeSpeed())
	}
	h := 1e-9 * d.Critical()
	near(t, "wave speed of the empty road", d.Flow(h)/h, d.FreeSpeed(), 1e-4)
	if !math.IsNaN(d.Flow(math.NaN())) {
		t.Errorf("flow at NaN: %v", d.Flow(math.NaN()))
	}
}

// The slope of the upper free branch of a capped Greenberg jumps from vf to vf - c at kj exp(-vf/c): -5 km/h for vf 25
// and c 30 (design notes on theory, 1a).
func TestGreenbergCorner(t *testing.T) {
	d := build(t, "greenberg", params(25, 0, 0, 120, 30, 0))
	k, h := 52.151785*vkm, 1e-5*vkm
	near(t, "right slope", (d.Flow(k+2*h)-d.Flow(k+h))/h, -5*kmh, 1e-4)
	near(t, "left slope", (d.Flow(k-h)-d.Flow(k-2*h))/h, 25*kmh, 1e-4)
}

// Published calibrations (design notes on theory, section 1): Lincoln Tunnel 17.2 ln(228/k) in mi/h and veh/mi, from
// memory, capacity 1442.676 veh/h at 83.8765 veh/mi computed there; Virginia Tech CEE 3604 exam 1 (2011), optimum 29
// veh/km at 60 km/h: jam 78.83017, capacity 1740.
func TestGreenbergPublished(t *testing.T) {
	const mile = 1.609344
	d := build(t, "greenberg", params(60*mile, 0, 0, 228/mile, 17.2*mile, 0))
	near(t, "tunnel capacity", diagram.Capacity(d), 1442.676*vehh, 1e-6)
	near(t, "tunnel critical density", d.Critical(), 83.8765/mile*vkm, 1e-6)
	d = build(t, "greenberg", params(100, 0, 29, 0, 60, 0))
	near(t, "exam jam density", d.Jam(), 78.83017*vkm, 1e-6)
	near(t, "exam capacity", diagram.Capacity(d), 1740*vehh, 1e-6)
	d = build(t, "greenberg", params(100, 1740, 0, 78.83017, 0, 0))
	near(t, "exam critical density", d.Critical(), 29*vkm, 1e-6)
	near(t, "exam capacity again", diagram.Capacity(d), 1740*vehh, 1e-6)
}

// What leaves a queue of an inverse-lambda road is the flow at which the branches meet: k2 = 20*120/120 = 20, 2000
// veh/h (by hand); the same example as in the table.
func TestInverseLambdaFill(t *testing.T) {
	d := build(t, "inverse-lambda", params(100, 2200, 0, 120, 20, 0))
	k := []float64{0, 10 * vkm, 22 * vkm, 23 * vkm, 60 * vkm, 120 * vkm, 130 * vkm}
	sending, receiving := make([]float64, len(k)), make([]float64, len(k))
	diagram.Fill(d, sending, receiving, k)
	for i, want := range [][2]float64{{0, 2200}, {1000, 2200}, {2200, 2200}, {2000, 1940}, {2000, 1200}, {2000, 0}, {2000, 0}} {
		if math.Abs(sending[i]/vehh-want[0]) > 1e-9 || math.Abs(receiving[i]/vehh-want[1]) > 1e-9 {
			t.Errorf("at %v: %v, %v, want %v", k[i]/vkm, sending[i]/vehh, receiving[i]/vehh, want)
		}
	}
}
