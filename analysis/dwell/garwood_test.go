package dwell

import (
	"math"
	"testing"
)

// Limits at 95 % for a Poisson count: Garwood, Biometrika 28 (1936) 437, published
// to six decimals.
func TestGarwoodPublished(t *testing.T) {
	for _, row := range []struct {
		n         int
		low, high float64
	}{
		{0, 0, 3.688879},
		{1, 0.025318, 5.571643},
		{3, 0.618672, 8.767273},
		{5, 1.623486, 11.668332},
		{10, 4.795389, 18.390356},
		{20, 12.216520, 30.888378},
		{100, 81.363991, 121.626794},
	} {
		low, high := Garwood(row.n, 0.95)
		const half = 0.51e-6 // of the last printed digit
		if math.Abs(low-row.low) > half || math.Abs(high-row.high) > half {
			t.Errorf("Garwood(%d) = %.7f, %.7f; published %v, %v", row.n, low, high, row.low, row.high)
		}
	}
}

// Computed with 30-digit arithmetic from the incomplete gamma function. They
// stand on both sides of the change to the expansion in the shape.
func TestGarwoodLarge(t *testing.T) {
	for _, row := range []struct {
		n         int
		low, high float64
	}{
		{1000, 938.97301840769522, 1063.952136016302},
		{12345, 12128.180907899079, 12564.722206913333},
	} {
		low, high := Garwood(row.n, 0.95)
		if relative(low, row.low) > 1e-14 || relative(high, row.high) > 1e-14 {
			t.Errorf("Garwood(%d) = %.17g, %.17g; computed %v, %v", row.n, low, high, row.low, row.high)
		}
	}
}

// For n events the limits are n + (z²+2)/3 ± z√n to O(1/√n), above and below
// (the first terms of the Cornish–Fisher expansion, worked out by hand: z²/3 − 1/3
// for the lower one, z²/3 + 2/3 for the upper one).
func TestGarwoodHuge(t *testing.T) {
	const n, z = 1_000_000_000, 1.959963984540054
	low, high := Garwood(n, 0.95)
	root := math.Sqrt(n)
	wantLow := n - z*root + (z*z-1)/3
	wantHigh := n + 1 + z*math.Sqrt(n+1) + (z*z-1)/3
	const next = 1e-4 // z(z²−7)/(36√n) is 6e-6
	if math.Abs(low-wantLow) > next || math.Abs(high-wantHigh) > next {
		t.Errorf("Garwood(1e9) = %.6f, %.6f; expansion %.6f, %.6f", low, high, wantLow, wantHigh)
	}
}

// Percentage points of χ² (Pearson and Hartley, Biometrika Tables for
// Statisticians, vol. 1, table 8; quoted from memory to three decimals).
func TestChiSquaredTable(t *testing.T) {
	for _, row := range []struct {
		freedom   int
		low, high float64 // 2.5 and 97.5 %
	}{
		{2, 0.051, 7.378},
		{10, 3.247, 20.483},
		{20, 9.591, 34.170},
		{30, 16.791, 46.979},
		{100, 74.222, 129.561},
	} {
		low, high := gammaLimits(row.freedom/2, 0.95)
		low, high = low*float64(row.freedom), high*float64(row.freedom)
		if math.Abs(low-row.low) > 0.51e-3 || math.Abs(high-row.high) > 0.51e-3 {
			t.Errorf("χ² with %d: %.4f, %.4f; table %v, %v", row.freedom, low, high, row.low, row.high)
		}
	}
}

// The shapes next to the change of method give the same curve from both methods.
func TestQuantileMethodsMeet(t *testing.T) {
	for _, tail := range []float64{0.25, 0.025, 1e-4} {
		inside, outside := gammaUpper(largeShape-1e-6, tail), gammaUpper(largeShape, tail)
		if d := relative(inside, outside); d > 2e-10 { // the shapes differ by 1e-10
			t.Errorf("tail %v: %v and %v differ by %.2g", tail, inside, outside, d)
		}
	}
}

func TestGarwoodRefuses(t *testing.T) {
	for _, c := range []struct {
		n          int
		confidence float64
	}{{-1, 0.95}, {3, 0}, {3, 1}, {3, -0.1}, {3, 1.5}, {3, math.NaN()}, {3, math.Inf(1)}} {
		if low, high := Garwood(c.n, c.confidence); !math.IsNaN(low) || !math.IsNaN(high) {
			t.Errorf("Garwood(%d, %v) = %v, %v; want NaN", c.n, c.confidence, low, high)
		}
	}
}

func relative(got, want float64) float64 { return math.Abs(got-want) / math.Abs(want) }
