package diagram_test

import (
	"math"
	"testing"

	"example.org/tailback/network/diagram"
)

var inf = math.Inf(1)

// Limits by hand on the check diagrams: the peak is where speed*k meets the congested branch, or the end of speed*k or
// of the curve at the capacity.
func TestLimit(t *testing.T) {
	greenshields := params(100, 0, 0, 120, 0, 0)
	for _, c := range []struct {
		name, shape string
		p           diagram.Params
		speed, flow float64 // km/h, veh/h
		kc, q       float64 // veh/km, veh/h
		free, wave  float64 // km/h
	}{
		// design notes on theory, section 7, variable speed limit: u w kj/(u + w)
		{"limit 80", "triangular", params(100, 0, 0, 120, 20, 0), 80, inf, 24, 1920, 80, 80},
		{"limit 60", "triangular", params(100, 0, 0, 120, 20, 0), 60, inf, 30, 1800, 60, 60},
		{"limit 60 and 1500", "triangular", params(100, 0, 0, 120, 20, 0), 60, 1500, 25, 1500, 60, 60},
		{"limit 60 and 1900", "triangular", params(100, 0, 0, 120, 20, 0), 60, 1900, 30, 1800, 60, 60},
		{"capacity 1500", "triangular", params(100, 0, 0, 120, 20, 0), inf, 1500, 15, 1500, 100, 100},
		{"limit 10", "triangular", params(100, 0, 0, 120, 20, 0), 10, inf, 80, 800, 10, 20},
		{"trapezoid", "trapezoidal", params(100, 1800, 0, 120, 20, 0), 80, inf, 22.5, 1800, 80, 80},
		// v = 100 (1 - k/120) = 60 at k = 48, below the peak at 60: the peak stays
		{"curve under 60", "greenshields", greenshields, 60, inf, 60, 3000, 60, 100},
		// = 40 at k = 72, q = 2880
		{"curve under 40", "greenshields", greenshields, 40, inf, 72, 2880, 40, 100},
		// 100 k (1 - k/120) = 2250 first at k = 30
		{"curve under 2250", "greenshields", greenshields, inf, 2250, 30, 2250, 100, 100},
		// 40 k = 2000 at k = 50, where the curve has 2916.7
		{"curve under both", "greenshields", greenshields, 40, 2000, 50, 2000, 40, 100},
		// exp(-k/40) = 1/4 at k = 40 ln 4: 25 km/h there
		{"no jam", "underwood", params(100, 0, 40, 0, 0, 0), 25, inf, 40 * math.Log(4), 1000 * math.Log(4), 25, 25},
		// the limit 99 cuts the free branch but not the jump at 22: 99*22; from 80 on, the congested branch: 80*20*120/100
		{"jump", "inverse-lambda", params(100, 2200, 0, 120, 20, 0), 99, inf, 22, 2178, 99, 99},
		{"jump cut off", "inverse-lambda", params(100, 2200, 0, 120, 20, 0), 80, inf, 24, 1920, 80, 80},
	} {
		t.Run(c.name, func(t *testing.T) {
			base := build(t, c.shape, c.p)
			d := diagram.Limit(base, c.speed*kmh, c.flow*vehh)
			near(t, "critical density", d.Critical(), c.kc*vkm, 1e-12)
			near(t, "capacity", diagram.Capacity(d), c.q*vehh, 1e-12)
			near(t, "free speed", d.FreeSpeed(), c.free*kmh, 1e-12)
			near(t, "largest wave speed", d.MaxWaveSpeed(), c.wave*kmh, 1e-12)
			if d.Jam() != base.Jam() {
				t.Errorf("jam density %v, want %v", d.Jam(), base.Jam())
			}
			ends(t, d)
			for _, k := range samples(base) {
				want := min(base.Flow(k), c.flow*vehh)
				if k > 0 {
					want = min(want, c.speed*kmh*k)
				}
				if math.Abs(d.Flow(k)-max(0, want)) > 1e-15 {
					t.Errorf("flow at %v: %v, want %v", k, d.Flow(k), want)
				}
			}
		})
	}
}

// An inverse-lambda road under a capacity between what leaves a queue (2000) and its tip (2200): the queue still
// discharges 2000; under one below it, that.
func TestLimitedJumpDischarges(t *testing.T) {
	base := build(t, "inverse-lambda", params(100, 2200, 0, 120, 20, 0))
	for _, c := range []struct{ limit, free, queue float64 }{{2100, 2100, 2000}, {1500, 1500, 1500}} {
		d := diagram.Limit(base, inf, c.limit*vehh)
		var sending, receiving [2]float64
		diagram.Fill(d, sending[:], receiving[:], []float64{22 * vkm, 60 * vkm})
		near(t, "sending before the jump", sending[0], c.free*vehh, 1e-12)
		near(t, "sending from a queue", sending[1], c.queue*vehh, 1e-12)
		near(t, "receiving beyond the jump", receiving[1], 1200*vehh, 1e-12)
	}
}

// Triangles and trapezoids stay linear under limits, and no other shape is.
func TestAsLinear(t *testing.T) {
	for _, c := range checks {
		d := build(t, c.shape, c.p)
		want := c.shape == "triangular" || c.shape == "trapezoidal"
		for _, d := range []diagram.Diagram{d, diagram.Limit(d, 0.6*d.FreeSpeed(), inf), diagram.Limit(d, inf, 0.5*diagram.Capacity(d))} {
			v, q, w, kj, ok := diagram.AsLinear(d)
			if ok != want {
				t.Errorf("%s: linear %v, want %v", c.name, ok, want)
			}
			if !ok {
				continue
			}
			k := samples(d)
			sending, receiving := make([]float64, len(k)), make([]float64, len(k))
			diagram.Fill(d, sending, receiving, k)
			for i, x := range k {
				if sending[i] != min(v*x, q) || receiving[i] != max(0, min(q, w*(kj-x))) {
					t.Errorf("%s at %v: %v, %v", c.name, x, sending[i], receiving[i])
				}
			}
		}
	}
}

// A limit that changes nothing gives the same diagram back; limits on limits are one limit; a closed lane carries
// nothing and does not divide by 0.
func TestLimitAgain(t *testing.T) {
	for _, c := range checks {
		d := build(t, c.shape, c.p)
		if got := diagram.Limit(d, inf, inf); got != d {
			t.Errorf("%s: no limit gives %v, want %v", c.name, got, d)
		}
		if got := diagram.Limit(d, d.FreeSpeed(), diagram.Capacity(d)); got != d {
			t.Errorf("%s: a limit that does not bind gives %v, want %v", c.name, got, d)
		}
		v, q := 0.5*d.FreeSpeed(), 0.7*diagram.Capacity(d)
		twice, once := diagram.Limit(diagram.Limit(d, v, inf), inf, q), diagram.Limit(d, v, q)
		for _, k := range samples(d) {
			if twice.Flow(k) != once.Flow(k) {
				t.Errorf("%s at %v: limited twice %v, once %v", c.name, k, twice.Flow(k), once.Flow(k))
			}
		}
		for _, shut := range []diagram.Diagram{diagram.Limit(d, 0, inf), diagram.Limit(d, inf, 0), diagram.Limit(d, 0, 0)} {
			k := samples(d)
			sending, receiving := make([]float64, len(k)), make([]float64, len(k))
			diagram.Fill(shut, sending, receiving, k)
			for i := range k {
				if sending[i] != 0 || receiving[i] != 0 || shut.Flow(k[i]) != 0 {
					t.Errorf("%s at %v: a closed lane has %v, %v, %v", c.name, k[i], sending[i], receiving[i], shut.Flow(k[i]))
				}
			}
			if shut.Critical() != 0 || diagram.Capacity(shut) != 0 {
				t.Errorf("%s: a closed lane has capacity %v at %v", c.name, diagram.Capacity(shut), shut.Critical())
			}
		}
	}
}

func TestLimitPanics(t *testing.T) {
	d := build(t, "triangular", params(100, 0, 0, 120, 20, 0))
	for _, limit := range [][2]float64{{-1, inf}, {inf, -1}, {math.NaN(), inf}, {inf, math.NaN()}} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("limit %v: no panic", limit)
				}
			}()
			diagram.Limit(d, limit[0], limit[1])
		}()
	}
}
