package ctm

import "errors"

// ErrFork says that two scenarios do not stand on the same grid.
var ErrFork = errors.New("the scenarios do not stand on the same grid")

// Fork returns a model of another scenario that goes on from this model's present state: many what-ifs that
// differ only from some moment on share the time before it. The scenario must have the same network, cuts,
// horizon, classes and entry links; its measures and demand must agree up to the present. It returns ErrFork
// where the grids differ.
func (m *Model) Fork(sc *Scenario) (*Model, error) {
	f, err := New(sc)
	if err != nil {
		return nil, err
	}
	if f.grid.Step != m.grid.Step || f.grid.Cells != m.grid.Cells || len(f.coefs) != len(m.coefs) ||
		len(f.sources) != len(m.sources) || len(f.pce) != len(m.pce) || len(f.nodes) != len(m.nodes) {
		return nil, ErrFork
	}
	f.step = m.step
	copy(f.n, m.n)
	copy(f.in, m.in)
	copy(f.out, m.out)
	for c := range m.pce {
		copy(f.count[c], m.count[c])
		if m.classes != nil {
			copy(f.classes[c], m.classes[c])
		}
	}
	for i := range f.sources {
		if !f.sources[i].follow(m.sources) {
			return nil, ErrFork
		}
	}
	for i := range f.joints {
		f.joints[i].site.active = m.joints[i].site.active
	}
	for i := range f.nodes {
		for k := range f.nodes[i].sites {
			f.nodes[i].sites[k].active = m.nodes[i].sites[k].active
		}
	}
	f.plan.due(f.grid.Time(f.step))
	f.refresh()
	return f, nil
}

// follow takes over the counts of the source with the same link and says whether there is one.
func (s *source) follow(others []source) bool {
	for i := range others {
		o := &others[i]
		if o.link != s.link {
			continue
		}
		copy(s.waiting, o.waiting)
		copy(s.wanted, o.wanted)
		copy(s.entered, o.entered)
		copy(s.seconds, o.seconds)
		return true
	}
	return false
}
