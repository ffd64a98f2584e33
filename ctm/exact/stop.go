package exact

// Stop is a queue that builds up behind a stop line, or anything that blocks the road, and is let go: three states
// of traffic and the shocks between them (Lighthill & Whitham 1955, part II; May, Traffic Flow Fundamentals, 1990,
// ch. 7). The states need not lie on one diagram.
type Stop struct {
	Arriving, Stopped, Leaving State
	Time                       float64 // how long the road is blocked, s
}

// AtRelease is the length of the queue in metres when it is let go.
func (s Stop) AtRelease() float64 { return -Shock(s.Arriving, s.Stopped) * s.Time }

// Meets is the time in seconds from the release until the starting wave reaches the tail.
func (s Stop) Meets() float64 {
	tail, start := -Shock(s.Arriving, s.Stopped), -Shock(s.Stopped, s.Leaving)
	return s.AtRelease() / (start - tail)
}

// Longest is how far in metres the queue reaches, the place where the starting wave meets the tail.
func (s Stop) Longest() float64 { return -Shock(s.Stopped, s.Leaving) * s.Meets() }

// Dissipates is the time in seconds from the release until the last delayed vehicle passes the stop line.
func (s Stop) Dissipates() float64 {
	return s.Meets() + s.Longest()/Shock(s.Arriving, s.Leaving)
}
