package junction

// Movement is the node where a blocked way out holds back only the vehicles bound for it, as if each movement had
// lanes of its own: the limit of partial first in, first out without any restriction interval (Wright, Gomes,
// Horowitz & Kurzhanskiy, "On node models for high-dimensional road networks", Transportation Research B 105 (2017)
// 212-234). Movement i to j sends f_ij S_i; way out j is shared by the movements bound for it as in [Merge], with the
// oriented priorities f_ij P_i; what one leaves over goes to the others.
//
// The vehicles that leave an approach are then no longer mixed as its turning fractions say: what is left behind must
// be counted by movement, or the fractions drift. The zero value is ready.
type Movement struct {
	flow, weight []float64 // of one way out, by approach
}

// Flows implements [Model].
func (v *Movement) Flows(in, out []float64, p *Problem) {
	_, m := p.check(in, out)
	clear(in)
	for j := range m {
		out[j] = v.column(p, j)
		for i, q := range v.flow {
			in[i] += q
		}
	}
	for i, s := range p.Sending {
		in[i] = min(in[i], max(s, 0)) // a row of fractions may sum to 1 + 1e-16
	}
	trim(out, p.Receiving)
}

// Movements writes the flow of each movement to q (n x m, row-major), in the problem's unit.
func (v *Movement) Movements(q []float64, p *Problem) {
	n, m := len(p.Sending), len(p.Receiving)
	if len(q) != n*m {
		panic("junction: length of movements and problem disagree")
	}
	for j := range m {
		v.column(p, j)
		for i, x := range v.flow {
			q[i*m+j] = x
		}
	}
}

// column leaves the flows of the movements bound for way out j in v.flow and returns their sum.
func (v *Movement) column(p *Problem, j int) float64 {
	n, m := len(p.Sending), len(p.Receiving)
	v.flow, v.weight = resize(v.flow, n), resize(v.weight, n)
	for i, s := range p.Sending {
		f := p.Turn[i*m+j]
		v.flow[i], v.weight[i] = 0, 0
		if f > 0 && s > 0 {
			v.flow[i], v.weight[i] = f*s, f*p.weight(i)
		}
	}
	return Merge(v.flow, v.flow, v.weight, p.Receiving[j])
}
