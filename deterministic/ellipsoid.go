package deterministic

import (
	"math"
)

// ellipsoid is the points of a class with (u−c)ᵀ C⁻¹ (u−c) ≤ radius², u the
// independent species in molecules.
type ellipsoid struct {
	m       int
	center  []float64
	cov     []float64
	inverse []float64
	radius  float64
}

// newEllipsoid takes the covariance of the independent species. Where that is
// singular to within rounding, because nothing moves some combination of them,
// each species is given the variance in addition that makes the core half a
// molecule wide.
func newEllipsoid(center, cov []float64, radius float64) *ellipsoid {
	m := len(center)
	e := &ellipsoid{m: m, center: center, cov: append([]float64(nil), cov...), radius: radius}
	if !e.invert() && m > 0 {
		for i := range m {
			e.cov[i*m+i] += 0.25 / (radius * radius)
		}
		if !e.invert() { // beyond what numbers hold: a ball of half a molecule
			e.cov, e.inverse = make([]float64, m*m), make([]float64, m*m)
			for i := range m {
				e.cov[i*m+i], e.inverse[i*m+i] = 0.25/(radius*radius), 4*radius*radius
			}
		}
	}
	return e
}

// invert sets the inverse; false where the correlation matrix is singular.
func (e *ellipsoid) invert() bool {
	f := newLU(e.m)
	sd := make([]float64, e.m)
	for i := range e.m {
		sd[i] = math.Sqrt(e.cov[i*e.m+i])
		if !(sd[i] > 0) {
			return false
		}
	}
	for i := range e.m {
		for j := range e.m {
			f.a[i*e.m+j] = e.cov[i*e.m+j] / sd[i] / sd[j]
		}
	}
	if !f.factor() {
		return false
	}
	e.inverse = f.inverse()
	if norm(e.inverse) > 1e12 {
		return false
	}
	for i := range e.m {
		for j := range e.m {
			e.inverse[i*e.m+j] /= sd[i] * sd[j]
		}
	}
	return true
}

// distance is the distance of the independent species u from the centre, in
// standard deviations along that direction.
func (e *ellipsoid) distance(u []float64) float64 {
	q := 0.0
	for i := range e.m {
		for j := range e.m {
			q += (u[i] - e.center[i]) * e.inverse[i*e.m+j] * (u[j] - e.center[j])
		}
	}
	return math.Sqrt(max(q, 0))
}

// gap is the factor by which both ellipsoids can be blown up until they touch,
// or slightly less: they are disjoint where it is above 1. They are where
// dᵀ(A/t + B/(1−t))⁻¹d > 1 for some t in (0, 1), with d the distance of the centres
// and A, B radius²·C of each: the half-space test with the best direction.
func gap(a, b *ellipsoid) float64 {
	best := 0.0
	for k := 1; k < 64; k++ {
		best = max(best, gapAt(a, b, float64(k)/64))
	}
	return math.Sqrt(best)
}

func gapAt(a, b *ellipsoid, t float64) float64 {
	m := a.m
	f := newLU(m)
	d := make([]float64, m)
	for i := range m {
		d[i] = a.center[i] - b.center[i]
		for j := range m {
			f.a[i*m+j] = a.radius*a.radius*a.cov[i*m+j]/t + b.radius*b.radius*b.cov[i*m+j]/(1-t)
		}
	}
	w := append([]float64(nil), d...)
	if !f.factor() {
		return 0
	}
	f.solve(w)
	return dot(d, w)
}
