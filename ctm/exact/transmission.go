package exact

// LinkTransmission is a link with a triangular diagram, known by the cumulative counts at its two ends.
type LinkTransmission struct {
	Road     Triangular // all lanes
	Length   float64    // L, m
	Up, Down func(t float64) float64
}

// N is the cumulative count at x metres from the upstream end at time t, by the three-detector formula of Newell, "A
// simplified theory of kinematic waves in highway traffic, part I", Transportation Research B 27 (1993) 281-287:
//
//	N(x, t) = min{ N_up(t - x/v), N_down(t - (L-x)/w) + kj (L-x) }
//
// Both counts start from 0 on an empty link.
func (l LinkTransmission) N(x, t float64) float64 {
	free, queued := l.branches(x, t)
	return min(free, queued)
}

// Queued reports whether the downstream end governs at x and t: x is in a queue.
func (l LinkTransmission) Queued(x, t float64) bool {
	free, queued := l.branches(x, t)
	return queued < free
}

func (l LinkTransmission) branches(x, t float64) (free, queued float64) {
	rest := l.Length - x
	return l.Up(t - x/l.Road.V), l.Down(t-rest/l.Road.W) + l.Road.Kj*rest
}

// Sending is what can leave within dt seconds from t on, in vehicles (Yperman 2007, The Link Transmission Model):
//
//	min{ N_up(t + dt - L/v) - N_down(t), Q dt }
//
// It looks no further ahead than t while dt <= L/v.
func (l LinkTransmission) Sending(t, dt float64) float64 {
	return min(l.Up(t+dt-l.Length/l.Road.V)-l.Down(t), l.Road.Capacity()*dt)
}

// Receiving is what can enter within dt seconds from t on, in vehicles (Yperman 2007):
//
//	min{ N_down(t + dt - L/w) + kj L - N_up(t), Q dt }
func (l LinkTransmission) Receiving(t, dt float64) float64 {
	return min(l.Down(t+dt-l.Length/l.Road.W)+l.Road.Kj*l.Length-l.Up(t), l.Road.Capacity()*dt)
}
