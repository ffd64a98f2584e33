package diagram

// linear is a triangle or a trapezoid:
//
//	q = max(0, min(v k, q, w (kj - k))),  q <= v w kj / (v + w)
type linear struct{ v, q, w, kj float64 }

// tip is the flow at which the free branch of speed v meets the congested branch.
func tip(v, w, kj float64) float64 { return v * w * kj / (v + w) }

// Flow implements Diagram.
func (d linear) Flow(k float64) float64 { return max(0, min(d.v*k, d.q, d.w*(d.kj-k))) }

// Critical implements Diagram.
func (d linear) Critical() float64 {
	if d.q <= 0 {
		return 0
	}
	return d.q / d.v
}

// Jam implements Diagram.
func (d linear) Jam() float64 { return d.kj }

// FreeSpeed implements Diagram.
func (d linear) FreeSpeed() float64 { return d.v }

// MaxWaveSpeed implements Diagram.
func (d linear) MaxWaveSpeed() float64 { return max(d.v, d.w) }

func (d linear) steepest() float64 { return d.w }

// Fill implements Filler.
func (d linear) Fill(sending, receiving, k []float64) {
	sending, receiving = sending[:len(k)], receiving[:len(k)]
	for i, x := range k {
		sending[i] = max(0, min(d.v*x, d.q))
		receiving[i] = max(0, min(d.q, d.w*(d.kj-x)))
	}
}

// AsLinear lets a solver see a triangular or trapezoidal diagram, limited or not, as its three straight lines:
//
//	sending = min(v k, q),  receiving = max(0, min(q, w (kj - k)))
//
// with v and w in m/s, q in veh/s per lane and kj in veh/m per lane; ok is false for every other diagram.
func AsLinear(d Diagram) (v, q, w, kj float64, ok bool) {
	l, ok := d.(linear)
	return l.v, l.q, l.w, l.kj, ok
}
