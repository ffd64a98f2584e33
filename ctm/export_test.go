package ctm

// SetCars replaces the content of every cell (passenger cars) before the first step, for tests that begin with
// a Riemann problem.
func (m *Model) SetCars(n []float64) {
	copy(m.n, n)
	for i := range m.grid.Links {
		l := m.grid.Links[i]
		for _, x := range n[l.First : l.First+l.Cells] {
			m.count[0][i].inside += x
		}
	}
}
