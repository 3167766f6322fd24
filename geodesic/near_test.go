package geodesic

import (
	"math"
	"testing"
)

// near compares absolutely, and lets NaN fail.
func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.17g, want %.17g ± %g (off by %g)", what, got, want, tol, got-want)
	}
}
