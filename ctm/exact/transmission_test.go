package exact_test

import (
	"testing"

	"example.org/tailback/ctm/exact"
)

func TestThreeDetectors(t *testing.T) {
	// Newell 1993. By hand: 2 km of two lanes, 3600 veh/h from t = 0, 3000 veh/h leave: first vehicle at the end at
	// .02 h, shock at -100/9 km/h: passes x = 1 at .11 h and x = 0 at .20 h.
	l := exact.LinkTransmission{
		Road: road, Length: 2,
		Up:   exact.Rate{{0, 3600}}.Until,
		Down: exact.Rate{{.02, 3000}}.Until,
	}
	for _, c := range []struct{ x, passes float64 }{{1, .11}, {0, .20}, {1.5, .065}} {
		if l.Queued(c.x, c.passes-1e-9) || !l.Queued(c.x, c.passes+1e-9) {
			t.Errorf("the tail does not pass x = %v at %v h", c.x, c.passes)
		}
	}
	// Free at x = 1 until .11 h: 3600 (t - .01). Then 3000 (t - .05 - .02) + 240.
	near(t, "N free", l.N(1, .1), 324, 1e-12)
	near(t, "N queued", l.N(1, .15), 480, 1e-12)
	// Flows and density in the queue: 3000 veh/h and 90 veh/km.
	near(t, "flow", (l.N(1, .16)-l.N(1, .15))/.01, 3000, 1e-9)
	near(t, "density", (l.N(1, .15)-l.N(1.1, .15))/.1, 90, 1e-9)

	// Lags L/v = 72 s and L/w = 360 s, storage 480 veh (Yperman 2007, formulas from memory), by hand.
	second := 1. / 3600
	near(t, "nothing to send before 72 s", l.Sending(62*second, 10*second), 0, 1e-9)
	near(t, "capacity bounds sending", l.Sending(.1, .01), 40, 1e-12)
	near(t, "capacity bounds receiving", l.Receiving(0, .01), 40, 1e-12)
	// From .20 h on the link takes what leaves: N_down(.21 - .1) + 480 - N_up(.2) = 270 + 480 - 720.
	near(t, "receiving behind the tail", l.Receiving(.2, .01), 30, 1e-9)
	// A count of 3600 (t+dt-.02) - 3000 (t-.02) at t = .02: 10 s of 3600 veh/h.
	near(t, "first to send", l.Sending(.02, 10*second), 10, 1e-9)
}
