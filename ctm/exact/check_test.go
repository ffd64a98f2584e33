package exact_test

import (
	"math"
	"testing"
)

// The tests use the units of their sources: every formula holds in any consistent set.

// near fails if got is not want to its printed digits; rel is relative, or absolute for a wanted 0.
func near(t *testing.T, what string, got, want, rel float64) {
	t.Helper()
	if !(math.Abs(got-want) <= rel*math.Abs(want)) && !(want == 0 && math.Abs(got) <= rel) {
		t.Errorf("%s = %.10g, want %.10g", what, got, want)
	}
}
