package deterministic

import "math"

// line is a class of dimension 1: amounts base + link·t for t in (from, to).
type line struct {
	c        *class
	base     []float64
	from, to float64
}

// scanPoints is the number of points of a scan's even and each of its two
// logarithmic grids.
const scanPoints = 600

func newLine(c *class, high []float64) *line {
	l := &line{c: c, base: make([]float64, c.n), from: 0, to: math.Inf(1)}
	for k, d := range c.dependent {
		l.base[d] = c.total[k]
	}
	for i, v := range c.link {
		switch {
		case v > 0:
			l.from = max(l.from, -l.base[i]/v)
			l.to = min(l.to, (high[i]-l.base[i])/v)
		case v < 0:
			l.to = min(l.to, -l.base[i]/v)
			l.from = max(l.from, (high[i]-l.base[i])/v)
		}
	}
	return l
}

func (l *line) at(t float64, x []float64) []float64 {
	for i, v := range l.c.link {
		x[i] = max(l.base[i]+v*t, 0)
	}
	return x
}

// grid lists points inside the line in ascending order: evenly spread, and with
// evenly spread logarithms of the distance from either end.
func (l *line) grid() []float64 {
	width := l.to - l.from
	var out []float64
	for k := range scanPoints {
		q := (float64(k) + 0.5) / scanPoints
		small := width * math.Pow(10, -15*q)
		out = append(out, l.from+width*q, l.from+small, l.to-small)
	}
	return sortUnique(out, l.from, l.to)
}

// scanLine finds the resting states inside a class of dimension 1: sign changes
// of the rate along it, and points between where it touches zero or nearly so.
func (f *finder) scanLine(c *class) {
	l := newLine(c, f.high)
	if !(l.to > l.from) {
		return
	}
	x := make([]float64, c.n)
	i := c.independent[0]
	rate := func(t float64) float64 {
		f.w.sys.turnover(l.at(t, x), f.w.f, f.w.gross)
		if f.w.gross[i] == 0 {
			return 0
		}
		return f.w.f[i] / f.w.gross[i]
	}
	t := l.grid()
	v := make([]float64, len(t))
	for k := range t {
		v[k] = rate(t[k])
	}
	f.starts += len(t)
	for k := range t {
		switch {
		case v[k] == 0:
			f.tryRoot(c, l.at(t[k], x))
		case k > 0 && v[k-1]*v[k] < 0:
			f.bracketed(l, rate, t[k-1], t[k])
		case k > 1 && dips(v[k-2], v[k-1], v[k]):
			f.touching(l, rate, t[k-2], t[k])
		}
	}
}

// dips tells whether three values of one sign come nearest to 0 in the middle.
func dips(a, b, c float64) bool {
	return a*b > 0 && b*c > 0 && abs(b) <= abs(a) && abs(b) <= abs(c)
}

// bracketed finds the state between two points where the rate changes sign, by
// bisection and a Newton polish.
func (f *finder) bracketed(l *line, rate func(float64) float64, a, b float64) {
	va := rate(a)
	for range 200 {
		mid := a + (b-a)/2
		if mid <= a || mid >= b {
			break
		}
		v := rate(mid)
		if v == 0 {
			a, b = mid, mid
			break
		}
		if v*va < 0 {
			b = mid
		} else {
			a = mid
		}
	}
	f.tryRoot(l.c, l.at(a+(b-a)/2, make([]float64, l.c.n)))
}

// touching looks for the smallest |rate| between two points by golden section.
// Where the sign changes on the way there are two states; else one, degenerate,
// if the rate is 0 to within rounding.
func (f *finder) touching(l *line, rate func(float64) float64, a, b float64) {
	const golden = 0.6180339887498949
	from, to, side := a, b, rate(a)
	p, q := b-golden*(b-a), a+golden*(b-a)
	vp, vq := rate(p), rate(q)
	for range 100 {
		for k, v := range []float64{vp, vq} {
			if v*side < 0 {
				at := []float64{p, q}[k]
				f.bracketed(l, rate, from, at)
				f.bracketed(l, rate, at, to)
				return
			}
		}
		if abs(vp) < abs(vq) {
			b, q, vq = q, p, vp
			p = b - golden*(b-a)
			vp = rate(p)
		} else {
			a, p, vp = p, q, vq
			q = a + golden*(b-a)
			vq = rate(q)
		}
		if !(b-a > 4*epsilon*abs(b)) {
			break
		}
	}
	f.tryRoot(l.c, l.at(p, make([]float64, l.c.n)))
}
