package dwell

import "math"

// andersonDarling gives the statistic of Anderson and Darling (J. Am. Stat. Assoc.
// 49 (1954) 765) against the uniform law, for ascending u between 0 and 1.
func andersonDarling(u []float64) float64 {
	const least = 1e-15 // keeps the statistic finite for a dwell of time 0
	n := len(u)
	sum := 0.0
	for i := range u {
		low := math.Max(u[i], least)
		high := math.Max(1-u[n-1-i], least)
		sum += float64(2*i+1) * (math.Log(low) + math.Log(high))
	}
	return -float64(n) - sum/float64(n)
}

// farTail is the value beyond which the tail comes from its leading term.
const farTail = 6

// andersonDarlingTail gives the chance of a statistic above z for n uniform
// numbers, to about 2e-5 below farTail (Marsaglia and Marsaglia, J. Stat. Software
// 9 (2004) 2) and to 5 % of itself beyond (the leading term of
// Zolotarev, Theory Probab. Appl. 6 (1961) 201: the statistic is, for many
// numbers, Σ χ²ⱼ/(j(j+1)), and the product of that result telescopes to √3).
func andersonDarlingTail(n int, z float64) float64 {
	if z > farTail {
		return math.Sqrt(3) * math.Erfc(math.Sqrt(z))
	}
	limit := andersonDarlingLimit(z)
	return math.Max(0, math.Min(1, 1-limit-andersonDarlingShift(float64(n), limit)))
}

// andersonDarlingLimit is the distribution function for infinitely many numbers.
func andersonDarlingLimit(z float64) float64 {
	if z <= 0 {
		return 0
	}
	if z < 2 {
		p := 2.00012 + (0.247105-(0.0649821-(0.0347962-(0.011672-0.00168691*z)*z)*z)*z)*z
		return math.Exp(-1.2337141/z) / math.Sqrt(z) * p
	}
	p := 1.0776 - (2.30695-(0.43424-(0.082433-(0.008056-0.0003146*z)*z)*z)*z)*z
	return math.Exp(-math.Exp(p))
}

// andersonDarlingShift is what n numbers add to the limit x of the distribution function.
func andersonDarlingShift(n, x float64) float64 {
	c := 0.01265 + 0.1757/n
	switch {
	case x > 0.8:
		return (-130.2137 + (745.2337-(1705.091-(1950.646-(1116.360-255.7844*x)*x)*x)*x)*x) / n
	case x < c:
		v := x / c
		return math.Sqrt(v) * (1 - v) * (49*v - 102) * (0.0037/(n*n) + 0.00078/n + 0.00006) / n
	}
	v := (x - c) / (0.8 - c)
	p := -0.00022633 + (6.54034-(14.6538-(14.458-(8.259-1.91864*v)*v)*v)*v)*v
	return p * (0.04213 + 0.01365/n) / n
}
