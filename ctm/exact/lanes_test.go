package exact_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/ctm/exact"
	"example.org/tailback/network/diagram"
)

func TestSpeedLimitChange(t *testing.T) {
	// Inputs and kinds of waves: Ketcheson, LeVeque & del Razo 2020, "LWR with varying speed limit", f = v q (1 - q).
	// States: the roots of v q (1 - q) = f0 and slopes v (1 - 2q), an independent calculation.
	for _, c := range []struct {
		ql, qr, vl, vr float64
		flux           float64
		before         float64
		left           [2]float64 // slowest and fastest wave upstream
		after          float64
		right          [2]float64
	}{
		{.7, .7, 1, .8, .168, .786356421, [2]float64{-.486356421, -.486356421}, .7, [2]float64{-.32, -.32}},
		{.7, .7, 1, 1.1, .231, .637840488, [2]float64{-.4, -.275680975}, .7, [2]float64{-.44, -.44}},
		{.7, .6, 1, 2, .25, .5, [2]float64{-.4, 0}, .146446609, [2]float64{.507106781, .507106781}},
		{.9, .2, 1, .8, .2, .723606798, [2]float64{-.8, -.447213595}, .5, [2]float64{0, .48}},
	} {
		left := exact.Side{Diagram: exact.Greenshields{V: c.vl, Kj: 1}, Lanes: 1, Density: c.ql}
		right := exact.Side{Diagram: exact.Greenshields{V: c.vr, Kj: 1}, Lanes: 1, Density: c.qr}
		got := exact.RiemannLanes(left, right)
		near(t, "flux", got.Flux, c.flux, 1e-8)
		near(t, "before", got.Upstream.Right, c.before, 1e-8)
		near(t, "after", got.Downstream.Left, c.after, 1e-8)
		a, b := got.Upstream.Waves()
		near(t, "slowest upstream", a, c.left[0], 1e-8)
		near(t, "fastest upstream", b, c.left[1], 1e-8)
		a, b = got.Downstream.Waves()
		near(t, "slowest downstream", a, c.right[0], 1e-8)
		near(t, "fastest downstream", b, c.right[1], 1e-8)
	}
}

func TestLaneDrop(t *testing.T) {
	// By hand, triangle of 2000 veh/h a lane: three lanes at 18 veh/km send 5400 veh/h, two take 4000. Upstream turns
	// to 4000/3 veh/h a lane, 120 - 4000/60 = 160/3 veh/km: shock (4000/3 - 1800)/(160/3 - 18) = -700/53 km/h.
	c := exact.RiemannLanes(exact.Side{Diagram: tri, Lanes: 3, Density: 18}, exact.Side{Diagram: tri, Lanes: 2, Density: 5})
	near(t, "flux", c.Flux, 4000, 1e-12)
	near(t, "before", c.Upstream.Right, 160./3, 1e-12)
	shock, _ := c.Upstream.Waves()
	near(t, "shock", shock, -700./53, 1e-12)
	near(t, "after", c.Downstream.Left, 20, 1e-12)
	_, fastest := c.Downstream.Waves()
	near(t, "contact", fastest, 100, 1e-12)
	near(t, "upstream of the shock", c.Density(-14), 18, 1e-12)
	near(t, "in the queue", c.Density(-13), 160./3, 1e-12)
	near(t, "just after", c.Density(0), 20, 1e-12)
	near(t, "behind the front", c.Density(99), 20, 1e-12)
	near(t, "before the front", c.Density(101), 5, 1e-12)
	// At .1 h the queue is 70/53 km long and the front at 10 km.
	near(t, "queue", c.Vehicles(-70./53, 0, .1), 3*160./3*70/53, 1e-12)
	near(t, "both sides", c.Vehicles(-1, 11, .1), 3*160./3+2*(10*20+5), 1e-12)

	// Greenshields, two lanes at 40 (q = 8000/3 a lane) into one of capacity 3000: 1500 a lane, congested root
	// 60 (1 + sqrt(1/2)), shock (1500 - 8000/3)/(k - 40).
	c = exact.RiemannLanes(exact.Side{Diagram: gs, Lanes: 2, Density: 40}, exact.Side{Diagram: gs, Lanes: 1, Density: 0})
	k := 60 * (1 + math.Sqrt(.5))
	near(t, "flux", c.Flux, 3000, 1e-12)
	near(t, "before", c.Upstream.Right, k, 1e-12)
	shock, _ = c.Upstream.Waves()
	near(t, "shock", shock, (1500-8000./3)/(k-40), 1e-12)
	near(t, "after", c.Downstream.Left, 60, 1e-12)
}

// TestCrossing checks on random jumps that both sides carry the flux, that no wave crosses x = 0, that vehicles are
// conserved, and that equal sides give the answer of one road.
func TestCrossing(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		shape := rapid.SampledFrom([]diagram.Diagram{gs, tri, opaque{tri}, exact.Greenshields{V: 80, Kj: 150}})
		k, lanes := rapid.Float64Range(0, 120), rapid.SampledFrom([]float64{1, 2, 3, 5})
		left := exact.Side{Diagram: shape.Draw(t, "left"), Lanes: lanes.Draw(t, "lanes"), Density: k.Draw(t, "kl")}
		right := exact.Side{Diagram: shape.Draw(t, "right"), Lanes: lanes.Draw(t, "lanes"), Density: k.Draw(t, "kr")}
		c := exact.RiemannLanes(left, right)
		fl, fr := left.Lanes*left.Diagram.Flow(c.Upstream.Right), right.Lanes*right.Diagram.Flow(c.Downstream.Left)
		if math.Abs(fl-c.Flux) > 1e-7 || math.Abs(fr-c.Flux) > 1e-7 {
			t.Fatalf("flux %v, just before %v, just after %v", c.Flux, fl, fr)
		}
		if _, fastest := c.Upstream.Waves(); c.Upstream.Left != c.Upstream.Right && fastest > .1 {
			t.Fatalf("upstream wave of speed %v", fastest)
		}
		if slowest, _ := c.Downstream.Waves(); c.Downstream.Left != c.Downstream.Right && slowest < -.1 {
			t.Fatalf("downstream wave of speed %v", slowest)
		}
		const at = .02
		got := c.Vehicles(-3, 3, at)
		want := 3*(left.Lanes*left.Density+right.Lanes*right.Density) +
			at*(left.Lanes*left.Diagram.Flow(left.Density)-right.Lanes*right.Diagram.Flow(right.Density))
		if math.Abs(got-want) > 1e-6 {
			t.Fatalf("vehicles %v, want %v", got, want)
		}
		same := right
		same.Diagram, same.Lanes = left.Diagram, left.Lanes
		c = exact.RiemannLanes(left, same)
		one := exact.Riemann{Diagram: left.Diagram, Left: left.Density, Right: same.Density}
		a, b := c.Vehicles(-1, 2, at), 3*left.Lanes*one.Mean(-1, 2, at)
		if math.Abs(a-b) > 1e-6 {
			t.Fatalf("without a change of lanes %v vehicles, one road %v", a, b)
		}
	})
}
