package observe

// FastestAt is the greatest speed in m/s, at the last look at or before a time, in the cells of a corridor between two
// places in metres from its first point; 0 where the record holds none.
func (o *Corridors) FastestAt(corridor int, from, to, time float64) float64 {
	look := -1
	for look+1 < len(o.times) && o.times[look+1] <= time+1e-9 {
		look++
	}
	if look < 0 || len(o.paths) == 0 {
		return 0
	}
	p := &o.paths[corridor]
	best, x := 0.0, 0.0
	for k := range p.cells {
		if x+p.dx[k] > from && x < to {
			best = max(best, o.speed(p, look, k))
		}
		x += p.dx[k]
	}
	return best
}
