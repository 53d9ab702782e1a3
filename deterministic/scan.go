package deterministic

import "math"

// line is a class of dimension 1: amounts base + link·t for t in (from, to).
type line struct {
	c        *class
	base     []float64
	from, to float64
}

func newLine(c *class, low, high []float64) *line {
	l := &line{c: c, base: make([]float64, c.n), from: 0, to: math.Inf(1)}
	for k, d := range c.dependent {
		l.base[d] = c.total[k]
	}
	for i, v := range c.link {
		switch {
		case v > 0:
			l.from = max(l.from, (low[i]-l.base[i])/v)
			l.to = min(l.to, (high[i]-l.base[i])/v)
		case v < 0:
			l.to = min(l.to, (low[i]-l.base[i])/v)
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

// scanLine finds the resting states inside a class of dimension 1: the stretches
// of the line where the rate along it may vanish, by interval arithmetic, and the
// states on each.
func (f *finder) scanLine(c *class) {
	l := newLine(c, f.low, f.high)
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
	v := &vanisher{s: f.w.sys, l: l, e: newEncloser()}
	v.run()
	f.starts += v.boxes
	f.scanned = f.scanned && !v.spent
	for _, p := range v.pieces {
		if !p.monotone && p.to-p.from > 1e-3*p.to && f.flat(l, p) {
			f.drift(c, l.at(middle(p.from, p.to), x))
			continue
		}
		a, b := rate(p.from), rate(p.to)
		switch {
		case a == 0:
			f.tryRoot(c, l.at(p.from, x))
		case b == 0:
			f.tryRoot(c, l.at(p.to, x))
		case a*b < 0:
			f.bracketed(l, rate, p.from, p.to)
		case !p.monotone:
			f.touching(l, rate, p.from, p.to)
		}
	}
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
