package demand

import (
	"math"

	"example.org/tailback/network"
)

// chain says how traffic goes on from link to link at one time: share[l] of what leaves link l goes to each of its
// ways out. It is the Markov chain of the turning fractions.
type chain [][]Share

// newChain reads the fractions in force at a time for one class or AllClasses.
func newChain(d *Demand, n *network.Network, class ClassID, t float64) chain {
	c := make(chain, len(n.Links))
	for i := range n.Links {
		l := network.LinkID(i)
		out := n.Out(n.Links[i].To)
		if len(out) == 1 {
			c[l] = []Share{{out[0], 1}}
			continue
		}
		turn := d.Lookup(l, class)
		if turn == nil {
			continue
		}
		for k, f := range turn.At(t) {
			if f > 0 {
				c[l] = append(c[l], Share{turn.To[k], f})
			}
		}
	}
	return c
}

// rounds bounds the sweeps over a chain. Without turning back a sweep per link is enough; where traffic can circle,
// what is left after a thousand rounds is nothing.
const rounds = 1000

// reach gives, by link, the share of what is on it that will ever enter a target link (1 on the target).
func (c chain) reach(target network.LinkID) []float64 {
	h := make([]float64, len(c))
	h[target] = 1
	for range rounds {
		change := 0.0
		for l := len(c) - 1; l >= 0; l-- {
			if network.LinkID(l) == target {
				continue
			}
			sum := 0.0
			for _, s := range c[l] {
				sum += s.Share * h[s.To]
			}
			change = max(change, math.Abs(sum-h[l]))
			h[l] = sum
		}
		if change == 0 {
			break
		}
	}
	for l := range h {
		if h[l] > 1-1e-14 { // round-off of fractions that sum to 1
			h[l] = 1
		}
	}
	return h
}

// flows gives, by link, the steady flow on it when a flow begins on each link: x = begin + shares x.
func (c chain) flows(begin []float64) []float64 {
	x, next := append([]float64(nil), begin...), make([]float64, len(c))
	for range rounds {
		copy(next, begin)
		for l := range c {
			for _, s := range c[l] {
				next[s.To] += s.Share * x[l]
			}
		}
		same := true
		for l := range x {
			same = same && x[l] == next[l]
		}
		x, next = next, x
		if same {
			break
		}
	}
	return x
}

// weigh is the chain of the traffic that a weight per link selects: it goes on in proportion to share times the
// weight of the next link. Links from which nothing is selected have no way on.
func (c chain) weigh(weight func(network.LinkID) float64) chain {
	w := make(chain, len(c))
	for l := range c {
		sum := 0.0
		for _, s := range c[l] {
			sum += s.Share * weight(s.To)
		}
		if sum <= 0 {
			continue
		}
		for _, s := range c[l] {
			if share := s.Share * weight(s.To) / sum; share > 0 {
				w[l] = append(w[l], Share{s.To, share})
			}
		}
	}
	return w
}

// without is the chain with no way into a link; what went there is missing.
func (c chain) without(link network.LinkID) chain {
	w := make(chain, len(c))
	for l := range c {
		for _, s := range c[l] {
			if s.To != link {
				w[l] = append(w[l], s)
			}
		}
	}
	return w
}

// times gives, by link, the mean free travel time in seconds from the link's start to a target's start.
func (c chain) times(n *network.Network, target network.LinkID) []float64 {
	t := make([]float64, len(c))
	for range rounds {
		change := 0.0
		for l := len(c) - 1; l >= 0; l-- {
			if network.LinkID(l) == target || len(c[l]) == 0 {
				continue
			}
			sum := n.Links[l].FreeTime()
			for _, s := range c[l] {
				sum += s.Share * t[s.To]
			}
			change = max(change, math.Abs(sum-t[l]))
			t[l] = sum
		}
		if change < 1e-9 {
			break
		}
	}
	return t
}
