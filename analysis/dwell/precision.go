package dwell

import "math"

// FlipsFor gives the smallest number r of flips after which the 95 % interval of
// a memoryless mean dwell lies within the relative precision on both sides: 0.1
// asks for limits within 10 % of the mean. It is 0 if precision is not a positive
// number, and at most 2⁵³.
//
// The number must be fixed before the runs that count (all of them run until they
// flip): then the mean of r dwells is free of bias and its interval exact, as 2r
// times mean over truth is χ² with 2r degrees of freedom (Epstein and Sobel, J. Am.
// Stat. Assoc. 48 (1953) 486).
func FlipsFor(precision float64) int {
	if !(precision > 0) {
		return 0
	}
	const most = 1 << 53
	low, high := 0, 1 // low flips are too few; high are enough
	for !withinPrecision(high, precision) {
		if high == most {
			return most
		}
		low, high = high, 2*high
	}
	for high-low > 1 {
		middle := low + (high-low)/2
		if withinPrecision(middle, precision) {
			high = middle
		} else {
			low = middle
		}
	}
	return high
}

func withinPrecision(r int, precision float64) bool {
	low, high := gammaLimits(r, defaultConfidence)
	return math.Max(1/low-1, 1-1/high) <= precision
}
