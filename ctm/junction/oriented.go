package junction

// Oriented is the first-in, first-out node of Tampere, Corthout, Cattrysse & Immers, "A generic class of first
// order node models for dynamic macroscopic simulation of traffic flows", Transportation Research B 45 (2011)
// 289-309: approaches that compete for a way out share it in proportion to their oriented priorities f_ij P_i.
// Their paper takes the capacities as priorities.
//
// It holds nobody back without need: each approach sends everything or uses a way out that is full. Its answer does
// not change if the sending flow of an approach that is held back grows, or the receiving flow of a way out that
// is not full (invariance: Lebacque & Khoshyaran 2005). The zero value is ready.
type Oriented struct {
	rest []float64 // what each way out can still take: R~ of the paper
	open []bool    // approaches whose flow is still unknown
	in   []float64 // for Movements
	out  []float64
}

// Flows implements [Model]. Nodes with one way out or one approach take the closed forms [Merge] and [Diverge].
func (o *Oriented) Flows(in, out []float64, p *Problem) {
	n, m := p.check(in, out)
	switch {
	case m == 1:
		out[0] = Merge(in, p.Sending, p.Priority, p.Receiving[0])
	case n == 1:
		in[0] = Diverge(out, p.Sending[0], p.Receiving, p.Turn)
	default:
		copy(in, p.Sending)
		p.rows(nil, out, in)
		if p.fits(out) { // the usual case: nobody is held back
			return
		}
		o.solve(in, p)
		p.rows(nil, out, in)
	}
	trim(out, p.Receiving)
}

// Movements writes the flow of each movement, q_ij = f_ij q_i, to q (n x m, row-major): every movement of an
// approach is held back alike.
func (o *Oriented) Movements(q []float64, p *Problem) {
	n, m := len(p.Sending), len(p.Receiving)
	if len(q) != n*m {
		panic("junction: length of movements and problem disagree")
	}
	o.in, o.out = resize(o.in, n), resize(o.out, m)
	o.Flows(o.in, o.out, p)
	p.rows(q, nil, o.in)
}

// solve is the algorithm of the paper's section 4. With U_j the open approaches that use j and R~_j what j can
// still take:
//
//	a_j = R~_j / sum over i in U_j of f_ij P_i,    tightest: the j with the least a_j
//
// If approaches that use the tightest way out send no more than a P_i, all those send everything; else every approach
// that uses it sends a P_i. Each pass settles at least one approach.
func (o *Oriented) solve(in []float64, p *Problem) {
	n, m := len(p.Sending), len(p.Receiving)
	o.rest, o.open = resize(o.rest, m), resize(o.open, n)
	for j, r := range p.Receiving {
		o.rest[j] = max(r, 0)
	}
	clear(in)
	for i, s := range p.Sending {
		o.open[i] = s > 0
	}
	for {
		j, a := o.tightest(p)
		if j < 0 {
			return
		}
		if !o.settle(in, p, j, a, true) {
			o.settle(in, p, j, a, false)
		}
	}
}

// tightest finds the way out with the least room per oriented priority, or -1 if no open approach is left. Of
// equals it takes the first; the flows do not depend on that.
func (o *Oriented) tightest(p *Problem) (best int, least float64) {
	best = -1
	m := len(p.Receiving)
	for j := range m {
		sum := 0.0
		for i, open := range o.open {
			if open {
				sum += p.Turn[i*m+j] * p.weight(i)
			}
		}
		if sum <= 0 {
			continue
		}
		if a := o.rest[j] / sum; best < 0 || a < least {
			best, least = j, a
		}
	}
	return best, least
}

// settle fixes the open approaches that use way out j and reports whether there were any: with all set, those that
// send no more than a P_i send everything; else each sends a P_i.
func (o *Oriented) settle(in []float64, p *Problem, j int, a float64, all bool) bool {
	m := len(p.Receiving)
	found := false
	for i, s := range p.Sending {
		flow := a * p.weight(i)
		if !o.open[i] || p.Turn[i*m+j] <= 0 || all && s > flow {
			continue
		}
		found = true
		o.open[i] = false
		in[i] = min(s, flow)
		for k, f := range p.Turn[i*m : (i+1)*m] {
			if f > 0 {
				o.rest[k] = take(o.rest[k], f*in[i])
			}
		}
	}
	return found
}
