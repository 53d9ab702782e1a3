package interval

// largestWhole is the largest exponent, either sign, that is multiplied out.
const largestWhole = 1024

// powDown and powUp bound xⁿ for x ≥ 0 and n ≥ 1 by repeated squaring, each
// product rounded in the one direction, which is right since all are ≥ 0.
func powDown(x float64, n int) float64 {
	out := 1.0
	for {
		if n&1 == 1 {
			out = mulDown(out, x)
		}
		if n >>= 1; n == 0 {
			return out
		}
		x = mulDown(x, x)
	}
}

func powUp(x float64, n int) float64 {
	out := 1.0
	for {
		if n&1 == 1 {
			out = mulUp(out, x)
		}
		if n >>= 1; n == 0 {
			return out
		}
		x = mulUp(x, x)
	}
}

// PowInt is the set of n-th powers; x⁰ is 1.
func (a Interval) PowInt(n int) Interval {
	switch {
	case a.IsEmpty():
		return a
	case n == 0:
		return Point(1)
	case n == 1:
		return a
	case n < 0:
		return Point(1).Div(a.PowInt(-n))
	case a.Lo >= 0:
		return Interval{powDown(a.Lo, n), powUp(a.Hi, n)}
	case n%2 == 0:
		return Interval{powDown(a.Mig(), n), powUp(a.Mag(), n)}
	case a.Hi <= 0:
		return Interval{-powUp(-a.Lo, n), -powDown(-a.Hi, n)}
	}
	return Interval{-powUp(-a.Lo, n), powUp(a.Hi, n)}
}

// Root is the set of the numbers y ≥ 0 with yⁿ in a, n > 0.
func (a Interval) Root(n Interval) Interval {
	if n.IsPoint() && n.Lo == 2 {
		return a.Sqrt()
	}
	if n.IsPoint() && n.Lo == 1 {
		return Interval{max(a.Lo, 0), a.Hi}
	}
	return a.Pow(Point(1).Div(n))
}

// RootInt is the hull of the numbers y of old with yⁿ in a, n ≥ 1.
func (a Interval) RootInt(n int, old Interval) Interval {
	if n == 1 {
		return old.Meet(a)
	}
	p := Point(float64(n))
	if n%2 == 1 {
		return old.Meet(oddRoot(a, p))
	}
	up := a.Root(p)
	if old.Lo >= 0 {
		return old.Meet(up)
	}
	return old.Meet(up).Hull(old.Meet(up.Neg()))
}

func oddRoot(a, p Interval) Interval {
	switch {
	case a.IsEmpty():
		return a
	case a.Lo >= 0:
		return a.Root(p)
	case a.Hi <= 0:
		return a.Neg().Root(p).Neg()
	}
	return Interval{-Interval{0, -a.Lo}.Root(p).Hi, Interval{0, a.Hi}.Root(p).Hi}
}
