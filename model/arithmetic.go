package model

import "math"

// Apply gives the value of one operator or function; arguments that op does not
// take are ignored.
func Apply(op Op, a, b, c float64) float64 {
	switch op {
	case OpAdd:
		return a + b
	case OpSub:
		return a - b
	case OpMul:
		return a * b
	case OpDiv:
		return a / b
	case OpPow:
		return power(a, b)
	case OpNeg:
		return -a
	case OpExp:
		return math.Exp(a)
	case OpLog:
		return math.Log(a)
	case OpSqrt:
		return math.Sqrt(a)
	case OpMin:
		return math.Min(a, b)
	case OpMax:
		return math.Max(a, b)
	case OpAbs:
		return math.Abs(a)
	case OpHill:
		return hill(a, b, c)
	case OpHillFall:
		return hill(b, a, c)
	}
	return math.NaN()
}

// power is math.Pow with the small whole exponents multiplied out, which is
// both faster and, for 2 and 3, exact to the last rounding.
func power(a, b float64) float64 {
	switch b {
	case 1:
		return a
	case 2:
		return a * a
	case 3:
		return a * a * a
	case 4:
		a *= a
		return a * a
	}
	return math.Pow(a, b)
}

// hill is xⁿ/(kⁿ+xⁿ), written so that neither power can overflow: only powers
// not above 1 are formed.
func hill(x, k, n float64) float64 {
	switch {
	case x == 0 && k == 0:
		return math.NaN()
	case (x <= k) == (n >= 0):
		q := power(x/k, n)
		return q / (1 + q)
	default:
		return 1 / (1 + power(k/x, n))
	}
}
