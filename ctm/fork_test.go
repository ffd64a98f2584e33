package ctm_test

import (
	"slices"
	"testing"

	"pgregory.net/rapid"

	"example.org/tailback/ctm"
)

// A forked model goes on exactly as the model itself, to the last bit, on random networks.
func TestForkGoesOnAlike(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		m, err := ctm.New(randomStudy(rt, t, rapid.IntRange(1, 2).Draw(rt, "classes")))
		if err != nil {
			rt.Fatal(err)
		}
		for range m.View().Grid().Steps / 2 {
			m.Step()
		}
		f, err := m.Fork(m.View().Scenario())
		if err != nil {
			rt.Fatal(err)
		}
		for m.View().Step() < m.View().Grid().Steps {
			m.Step()
			f.Step()
		}
		if !slices.Equal(m.View().Cars(), f.View().Cars()) {
			rt.Fatal("the cells differ")
		}
		if m.View().Totals() != f.View().Totals() {
			rt.Fatalf("totals %+v and %+v", m.View().Totals(), f.View().Totals())
		}
	})
}
