package exact_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/ctm/exact"
	"example.org/tailback/network/diagram"
)

var (
	gs  = exact.Greenshields{V: 100, Kj: 120}      // km/h, veh/km
	tri = exact.Triangular{V: 100, W: 20, Kj: 120} // km/h, veh/km
)

func TestShapes(t *testing.T) {
	// Greenshields 1935 and the triangle of Newell 1993, closed forms by hand.
	near(t, "Greenshields critical", gs.Critical(), 60, 1e-12)
	near(t, "Greenshields capacity", gs.Flow(gs.Critical()), 3000, 1e-12)
	near(t, "Greenshields q(30)", gs.Flow(30), 2250, 1e-12)
	near(t, "Greenshields q(90)", gs.Flow(90), 2250, 1e-12)
	near(t, "triangle critical", tri.Critical(), 20, 1e-12)
	near(t, "triangle capacity", tri.Capacity(), 2000, 1e-12)
	near(t, "triangle q(60)", tri.Flow(60), 1200, 1e-12)
	for _, d := range []diagram.Diagram{gs, tri} {
		near(t, "free speed", d.FreeSpeed(), 100, 1e-12)
		near(t, "fastest wave", d.MaxWaveSpeed(), 100, 1e-12)
		near(t, "jam", d.Jam(), 120, 1e-12)
		near(t, "flow at jam", d.Flow(120), 0, 1e-12)
		near(t, "flow beyond jam", d.Flow(130), 0, 0)
		near(t, "flow below 0", d.Flow(-1), 0, 0)
	}
}

// opaque hides what a diagram can do in closed form.
type opaque struct{ diagram.Diagram }

func TestRiemannValues(t *testing.T) {
	// Rankine & Hugoniot and f'(k) = x/t by hand (Lighthill & Whitham 1955; LeVeque 2002, ch. 11).
	for _, c := range []struct {
		name              string
		d                 diagram.Diagram
		left, right       float64
		slowest, fastest  float64
		flux              float64
		speed, alongSpeed float64 // a ray and the density along it
	}{
		{"Greenshields shock", gs, 20, 90, 25. / 3, 25. / 3, 5000. / 3, 8, 20},
		{"Greenshields standing shock", gs, 20, 100, 0, 0, 5000. / 3, 1, 100},
		{"Greenshields fan", gs, 110, 10, -250. / 3, 250. / 3, 3000, 25, 45},
		{"Greenshields fan, middle", gs, 110, 10, -250. / 3, 250. / 3, 3000, 0, 60},
		{"triangle shock", tri, 10, 80, -20. / 7, -20. / 7, 800, -3, 10},
		{"triangle contacts", tri, 80, 10, -20, 100, 2000, 50, 20},
		{"triangle contact of free traffic", tri, 15, 5, 100, 100, 1500, 99, 15},
		{"triangle contact of a queue", tri, 100, 60, -20, -20, 1200, -21, 100},
		{"no jump", tri, 10, 10, 100, 100, 1000, 0, 10},
	} {
		t.Run(c.name, func(t *testing.T) {
			for _, d := range []diagram.Diagram{c.d, opaque{c.d}} {
				tol := 1e-12
				if d != c.d {
					tol = 1e-6 // by search
				}
				r := exact.Riemann{Diagram: d, Left: c.left, Right: c.right}
				slowest, fastest := r.Waves()
				near(t, "slowest", slowest, c.slowest, tol)
				near(t, "fastest", fastest, c.fastest, tol)
				near(t, "flux", r.Flux(), c.flux, 1e-12)
				near(t, "density", r.Density(c.speed), c.alongSpeed, tol)
				near(t, "before", r.Density(c.slowest-1), c.left, tol)
				near(t, "behind", r.Density(c.fastest+1), c.right, tol)
			}
		})
	}
}

func TestGreenLight(t *testing.T) {
	// Ketcheson, LeVeque & del Razo 2020, chapter on LWR traffic, f = rho (1 - rho): a queue let go is
	// rho = (1 - x/t)/2; a jam ahead of density rho_l makes a shock of speed -rho_l.
	unit := exact.Greenshields{V: 1, Kj: 1}
	green := exact.Riemann{Diagram: unit, Left: 1, Right: 0}
	for x := -.9; x < 1; x += .2 {
		near(t, "density", green.Density(x), (1-x)/2, 1e-12)
	}
	jam, _ := exact.Riemann{Diagram: unit, Left: .3, Right: 1}.Waves()
	near(t, "shock", jam, -.3, 1e-12)
}

func TestMeanOfFan(t *testing.T) {
	// The integral of k = (kj/2)(1 - x/(v t)) by hand: over [0, 1] at t = .03 it is 60 (1 - 1/6).
	r := exact.Riemann{Diagram: gs, Left: 110, Right: 10}
	near(t, "mean", r.Mean(0, 1, .03), 50, 1e-12)
	// The fan reaches from -2.5 to 2.5 and is odd about (0, 60).
	near(t, "mean", r.Mean(-4, 4, .03), 60, 1e-12)
	near(t, "mean at 0", r.Mean(-1, 3, 0), (110+3*10)/4., 1e-12)
	near(t, "mean at 0, right", r.Mean(1, 3, 0), 10, 1e-12)
	// A shock at 25/3 km/h is at .25 after .03 h.
	r = exact.Riemann{Diagram: gs, Left: 20, Right: 90}
	near(t, "mean with shock", r.Mean(0, 1, .03), .25*20+.75*90, 1e-12)
}

// TestMeanIsIntegral holds Mean against the midpoint sum of Density, and conservation across the road.
func TestMeanIsIntegral(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.SampledFrom([]diagram.Diagram{gs, tri, opaque{gs}}).Draw(t, "diagram")
		k := rapid.Float64Range(0, 120)
		r := exact.Riemann{Diagram: d, Left: k.Draw(t, "left"), Right: k.Draw(t, "right")}
		a := rapid.Float64Range(-5, 5).Draw(t, "a")
		b := a + rapid.Float64Range(.1, 3).Draw(t, "length")
		const n, at = 4000, .03
		sum := 0.0
		for i := range n {
			sum += r.Density((a + (b-a)*(float64(i)+.5)/n) / at)
		}
		if got := r.Mean(a, b, at); math.Abs(got-sum/n) > 120*2./n {
			t.Fatalf("mean %v, midpoint sum %v", got, sum/n)
		}
		// Nothing but Left comes in at -10 and nothing but Right goes out at 10.
		moved := at * (d.Flow(r.Left) - d.Flow(r.Right))
		want := 10*(r.Left+r.Right) + moved
		if got := 20 * r.Mean(-10, 10, at); math.Abs(got-want) > 1e-8 {
			t.Fatalf("vehicles %v, want %v", got, want)
		}
		// The flux is that of the state at x = 0 and, for any diagram with one peak, sending against receiving.
		sending, receiving := d.Flow(min(r.Left, d.Critical())), d.Flow(max(r.Right, d.Critical()))
		if got := r.Flux(); math.Abs(got-min(sending, receiving)) > 1e-8 {
			t.Fatalf("flux %v, want %v", got, min(sending, receiving))
		}
	})
}
