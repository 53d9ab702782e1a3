package dwell

import "math"

// Garwood gives the limits of the central interval of the mean of a Poisson
// count of which n events were seen, at the given confidence (0.95 for 95 %).
// The interval holds the true mean in at least that share of cases. Both limits
// are NaN if n is negative or confidence is not between 0 and 1.
//
// Garwood, Biometrika 28 (1936) 437: the lower limit is half the α/2 quantile of
// χ² with 2n degrees of freedom (0 for n = 0), the upper one half the 1−α/2
// quantile with 2n+2.
func Garwood(n int, confidence float64) (low, high float64) {
	tail := (1 - confidence) / 2
	if n < 0 || !(tail > 0 && tail < 0.5) {
		return math.NaN(), math.NaN()
	}
	if n > 0 {
		low = gammaLower(float64(n), tail)
	}
	return low, gammaUpper(float64(n)+1, tail)
}

// gammaLimits gives the factors by which the mean of r complete exponential
// dwells is divided for its upper and lower limit: the quantiles of χ² with 2r
// degrees of freedom over 2r.
func gammaLimits(r int, confidence float64) (low, high float64) {
	a, tail := float64(r), (1-confidence)/2
	return gammaLower(a, tail) / a, gammaUpper(a, tail) / a
}
