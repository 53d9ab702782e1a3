package dwell

import (
	"math"
	"testing"
)

// Computed with SciPy's χ² quantiles (scipy.stats.chi2.ppf) by bisection.
func TestFlipsFor(t *testing.T) {
	for _, row := range []struct {
		precision float64
		flips     int
	}{{1, 12}, {0.5, 29}, {0.2, 127}, {0.1, 444}, {0.05, 1654}, {0.01, 38995}} {
		if got := FlipsFor(row.precision); got != row.flips {
			t.Errorf("FlipsFor(%v) = %d, computed %d", row.precision, got, row.flips)
		}
	}
}

// For fine precision the χ² law is normal: r → (z/precision)².
func TestFlipsForFine(t *testing.T) {
	const precision, z = 1e-5, 1.959963984540054
	want := (z / precision) * (z / precision)
	if got := float64(FlipsFor(precision)); relative(got, want) > 3*precision {
		t.Errorf("FlipsFor(%v) = %v, limit %v", precision, got, want)
	}
}

func TestFlipsForOdd(t *testing.T) {
	for _, p := range []float64{0, -0.1, math.NaN(), math.Inf(-1)} {
		if got := FlipsFor(p); got != 0 {
			t.Errorf("FlipsFor(%v) = %d, want 0", p, got)
		}
	}
	if got := FlipsFor(math.Inf(1)); got != 1 {
		t.Errorf("FlipsFor(+Inf) = %d, want 1", got)
	}
	if got := FlipsFor(1e-300); got != 1<<53 {
		t.Errorf("FlipsFor(1e-300) = %d, want 2⁵³", got)
	}
}
