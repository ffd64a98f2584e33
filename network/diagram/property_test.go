package diagram_test

import (
	"math"
	"testing"

	"example.org/tailback/network/diagram"
	"pgregory.net/rapid"
)

// drawn draws a shape with random parameters of roads, all of which must build. jumps is true for the one shape whose
// flow is not continuous.
func drawn(t *rapid.T) (d diagram.Diagram, jumps bool) {
	number := func(name string, lo, hi float64) float64 { return rapid.Float64Range(lo, hi).Draw(t, name) }
	vf, kj, w := number("free speed", 20, 140), number("jam density", 80, 220), number("wave speed", 5, 40)
	kc := kj * number("critical share", 0.05, 0.45)
	top := vf * w * kj / (vf + w)
	shape := rapid.SampledFrom(diagram.Shapes()).Draw(t, "shape").Name
	var p diagram.Params
	switch shape {
	case "triangular", "newell-franklin", "greenberg":
		p = params(vf, 0, 0, kj, w, 0)
	case "trapezoidal":
		p = params(vf, top*number("share of the tip", 0.2, 1), 0, kj, w, 0)
	case "greenshields":
		p = params(vf, 0, 0, kj, 0, 0)
	case "underwood", "drake":
		p = params(vf, 0, kc, 0, 0, 0)
	case "pipes-munjal":
		p = params(vf, 0, 0, kj, 0, number("exponent", 0.1, 5))
	case "smulders":
		p = params(vf, 0, kj*number("junction share", 0.05, 0.95), kj, 0, 0)
	case "quadratic-linear":
		p = params(vf, kc*vf*number("speed share", 0.1, 1), kc, kj, 0, 0)
	case "inverse-lambda":
		p = params(vf, top*number("above the branches", 1, 1.4), 0, kj, w, 0)
		if p.Capacity >= 0.99*vf*kj*vehh {
			p.Capacity = top * vehh
		}
	case "del-castillo":
		p = params(vf, 0, 0, kj, w, 0)
		if rapid.Bool().Draw(t, "2012") {
			p.Exponent = number("exponent", 0.3, 50)
		}
	case "van-aerde":
		// jam_density above the least that keeps c3 positive (see the shape's file)
		y := number("speed share", 0.5, 0.95)
		m := (2*y - 1) / ((1 - y) * (1 - y)) // times vf
		least := kc * (m + 1/(1-y)) / (m + 1)
		p = params(vf, y*vf*kc, kc, least*number("above the least jam density", 1.05, 3), 0, 0)
	case "piecewise":
		p.Points = randomPoints(t, vf, kj)
	default:
		t.Fatalf("no random parameters for %s", shape)
	}
	d, err := diagram.New(shape, p)
	if err != nil {
		t.Fatalf("%s %+v: %v", shape, p, err)
	}
	return d, shape == "inverse-lambda"
}

// randomPoints draws a unimodal broken line whose speed does not rise, concave or not.
func randomPoints(t *rapid.T, vf, kj float64) [][2]float64 {
	list := [][2]float64{{0, 0}}
	peak := rapid.IntRange(1, 3).Draw(t, "peak")
	n := peak + rapid.IntRange(1, 3).Draw(t, "falling")
	for i := 1; i < n; i++ {
		k := kj * vkm * float64(i) / float64(n)
		before := list[i-1]
		v := vf * kmh
		if i > 1 {
			v = before[1] / before[0]
		}
		share := rapid.Float64Range(0.1, 1).Draw(t, "share")
		lo, hi := before[1], v*k // rising
		if i > peak {
			lo, hi = 0, min(before[1], v*k)
		}
		list = append(list, [2]float64{k, lo + share*(hi-lo)})
	}
	return append(list, [2]float64{kj * vkm, 0})
}

// limited draws limits that may or may not bind.
func limited(t *rapid.T, d diagram.Diagram) diagram.Diagram {
	speed := d.FreeSpeed() * rapid.Float64Range(0.05, 1.2).Draw(t, "speed limit share")
	flow := diagram.Capacity(d) * rapid.Float64Range(0.05, 1.2).Draw(t, "capacity share")
	switch rapid.IntRange(0, 3).Draw(t, "limits") {
	case 0:
		speed = math.Inf(1)
	case 1:
		flow = math.Inf(1)
	}
	return diagram.Limit(d, speed, flow)
}

// samples are densities from 0 to jam, or to ten times the critical density.
func samples(d diagram.Diagram) []float64 {
	const n = 400
	end := d.Jam()
	if math.IsInf(end, 1) {
		end = 10 * d.Critical()
	}
	k := make([]float64, 0, n+3)
	for i := range n + 1 {
		k = append(k, end*float64(i)/n)
	}
	return append(k, d.Critical(), end*1.01)
}

// rounding bounds the error of a flow: some ten operations at 1.1e-16 each, and functions that lose a few digits near
// the jam, relative to the capacity.
const rounding = 1e-12

// Every diagram, limited or not, of any parameters: its fixed points, its peak, its speed and its slopes.
func TestShapeProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d, jumps := drawn(t)
		shapely(t, d, jumps)
		shapely(t, limited(t, d), jumps)
	})
}

func shapely(t *rapid.T, d diagram.Diagram, jumps bool) {
	k := samples(d)
	top, peak := diagram.Capacity(d), d.Critical()
	if top <= 0 || peak <= 0 || peak >= d.Jam() {
		t.Fatalf("capacity %v at %v, jam %v", top, peak, d.Jam())
	}
	if q := d.Flow(0); q != 0 {
		t.Errorf("flow at 0: %v", q)
	}
	if q := d.Flow(d.Jam()); q != 0 {
		t.Errorf("flow at jam: %v", q)
	}
	if q := d.Flow(peak * (1 - 1e-5)); q >= top && q*(1-1e-5) > top*(1-1e-9) {
		t.Errorf("flow is %v already below the critical density, %v there", q, top)
	}
	for i, x := range k {
		q := d.Flow(x)
		if q < -rounding*top || q > top*(1+rounding) {
			t.Errorf("flow at %v: %v, capacity %v", x, q, top)
		}
		if x > 0 && q > d.FreeSpeed()*x*(1+rounding) {
			t.Errorf("speed at %v: %v above free speed %v", x, q/x, d.FreeSpeed())
		}
		if i == 0 || x <= k[i-1] {
			continue
		}
		dq, dk := q-d.Flow(k[i-1]), x-k[i-1]
		if math.Abs(dq) > d.MaxWaveSpeed()*dk+rounding*top && !(jumps && dq < 0) {
			t.Errorf("slope %v between %v and %v, largest wave speed %v", dq/dk, k[i-1], x, d.MaxWaveSpeed())
		}
		if x <= peak && dq < -rounding*top || k[i-1] >= peak && dq > rounding*top {
			t.Errorf("flow changes by %v from %v to %v: peak at %v", dq, k[i-1], x, peak)
		}
	}
}

// plain hides a diagram's own Fill, so that the definition is used.
type plain struct{ diagram.Diagram }

// Fill is the definition sending = f(min(k, kc)), receiving = f(max(k, kc)), but for the sending of inverse-lambda;
// sending does not fall but there, receiving does not rise.
func TestFillProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d, jumps := drawn(t)
		filled(t, d, jumps)
		filled(t, limited(t, d), jumps)
	})
}

func filled(t *rapid.T, d diagram.Diagram, jumps bool) {
	k := samples(d)
	n := len(k)
	sending, receiving, s, r := make([]float64, n), make([]float64, n), make([]float64, n), make([]float64, n)
	diagram.Fill(d, sending, receiving, k)
	diagram.Fill(plain{d}, s, r, k)
	top := diagram.Capacity(d)
	for i := range k {
		if math.Abs(receiving[i]-r[i]) > rounding*top || !jumps && math.Abs(sending[i]-s[i]) > rounding*top {
			t.Errorf("at %v: %v, %v, want %v, %v (critical %v)", k[i], sending[i], receiving[i], s[i], r[i], d.Critical())
		}
		if sending[i] < 0 || receiving[i] < 0 || sending[i] > top*(1+rounding) || receiving[i] > top*(1+rounding) {
			t.Errorf("at %v: %v, %v, capacity %v", k[i], sending[i], receiving[i], top)
		}
		if min(sending[i], receiving[i]) > d.Flow(k[i])+rounding*top && !jumps {
			t.Errorf("at %v: a road of one density flows at %v, not %v", k[i], min(sending[i], receiving[i]), d.Flow(k[i]))
		}
		if i > 0 && k[i] > k[i-1] && (receiving[i] > receiving[i-1]+rounding*top || !jumps && sending[i] < sending[i-1]-rounding*top) {
			t.Errorf("from %v to %v: sending %v to %v, receiving %v to %v", k[i-1], k[i], sending[i-1], sending[i], receiving[i-1], receiving[i])
		}
		if k[i] > d.Jam() && receiving[i] != 0 {
			t.Errorf("beyond jam: receiving %v", receiving[i])
		}
	}
}

// The values of Fill do not depend on how the cells are cut into runs, and nothing is allocated.
func TestFillRuns(t *testing.T) {
	for _, c := range checks {
		d := build(t, c.shape, c.p)
		for _, d := range []diagram.Diagram{d, diagram.Limit(d, 0.7*d.FreeSpeed(), 0.8*diagram.Capacity(d))} {
			k := samples(d)
			whole, parts := [2][]float64{}, [2][]float64{}
			for j := range 2 {
				whole[j], parts[j] = make([]float64, len(k)), make([]float64, len(k))
			}
			if n := testing.AllocsPerRun(10, func() { diagram.Fill(d, whole[0], whole[1], k) }); n != 0 {
				t.Errorf("%s: Fill allocates %v times", c.name, n)
			}
			for i := 0; i < len(k); i += 7 {
				end := min(i+7, len(k))
				diagram.Fill(d, parts[0][i:end], parts[1][i:end], k[i:end])
			}
			for j := range 2 {
				for i := range k {
					if whole[j][i] != parts[j][i] {
						t.Errorf("%s at %v: %v, %v", c.name, k[i], whole[j][i], parts[j][i])
					}
				}
			}
		}
	}
}
