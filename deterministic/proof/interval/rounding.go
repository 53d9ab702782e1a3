package interval

import "math"

// prev and next are the floating-point numbers below and above x; −Inf and +Inf
// are their own.
func prev(x float64) float64 {
	switch {
	case x > 0:
		return math.Float64frombits(math.Float64bits(x) - 1)
	case x < -math.MaxFloat64:
		return x
	case x < 0:
		return math.Float64frombits(math.Float64bits(x) + 1)
	}
	return -math.SmallestNonzeroFloat64
}

func next(x float64) float64 { return -prev(-x) }

// sumError is a+b−s for s = a+b rounded, exactly (Knuth's sum of two); not a
// number where s overflows.
func sumError(a, b, s float64) float64 {
	t := s - a
	return (a - (s - t)) + (b - t)
}

// addDown is the largest floating-point number ≤ a+b. Where the error is not a
// number the sum overflowed or a term was infinite, and the step down is right for
// both: from +Inf to the largest number, and from −Inf to itself.
func addDown(a, b float64) float64 {
	s := a + b
	if sumError(a, b, s) >= 0 {
		return s
	}
	return prev(s)
}

func addUp(a, b float64) float64 {
	s := a + b
	if sumError(a, b, s) <= 0 {
		return s
	}
	return next(s)
}

func subUp(a, b float64) float64 { return addUp(a, -b) }

// tiny is the size below which the error of a product may itself underflow: it
// is a multiple of 2⁻¹⁰⁷⁴, and of the last place of the product squared, 2⁻¹⁰⁶
// of the product, only while the product is above 2⁻⁹⁶⁸.
const tiny = 0x1p-960

// mulDown is a bound below ab, the nearest unless ab is below 2⁻⁹⁶⁰; 0·Inf is 0.
func mulDown(a, b float64) float64 {
	p := a * b
	if math.Abs(p) > tiny {
		if math.FMA(a, b, -p) >= 0 {
			return p
		}
		return prev(p)
	}
	switch {
	case a == 0 || b == 0:
		return 0
	case (a > 0) == (b > 0):
		return max(prev(p), 0)
	}
	return prev(p)
}

func mulUp(a, b float64) float64 { return -mulDown(-a, b) }

// divDown is a bound below a/b for b ≠ 0, the nearest unless a or a/b is tiny: the
// remainder a−qb of the rounded quotient q is exact. Inf/Inf does not arise.
func divDown(a, b float64) float64 {
	if a == 0 || math.IsInf(b, 0) {
		return divDownLimit(a, b)
	}
	q := a / b
	if math.Abs(q) > tiny && math.Abs(a) > tiny {
		rest := math.FMA(-q, b, a)
		if rest == 0 || (rest > 0) == (b > 0) {
			return q
		}
		return prev(q)
	}
	if (a > 0) == (b > 0) {
		return max(prev(q), 0)
	}
	return prev(q)
}

// divDownLimit is a/b where a is 0, or b is infinite and stands for all that is
// large: a bound of the quotients' limit.
func divDownLimit(a, b float64) float64 {
	if math.IsInf(a, 0) {
		if (a > 0) == (b > 0) {
			return 0
		}
		return math.Inf(-1)
	}
	return 0
}

func divUp(a, b float64) float64 { return -divDown(-a, b) }

// sqrtDown is a bound below √a, a ≥ 0, the nearest unless a is tiny.
func sqrtDown(a float64) float64 {
	s := math.Sqrt(a)
	if a > tiny && a <= math.MaxFloat64 {
		if math.FMA(-s, s, a) >= 0 {
			return s
		}
		return prev(s)
	}
	if a == 0 || a > math.MaxFloat64 {
		return s
	}
	return prev(s)
}

func sqrtUp(a float64) float64 {
	s := math.Sqrt(a)
	if a > tiny && a <= math.MaxFloat64 {
		if math.FMA(-s, s, a) <= 0 {
			return s
		}
		return next(s)
	}
	if a == 0 || a > math.MaxFloat64 {
		return s
	}
	return next(s)
}
