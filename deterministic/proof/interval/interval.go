package interval

import (
	"fmt"
	"math"
)

// An Interval is the set of the real numbers from Lo to Hi, both included. Lo may
// be −Inf and Hi +Inf, which stand for "no bound". It is empty unless Lo ≤ Hi.
type Interval struct{ Lo, Hi float64 }

// Point is the interval that holds x alone.
func Point(x float64) Interval { return Interval{x, x} }

// Whole is the real line.
func Whole() Interval { return Interval{math.Inf(-1), math.Inf(1)} }

// Empty is the empty set.
func Empty() Interval { return Interval{math.Inf(1), math.Inf(-1)} }

// IsEmpty tells whether a holds no number.
func (a Interval) IsEmpty() bool { return !(a.Lo <= a.Hi) }

// IsPoint tells whether a holds one number.
func (a Interval) IsPoint() bool { return a.Lo == a.Hi }

// Bounded tells whether a is not empty and both of its bounds are finite.
func (a Interval) Bounded() bool {
	return a.Lo <= a.Hi && a.Lo >= -math.MaxFloat64 && a.Hi <= math.MaxFloat64
}

// Has tells whether x lies in a.
func (a Interval) Has(x float64) bool { return a.Lo <= x && x <= a.Hi }

// In tells whether a lies in b.
func (a Interval) In(b Interval) bool { return a.IsEmpty() || (b.Lo <= a.Lo && a.Hi <= b.Hi) }

// Inside tells whether a, not empty, lies in the interior of b.
func (a Interval) Inside(b Interval) bool { return b.Lo < a.Lo && a.Lo <= a.Hi && a.Hi < b.Hi }

// Meet is the intersection of a and b.
func (a Interval) Meet(b Interval) Interval {
	if b.Lo > a.Lo {
		a.Lo = b.Lo
	}
	if b.Hi < a.Hi {
		a.Hi = b.Hi
	}
	return a
}

// Hull is the smallest interval that holds both a and b.
func (a Interval) Hull(b Interval) Interval {
	switch {
	case a.IsEmpty():
		return b
	case b.IsEmpty():
		return a
	}
	return Interval{min(a.Lo, b.Lo), max(a.Hi, b.Hi)}
}

// Width is the length of a, rounded up; 0 where it is empty.
func (a Interval) Width() float64 {
	if a.IsEmpty() {
		return 0
	}
	return subUp(a.Hi, a.Lo)
}

// Mid is a finite number of a near its middle; a must not be empty. Where one
// bound is infinite it is a number beyond the other, where both are it is 0.
func (a Interval) Mid() float64 {
	switch {
	case a.Lo < -math.MaxFloat64 && a.Hi > math.MaxFloat64:
		return 0
	case a.Hi > math.MaxFloat64:
		return min(max(1, 2*math.Abs(a.Lo)+a.Lo), math.MaxFloat64)
	case a.Lo < -math.MaxFloat64:
		return max(min(-1, a.Hi-2*math.Abs(a.Hi)), -math.MaxFloat64)
	}
	m := a.Lo/2 + a.Hi/2
	return min(max(m, a.Lo), a.Hi)
}

// Mag is the largest absolute value in a.
func (a Interval) Mag() float64 { return max(math.Abs(a.Lo), math.Abs(a.Hi)) }

// Mig is the smallest absolute value in a.
func (a Interval) Mig() float64 {
	switch {
	case a.Lo > 0:
		return a.Lo
	case a.Hi < 0:
		return -a.Hi
	}
	return 0
}

// String writes the bounds with the digits that tell them apart from other
// floating-point numbers.
func (a Interval) String() string {
	if a.IsEmpty() {
		return "[empty]"
	}
	return fmt.Sprintf("[%v, %v]", a.Lo, a.Hi)
}
