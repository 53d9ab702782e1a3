package dwell

import (
	"math"
	"slices"
	"testing"

	"holdfast/internal/stream"
)

// The tail for many numbers, computed from the inverse of the characteristic function
// along its branch cuts (Gauss–Chebyshev, 400 points, digits stand): 1.933 and 2.492
// are also the published 10 and 5 % points (Anderson and Darling, J. Am. Stat. Assoc.
// 49 (1954) 765). The approximation is stated to 2e-5; beyond farTail its one term
// is low by 5 % and less.
func TestAndersonDarlingLimit(t *testing.T) {
	const many = 1 << 40
	for _, row := range []struct{ z, tail, tolerance float64 }{
		{0.3, 0.9381576, 2e-5},
		{1, 0.3572667, 2e-5},
		{1.933, 0.0999946, 2e-5},
		{2.492, 0.0500222, 2e-5},
		{3.857, 0.0102412, 2e-5},
		{5, 0.0028744, 2e-5},
		{6, 0.00096745, 2e-5},
		{8, 0.00011381, 0.05 * 0.00011381},
		{10, 1.38150e-5, 0.05 * 1.38150e-5},
	} {
		if got := andersonDarlingTail(many, row.z); math.Abs(got-row.tail) > row.tolerance {
			t.Errorf("tail beyond %v = %.6g, computed %v", row.z, got, row.tail)
		}
	}
}

// The tail for the fewest places that are tested, against 200,000 samples of 7
// uniform numbers: 5 standard deviations of the binomial share (6e-7), and the 1e-4
// by which the source's own table of errors exceeds that of its limit for n = 8.
func TestAndersonDarlingFew(t *testing.T) {
	const n, samples = 7, 200_000
	s := stream.New(51, 0, 0)
	statistics := make([]float64, samples)
	u := make([]float64, n)
	for i := range statistics {
		for j := range u {
			u[j] = s.Float64()
		}
		slices.Sort(u)
		statistics[i] = andersonDarling(u)
	}
	slices.Sort(statistics)
	for _, z := range []float64{0.5, 1, 2.5, 3.9, 5} {
		i, _ := slices.BinarySearch(statistics, z)
		share, want := 1-float64(i)/samples, andersonDarlingTail(n, z)
		if math.Abs(share-want) > 5*math.Sqrt(want*(1-want)/samples)+1e-4 {
			t.Errorf("beyond %v: share %.5f, formula %.5f", z, share, want)
		}
	}
}

// By hand for u = ¼, ¾: −2 − ½(ln ¼ + ln ¼ + 3(ln ¾ + ln ¾)).
func TestAndersonDarlingStatistic(t *testing.T) {
	want := -2 - (2*math.Log(0.25)+6*math.Log(0.75))/2
	if got := andersonDarling([]float64{0.25, 0.75}); math.Abs(got-want) > 1e-15 {
		t.Errorf("got %v, want %v", got, want)
	}
	if got := andersonDarling([]float64{0, 0.5}); math.IsInf(got, 0) || math.IsNaN(got) {
		t.Errorf("a place of 0 gives %v", got)
	}
}
