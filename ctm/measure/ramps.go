package measure

import "example.org/tailback/network"

// rampReach is how far to either side of a work zone's centre the handbook counts ramps, m (3 mi).
const rampReach = 3 * mile

// RampDensity counts the ramps that join or leave the main road within 3 mi to either side of a point, and divides by
// the length of road looked at, which ends where the network does (ramps per metre; HCM 6th ed., total ramp density).
// At a node the main road is taken to go on along the link with the largest capacity; every other link is a ramp.
func RampDensity(n *network.Network, link network.LinkID, at float64) float64 {
	back, backLength := walk(n, link, at, func(l *network.Link) network.NodeID { return l.From }, n.In)
	ahead, aheadLength := walk(n, link, n.Links[link].Length-at, func(l *network.Link) network.NodeID { return l.To }, n.Out)
	if backLength+aheadLength <= 0 {
		return 0
	}
	return float64(back+ahead) / (backLength + aheadLength)
}

// walk follows the main road from a link's end that lies the given distance away and counts the other links at each
// node within reach. It returns the count and the length looked at.
func walk(n *network.Network, link network.LinkID, distance float64, end func(*network.Link) network.NodeID, next func(network.NodeID) []network.LinkID) (int, float64) {
	count := 0
	for range n.Links {
		if distance >= rampReach {
			return count, rampReach
		}
		node := end(&n.Links[link])
		ways := next(node)
		if len(ways) == 0 {
			return count, distance
		}
		count += len(n.In(node)) + len(n.Out(node)) - 2 // without the main road itself
		link = ways[0]
		for _, l := range ways {
			if n.Links[l].Capacity() > n.Links[link].Capacity() {
				link = l
			}
		}
		distance += n.Links[link].Length
	}
	return count, distance
}
