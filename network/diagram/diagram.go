package diagram

// Diagram is the relation between flow and density of one lane.
type Diagram interface {
	// Flow is the flow in veh/s at k veh/m; 0 where k is outside [0, Jam].
	Flow(k float64) float64
	// Critical is the lowest density, in veh/m, at which the flow is at its maximum.
	Critical() float64
	// Jam is the density of standing traffic in veh/m, +Inf where the shape has none.
	Jam() float64
	// FreeSpeed is the speed on the empty road in m/s. No shape has a larger speed at any density.
	FreeSpeed() float64
	// MaxWaveSpeed is at least |dq/dk| at every density, in m/s, for the Courant condition.
	MaxWaveSpeed() float64
}

// Filler is a Diagram with a faster or a special way to give its sending and receiving flows.
type Filler interface {
	// Fill is what the function Fill documents.
	Fill(sending, receiving, k []float64)
}

// Fill sets sending[i] and receiving[i] to what a cell at density k[i] can send and receive, in veh/s per lane for
// densities in veh/m per lane. All three have the same length; sending and receiving must not overlap k or each
// other. Without a Filler they are, with f the flow and kc the critical density,
//
//	sending = f(min(k, kc)),  receiving = f(max(k, kc))
//
// (Daganzo 1994, 1995; Lebacque 1996, there named demand and supply). Beyond the jam density nothing is received.
func Fill(d Diagram, sending, receiving, k []float64) {
	if f, ok := d.(Filler); ok {
		f.Fill(sending, receiving, k)
		return
	}
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	kc := d.Critical()
	for i, x := range k {
		sending[i] = d.Flow(min(x, kc))
		receiving[i] = d.Flow(max(x, kc))
	}
}

// Capacity is the largest flow of a diagram in veh/s per lane.
func Capacity(d Diagram) float64 { return d.Flow(d.Critical()) }

// Speed is the mean speed in m/s at k veh/m per lane: Flow(k)/k, and the free speed on the empty road.
func Speed(d Diagram, k float64) float64 {
	if k <= 0 {
		return d.FreeSpeed()
	}
	return d.Flow(k) / k
}

// curve is what the shapes that are not made of three straight lines have in common.
type curve struct {
	vf   float64 // free speed, m/s
	q    float64 // the largest flow, veh/s
	kc   float64 // the lowest density at which it is reached, veh/m
	kj   float64 // jam density, veh/m, or +Inf
	down float64 // largest -dq/dk, m/s
}

// Critical implements Diagram.
func (c *curve) Critical() float64 { return c.kc }

// Jam implements Diagram.
func (c *curve) Jam() float64 { return c.kj }

// FreeSpeed implements Diagram.
func (c *curve) FreeSpeed() float64 { return c.vf }

// MaxWaveSpeed implements Diagram. No wave runs downstream faster than the free speed: where the speed v does not
// rise with density, dq/dk = v + k dv/dk <= v <= vf.
func (c *curve) MaxWaveSpeed() float64 { return max(c.vf, c.down) }

// steepest is the largest -dq/dk in m/s.
func (c *curve) steepest() float64 { return c.down }

// outside reports whether a density carries no flow. It is false for NaN, so that a NaN shows.
func (c *curve) outside(k float64) bool { return k <= 0 || k >= c.kj }

// split gives the sending and receiving flow of a cell at density k whose flow is q.
func (c *curve) split(k, q float64) (sending, receiving float64) {
	q = max(0, min(q, c.q))
	if k < c.kc {
		return q, c.q
	}
	return c.q, q
}
