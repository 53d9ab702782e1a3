package action

import "math"

// A local is the Hamiltonian at one point of a path. It is scratch: one a goroutine.
type local struct {
	sys   *system
	x     []float64   // amounts
	rate  []float64   // a_r by channel
	slope [][]float64 // ∂a_r/∂z by channel
	// At the momenta last tried: the exponent G_r of each channel, its derivative
	// g_r in the momenta, and H, H_θ, and H_θθ, or the factor of it.
	exponent []float64
	along    [][]float64
	h        float64
	hp       []float64
	hpp      []float64

	gradient      []float64 // by species
	u, w, step    []float64
	trial, column []float64
	second        []float64 // n×n
	crossed       []float64 // m×m: H_θz
}

func newLocal(s *system) *local {
	l := &local{
		sys: s, x: make([]float64, s.n), rate: make([]float64, len(s.channels)), exponent: make([]float64, len(s.channels)),
		hp: make([]float64, s.m), hpp: make([]float64, s.m*s.m), gradient: make([]float64, s.n),
		u: make([]float64, s.m), w: make([]float64, s.m), step: make([]float64, s.m), trial: make([]float64, s.m),
		column: make([]float64, s.n), second: make([]float64, s.n*s.n), crossed: make([]float64, s.m*s.m),
	}
	for range s.channels {
		l.slope = append(l.slope, make([]float64, s.m))
		l.along = append(l.along, make([]float64, s.m))
	}
	return l
}

// at moves to coordinates z; false where an amount or a rate is below 0, or a
// rate not finite.
func (l *local) at(z []float64) bool {
	l.sys.amounts(z, l.x)
	for _, v := range l.x {
		if !(v >= 0) {
			return false
		}
	}
	for c := range l.sys.channels {
		l.rate[c] = l.sys.net.Flux(l.sys.channels[c].reaction, l.x)
		if !(l.rate[c] >= 0 && l.rate[c] <= math.MaxFloat64) {
			return false
		}
	}
	return true
}

// slopes finds the derivatives of the rates at the point of at.
func (l *local) slopes() {
	for c := range l.sys.channels {
		l.sys.net.FluxGradient(l.sys.channels[c].reaction, l.x, l.gradient)
		l.project(l.gradient, l.slope[c])
	}
}

// project turns a gradient by species into one in coordinates.
func (l *local) project(gradient, out []float64) {
	clear(out)
	for i, v := range gradient {
		if v != 0 {
			addScaled(out, v, l.sys.frame[i*l.sys.m:(i+1)*l.sys.m])
		}
	}
}

// evaluate finds H and its derivatives in the momenta p; false where a burst's
// generating function has none, or a value is not finite.
func (l *local) evaluate(p []float64) bool {
	m := l.sys.m
	l.h = 0
	clear(l.hp)
	clear(l.hpp)
	for c := range l.sys.channels {
		ch := &l.sys.channels[c]
		g := l.along[c]
		copy(g, ch.change)
		l.exponent[c] = dot(ch.change, p)
		a := l.rate[c]
		if len(ch.bursts) > 0 && !l.addBursts(c, p) {
			return false
		}
		if a == 0 {
			continue
		}
		l.h += a * math.Expm1(l.exponent[c])
		weight := a * math.Exp(l.exponent[c])
		addScaled(l.hp, weight, g)
		l.addOuter(weight, g)
		for _, b := range ch.bursts {
			_, first := b.cumulant(dot(b.change, p))
			l.addOuter(weight*first*(1+first), b.change)
		}
	}
	return l.h <= math.MaxFloat64 && m > 0
}

// cumulant gives the logarithm of the generating function of a geometric number
// of mean m at e^p, −log(1+m−m e^p), and its derivative; the second derivative is
// first·(1+first). Beyond the pole the first is NaN.
func (b *burst) cumulant(p float64) (value, first float64) {
	e := math.Expm1(p)
	below := 1 - b.mean*e
	if !(below > 0) {
		return math.NaN(), math.NaN()
	}
	return -math.Log1p(-b.mean * e), b.mean * math.Exp(p) / below
}

// addBursts adds the bursts of channel c to its exponent and its derivative.
func (l *local) addBursts(c int, p []float64) bool {
	for i := range l.sys.channels[c].bursts {
		b := &l.sys.channels[c].bursts[i]
		value, first := b.cumulant(dot(b.change, p))
		if math.IsNaN(value) {
			return false
		}
		l.exponent[c] += value
		addScaled(l.along[c], first, b.change)
	}
	return true
}

// addOuter adds weight·g gᵀ to H_θθ.
func (l *local) addOuter(weight float64, g []float64) {
	m := l.sys.m
	for i, v := range g {
		if v != 0 {
			addScaled(l.hpp[i*m:(i+1)*m], weight*v, g)
		}
	}
}
