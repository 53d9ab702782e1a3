package dwell

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// largeShape is the shape from which the gamma law's quantiles come from their
// expansion: its first neglected term is below 1e-14 of the quantile there for
// tails down to 1e-9.
const largeShape = 1e4

// gammaLower gives x with P(X < x) = tail for X gamma with the shape and scale 1;
// gammaUpper the one with P(X > x) = tail. Tails are below ½.
func gammaLower(shape, tail float64) float64 {
	if shape == 1 {
		return -math.Log1p(-tail)
	}
	return gammaQuantile(shape, tail, -1, mathext.GammaIncReg)
}

func gammaUpper(shape, tail float64) float64 {
	if shape == 1 {
		return -math.Log(tail)
	}
	return gammaQuantile(shape, tail, 1, mathext.GammaIncRegComp)
}

// gammaQuantile solves tailOf(shape, x) = tail. The logarithm of either tail is
// concave in ln x, so Newton's method on it converges from any start.
func gammaQuantile(shape, tail, side float64, tailOf func(a, x float64) float64) float64 {
	z := side * math.Sqrt2 * math.Erfinv(1-2*tail)
	if shape >= largeShape {
		return expandedQuantile(shape, z)
	}
	x := wilsonHilferty(shape, z)
	logGamma, _ := math.Lgamma(shape)
	for range 50 {
		p := tailOf(shape, x)
		slope := -side * math.Exp(shape*math.Log(x)-x-logGamma) / p
		step := (math.Log(p) - math.Log(tail)) / slope
		x *= math.Exp(-math.Max(-1, math.Min(1, step)))
		if math.Abs(step) < 1e-15 {
			break
		}
	}
	return x
}

// wilsonHilferty gives the gamma quantile to a few per cent: the cube root of the
// variate is nearly normal (Wilson and Hilferty, Proc. Natl. Acad. Sci. 17 (1931) 684).
func wilsonHilferty(shape, z float64) float64 {
	c := 1 / (9 * shape)
	return shape * math.Pow(math.Max(1-c+z*math.Sqrt(c), 1e-3), 3)
}

// expandedQuantile gives the gamma quantile at the normal deviate z for large
// shapes, by the expansion of χ² quantiles in the degrees of freedom (Goldberg
// and Levine, Ann. Math. Stat. 17 (1946) 216).
func expandedQuantile(shape, z float64) float64 {
	nu, root := 2*shape, math.Sqrt(2*shape)
	z2 := z * z
	x := nu + z*math.Sqrt2*root + (z2-1)*2/3 + z*(z2-7)/(9*math.Sqrt2*root)
	x -= ((6*z2+14)*z2 - 32) / (405 * nu)
	x += z * ((9*z2+256)*z2 - 433) / (4860 * math.Sqrt2 * nu * root)
	x += (((12*z2-243)*z2-923)*z2 + 1472) / (25515 * nu * nu)
	return x / 2
}
