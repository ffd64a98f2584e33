package ctm_test

import (
	"math"
	"testing"

	"example.org/tailback/ctm"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// A merge and a diverge with Greenshields roads (vf 100, kj 120) against another integrator: the semi-discrete
// equations dk/dt = (inflow - outflow)/dx solved by the adaptive Runge-Kutta pair of Dormand and Prince in
// scipy 1.10.1 (solve_ivp, RK45, rtol 1e-7) on cells of 40 m and 20 m. The values are vehicles on each link,
// extrapolated to dx = 0 at first order (twice the finer less the coarser). Roads (km, lanes): A 3, 2 and
// B 1, 1 merge into C 4, 2, which divides into D 2, 2 (80 %) and E 1, 1 (20 %). 4800 and 1800 veh/h enter for
// 0.3 h, then 1500 and 600.
func TestAgainstAdaptiveIntegrator(t *testing.T) {
	d := greenshields(t, 100, 120)
	roads := []road{{0, 2, 3, 2, d, 0}, {1, 2, 1, 1, d, 0}, {2, 3, 4, 2, d, 0}, {3, 4, 2, 2, d, 0}, {3, 5, 1, 1, d, 0}}
	steps := func(link int, early, late float64) demand.Entry {
		return demand.Entry{
			Link: network.LinkID(link), Mix: []float64{1},
			Flow: demand.Steps(0, 0.1*hour, []float64{early * vehh, early * vehh, early * vehh, late * vehh, late * vehh}),
		}
	}
	dem := &demand.Demand{
		Entries:  []demand.Entry{steps(0, 4800, 1500), steps(1, 1800, 600)},
		Turnings: []demand.Turning{turn(3, 2, map[int]float64{3: 0.8, 4: 0.2})},
	}
	m, err := ctm.New(build(t, roads, dem, ctm.Horizon{End: 0.5 * hour, Report: 360, Cell: 20}))
	if err != nil {
		t.Fatal(err)
	}
	want := [5][5]float64{
		{222.0582, 22.0527, 311.8970, 50.3906, 7.0145},
		{282.0582, 22.0527, 415.0220, 114.4769, 12.3513},
		{342.0582, 22.0527, 440.9110, 126.1313, 13.0990},
		{48.2309, 6.3344, 371.6790, 129.4440, 13.3099},
		{48.2309, 6.3344, 93.0116, 46.4544, 4.3583},
	}
	for row := range want {
		for range m.View().Grid().PerReport {
			m.Step()
		}
		for link, w := range want[row] {
			got := m.View().Inside(network.LinkID(link), 0)
			if math.Abs(got-w) > 0.5+0.005*w {
				t.Errorf("%.1f h, link %c: %.2f vehicles, the other integrator has %.2f", 0.1*float64(row+1), 'A'+link, got, w)
			}
		}
	}
}
