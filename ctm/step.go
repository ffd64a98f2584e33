package ctm

import (
	"context"
	"time"

	"example.org/tailback/ctm/internal/kernel"
)

// flushEvery is how many steps lie between two searches for vanishing contents. A content just above tiny
// shrinks by at most the factor (1 - Courant number) a step; for Courant numbers up to 1 - 1e-12 it stays above
// 1e-100 * (1e-12)^16 = 1e-292, which is not yet denormal (below 2.2e-308).
const (
	flushEvery = 16
	tiny       = 1e-100 // passenger cars; far below round-off of anything that is counted
)

// Step advances the model by one step: measures and turning fractions that are due, arrivals at the entries,
// sending and receiving at the segments' ends, flows over joints, exits and nodes, the cells, the counts. It
// does not allocate.
func (m *Model) Step() {
	t := m.grid.Time(m.step)
	switch {
	case m.plan.due(t):
		m.refresh()
	case t+1e-3 >= m.turnAt:
		m.refreshTurns()
	}
	m.arrive()
	m.ends()
	m.cross()
	m.enter()
	if m.classes == nil {
		for s := range m.coefs {
			m.advance(s)
		}
	} else {
		m.carryJoints()
		for s := range m.coefs {
			m.advanceClasses(s)
		}
	}
	m.tally()
	m.step++
	if m.step%flushEvery == 0 {
		kernel.Flush(m.n, tiny)
		for _, x := range m.classes {
			kernel.Flush(x, tiny)
		}
	}
}

// of returns the segment's part of a list by cell.
func (c *coef) of(x []float64) []float64 { return x[c.from:c.to] }

// advance moves one segment's content.
func (m *Model) advance(s int) {
	c := &m.coefs[s]
	n := c.of(m.n)
	switch {
	case !c.linear:
		kernel.Advance(n, m.faces(s, n), m.in[s])
	case c.narrowed:
		kernel.LinearOverfull(n, c.a, c.q, c.b, c.nj, m.in[s], m.out[s])
	default:
		kernel.Linear(n, c.a, c.q, c.b, c.nj, m.in[s], m.out[s])
	}
}

// faces computes the flows out of each cell of a segment into scratch.
func (m *Model) faces(s int, n []float64) []float64 {
	c := &m.coefs[s]
	y := m.wk.sending[:len(n)]
	if c.linear {
		kernel.LinearFaces(y, n, c.a, c.q, c.b, c.nj, m.out[s])
		return y
	}
	k, receiving := m.wk.k[:len(n)], m.wk.receiving[:len(n)]
	kernel.Gauge(k, n, c.perLane)
	c.fill(y, receiving, k)
	for i := range y {
		y[i] = min(y[i]*c.perStep, n[i])
		receiving[i] *= c.perStep
	}
	kernel.Faces(y, y, receiving, m.out[s])
	return y
}

// carryJoints hands each class over the joints: its share of what leaves the last cell before.
func (m *Model) carryJoints() {
	for i := range m.joints {
		j := &m.joints[i]
		cell := m.lastCell(j.up)
		if m.n[cell] <= 0 {
			continue
		}
		share := min(1, m.out[j.up]/m.n[cell])
		for c, x := range m.classes {
			m.inC[c][j.down] += share * x[cell]
		}
	}
}

// advanceClasses moves one segment's content class by class: each cell loses the same share of every class,
// so that the composition of what leaves a cell is the composition in it.
func (m *Model) advanceClasses(s int) {
	seg := &m.coefs[s]
	n := seg.of(m.n)
	share := m.faces(s, n)
	kernel.Shares(share, share, n)
	clear(n)
	for c, x := range m.classes {
		m.outC[c][s] = kernel.Carry(seg.of(x), share, m.inC[c][s])
		kernel.Sum(n, seg.of(x), m.pce[c])
	}
}

// tally counts what crossed the links' ends and the time spent on them. The time of a step is that of the
// vehicles on the link at its beginning: then vehicles at free speed spend exactly the free travel time.
func (m *Model) tally() {
	for c := range m.pce {
		from, to, scale := m.in, m.out, 1/m.pce[c]
		if m.classes != nil {
			from, to, scale = m.inC[c], m.outC[c], 1
		}
		counts, first := m.count[c], 0
		for i := range counts {
			l, last := &counts[i], m.lastOf[i]
			enters, leaves := from[first]*scale, to[last]*scale
			l.seconds += l.inside * m.grid.Step
			l.in += enters
			l.out += leaves
			l.inside += enters - leaves
			first = last + 1
		}
	}
}

// Run steps the model to the end of its period. Each watch's observer looks at the first state, at every
// Every-th step and at the last state; conservation and bounds are checked at every report interval. It
// returns the seconds spent on time stepping alone.
func (m *Model) Run(ctx context.Context, watches ...Watch) (solve float64, err error) {
	for {
		for _, w := range watches {
			if m.step%max(1, w.Every) == 0 || m.step == m.grid.Steps {
				if err := w.Observer.Observe(View{m}); err != nil {
					return solve, err
				}
			}
		}
		if m.step%m.grid.PerReport == 0 || m.step == m.grid.Steps {
			if _, err := m.Check(); err != nil {
				return solve, err
			}
			if err := ctx.Err(); err != nil {
				return solve, err
			}
		}
		if m.step >= m.grid.Steps {
			return solve, nil
		}
		stride := m.stride(watches)
		begin := time.Now()
		for range stride {
			m.Step()
		}
		solve += time.Since(begin).Seconds()
	}
}

// stride is the number of steps until something wants to look.
func (m *Model) stride(watches []Watch) int {
	next := m.grid.Steps - m.step
	next = min(next, m.grid.PerReport-m.step%m.grid.PerReport)
	for _, w := range watches {
		every := max(1, w.Every)
		next = min(next, every-m.step%every)
	}
	return next
}
