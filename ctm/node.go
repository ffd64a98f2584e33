package ctm

import (
	"example.org/tailback/ctm/junction"
	"example.org/tailback/demand"
	"example.org/tailback/network"
)

// joint is a place with one way in and one way out: between two segments of a link, or a node between two
// links.
type joint struct {
	up, down int // segments
	site     dropSite
}

// exit is the end of a link with no way out.
type exit struct {
	segment int
	limit   *demand.Profile // nil for none
}

// node is a place where several links meet, or where an entry joins others.
type node struct {
	id      network.NodeID
	ins     []int // last segments of the approaches; sources follow them in the problem
	sources []int // numbers of the entries whose link begins here
	outs    []int // first segments of the ways out
	given   []float64
	problem junction.Problem
	in, out []float64   // flows of the approaches and ways out, pc per step
	turn    [][]float64 // by class: fractions, row-major, approach by way out
	model   junction.Oriented
	sites   []dropSite // by way out
}

// addNodes sorts the places of the network into joints, exits and nodes.
func (m *Model) addNodes() {
	for i := range m.grid.Links {
		l := m.grid.Links[i]
		for s := l.FirstSegment; s < l.Last(); s++ {
			m.joints = append(m.joints, joint{up: s, down: s + 1})
		}
	}
	n := m.sc.Network
	for i := range n.Nodes {
		id := network.NodeID(i)
		var begins []int
		for k := range m.sources {
			if n.Links[m.sources[k].link].From == id {
				begins = append(begins, k)
			}
		}
		in, out := n.In(id), n.Out(id)
		switch {
		case len(out) == 0:
			for _, l := range in {
				m.exits = append(m.exits, exit{segment: m.grid.Links[l].Last(), limit: m.outflow(l)})
			}
		case len(in) == 0: // sources only: enter does it
		case len(in) == 1 && len(out) == 1 && len(begins) == 0:
			m.joints = append(m.joints, joint{up: m.grid.Links[in[0]].Last(), down: m.grid.Links[out[0]].FirstSegment})
		default:
			m.nodes = append(m.nodes, m.newNode(id, begins))
		}
	}
}

func (m *Model) outflow(l network.LinkID) *demand.Profile {
	for i := range m.sc.Outflows {
		if m.sc.Outflows[i].Link == l {
			return &m.sc.Outflows[i].Flow
		}
	}
	return nil
}

func (m *Model) newNode(id network.NodeID, sources []int) node {
	nd := node{id: id, sources: sources}
	for _, l := range m.sc.Network.In(id) {
		nd.ins = append(nd.ins, m.grid.Links[l].Last())
	}
	for _, l := range m.sc.Network.Out(id) {
		nd.outs = append(nd.outs, m.grid.Links[l].FirstSegment)
	}
	rows, cols := len(nd.ins)+len(sources), len(nd.outs)
	nd.problem = junction.Problem{
		Sending: make([]float64, rows), Receiving: make([]float64, cols),
		Priority: make([]float64, rows), Turn: make([]float64, rows*cols),
	}
	nd.in, nd.out = make([]float64, rows), make([]float64, cols)
	nd.sites = make([]dropSite, cols)
	for range m.pce {
		nd.turn = append(nd.turn, make([]float64, rows*cols))
	}
	for i := range m.sc.Junctions {
		if m.sc.Junctions[i].Node == id && m.sc.Junctions[i].Priority != nil {
			nd.given = make([]float64, rows)
			for k, l := range m.sc.Network.In(id) {
				nd.given[k] = m.sc.Junctions[i].Priority[l]
			}
		}
	}
	return nd
}

// refreshNodes derives what nodes need from the segments' parameters: priorities and capacity drops.
func (m *Model) refreshNodes() {
	for i := range m.joints {
		j := &m.joints[i]
		j.site.set(m.coefs[j.up].entry, m.coefs[j.down].entry, max(m.roads[j.up].Drop, m.roads[j.down].Drop))
	}
	for i := range m.nodes {
		nd := &m.nodes[i]
		for k, s := range nd.ins {
			nd.problem.Priority[k] = m.coefs[s].q
		}
		for k, src := range nd.sources {
			nd.problem.Priority[len(nd.ins)+k] = m.coefs[m.sources[src].first].q
		}
		for k, p := range nd.given {
			if p > 0 {
				nd.problem.Priority[k] = p
			}
		}
	}
	m.refreshTurns()
}

// refreshTurns copies the turning fractions in force into the nodes.
func (m *Model) refreshTurns() {
	t := m.grid.Time(m.step)
	m.turnAt = m.nextTurn(t)
	for i := range m.nodes {
		nd := &m.nodes[i]
		out := m.sc.Network.Out(nd.id)
		for c := range nd.turn {
			clear(nd.turn[c])
			for row, l := range m.sc.Network.In(nd.id) {
				m.fillTurn(nd.turn[c][row*len(out):(row+1)*len(out)], l, out, demand.ClassID(c))
			}
			for k, src := range nd.sources {
				for col, l := range out {
					if l == m.sources[src].link {
						nd.turn[c][(len(nd.ins)+k)*len(out)+col] = 1
					}
				}
			}
		}
		if len(nd.turn) == 1 {
			copy(nd.problem.Turn, nd.turn[0])
		}
		for col, s := range nd.outs {
			wanted, drop := 0.0, m.roads[s].Drop
			for row, up := range nd.ins {
				wanted += nd.turn[0][row*len(out)+col] * m.coefs[up].entry
				drop = max(drop, m.roads[up].Drop)
			}
			nd.sites[col].set(wanted, m.coefs[s].entry, drop)
		}
	}
}

// fillTurn writes the fractions of one approach and class over the ways out of its node.
func (m *Model) fillTurn(row []float64, from network.LinkID, out []network.LinkID, class demand.ClassID) {
	if len(out) == 1 {
		row[0] = 1
		return
	}
	turn := m.turns.Lookup(from, class)
	if turn == nil {
		return
	}
	fractions := turn.At(m.grid.Time(m.step))
	for k, to := range turn.To {
		for col, l := range out {
			if l == to {
				row[col] += fractions[k]
			}
		}
	}
}

// cross finds the flow over every joint, exit and node from the sending and receiving flows.
func (m *Model) cross() {
	clear(m.in)
	for c := range m.inC {
		clear(m.inC[c])
	}
	for i := range m.joints {
		j := &m.joints[i]
		flow := min(m.last[j.up], j.site.limit(m.first[j.down]))
		m.out[j.up], m.in[j.down] = flow, flow
		if j.site.drop > 0 {
			j.site.update(m.queuedAtEnd(j.up), m.queuedAtStart(j.down), flow >= m.first[j.down]*(1-1e-6))
		}
	}
	from, to := m.grid.Time(m.step), m.grid.Time(m.step+1)
	for i := range m.exits {
		e := &m.exits[i]
		flow := m.last[e.segment]
		if e.limit != nil {
			flow = min(flow, e.limit.Vehicles(from, to))
		}
		m.out[e.segment] = flow
	}
	for i := range m.nodes {
		m.crossNode(&m.nodes[i])
	}
	for i := range m.sources {
		if s := &m.sources[i]; s.alone {
			s.flow = min(s.available, m.first[s.first])
			m.in[s.first] = s.flow
		}
	}
}

// crossNode finds the flows of one node. The two cases that make up most of a network, a diverge of one class and
// a merge with room for all, need no junction model.
func (m *Model) crossNode(nd *node) {
	switch {
	case len(nd.in) == 1 && len(nd.ins) == 1 && len(nd.turn) == 1:
		m.diverge(nd)
	case len(nd.out) != 1 || len(nd.sources) > 0 || !m.mergeAll(nd):
		m.solve(nd)
	}
	for k, s := range nd.outs {
		if nd.sites[k].drop > 0 {
			m.updateSite(nd, k, m.in[s])
		}
	}
	if len(nd.turn) > 1 {
		m.carryOver(nd)
	}
}

// diverge is junction.Diverge written over the segments' flows.
func (m *Model) diverge(nd *node) {
	turn := nd.problem.Turn[:len(nd.outs)]
	flow := m.last[nd.ins[0]]
	for k, s := range nd.outs {
		r := nd.sites[k].limit(m.first[s])
		nd.problem.Receiving[k] = r
		if r < turn[k]*flow {
			flow = r / turn[k]
		}
	}
	m.out[nd.ins[0]], nd.in[0] = flow, flow
	for k, s := range nd.outs {
		m.in[s] = turn[k] * flow
	}
}

// mergeAll lets every approach of a merge send all it wants and says whether there was room for that.
func (m *Model) mergeAll(nd *node) bool {
	total, out := 0.0, nd.outs[0]
	for _, s := range nd.ins {
		total += m.last[s]
	}
	r := nd.sites[0].limit(m.first[out])
	if total > r {
		return false
	}
	nd.problem.Receiving[0] = r
	for k, s := range nd.ins {
		m.out[s], nd.in[k] = m.last[s], m.last[s]
	}
	m.in[out] = total
	return true
}

// solve finds the flows of any node by its junction model.
func (m *Model) solve(nd *node) {
	p := &nd.problem
	for k, s := range nd.ins {
		p.Sending[k] = m.last[s]
	}
	for k, src := range nd.sources {
		row := len(nd.ins) + k
		p.Sending[row] = min(m.sources[src].available, p.Priority[row])
	}
	for k, s := range nd.outs {
		p.Receiving[k] = nd.sites[k].limit(m.first[s])
	}
	if len(nd.turn) > 1 {
		m.mixTurns(nd)
	}
	nd.model.Flows(nd.in, nd.out, p)
	for k, s := range nd.ins {
		m.out[s] = nd.in[k]
	}
	for k, src := range nd.sources {
		m.sources[src].flow = nd.in[len(nd.ins)+k]
	}
	for k, s := range nd.outs {
		m.in[s] = nd.out[k]
	}
}

// mixTurns weights the classes' turning fractions by what stands in the last cell of each approach: first in,
// first out.
func (m *Model) mixTurns(nd *node) {
	cols := len(nd.outs)
	clear(nd.problem.Turn)
	for row, s := range nd.ins {
		cell := m.lastCell(s)
		for c, x := range m.classes {
			if m.n[cell] <= 0 {
				continue
			}
			share := x[cell] * m.pce[c] / m.n[cell]
			for col := range cols {
				nd.problem.Turn[row*cols+col] += share * nd.turn[c][row*cols+col]
			}
		}
	}
	for k := range nd.sources {
		row := len(nd.ins) + k
		copy(nd.problem.Turn[row*cols:(row+1)*cols], nd.turn[0][row*cols:(row+1)*cols])
	}
}

// carryOver hands each class of the approaches' outflow to the ways out.
func (m *Model) carryOver(nd *node) {
	cols := len(nd.outs)
	for row, s := range nd.ins {
		cell := m.lastCell(s)
		if m.n[cell] <= 0 {
			continue
		}
		share := min(1, nd.in[row]/m.n[cell])
		for c, x := range m.classes {
			veh := share * x[cell]
			for col, to := range nd.outs {
				m.inC[c][to] += veh * nd.turn[c][row*cols+col]
			}
		}
	}
}

// updateSite looks at a way out of a node after its flow is known.
func (m *Model) updateSite(nd *node, k int, flow float64) {
	queued := false
	for row, s := range nd.ins {
		if nd.problem.Turn[row*len(nd.outs)+k] > 0 && m.queuedAtEnd(s) {
			queued = true
		}
	}
	nd.sites[k].update(queued, m.queuedAtStart(nd.outs[k]), flow >= nd.problem.Receiving[k]*(1-1e-6))
}

func (m *Model) lastCell(s int) int { return m.coefs[s].to - 1 }

func (m *Model) queuedAtEnd(s int) bool {
	return m.n[m.lastCell(s)] > m.coefs[s].critical*(1+dropBand)
}

// queuedAtStart reports whether a segment takes less than what may flow into it. Its density would not do: where
// a lane is closed, the vehicles that were there are above the critical density of the lanes left and yet drain.
func (m *Model) queuedAtStart(s int) bool {
	return m.first[s] < m.coefs[s].entry*(1-dropBand)
}
