package branch

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"holdfast/deterministic"
)

// reduced gives the Jacobian on the compatibility class at u, m×m in the
// independent species, in molecules: how a change of their counts grows.
func (f *field) reduced(u []float64) []float64 {
	n, cols, m := f.n, f.columns(), len(f.independent)
	jac := make([]float64, n*cols)
	f.evaluate(u, make([]float64, n), jac)
	out := make([]float64, m*m)
	for p, i := range f.independent {
		for k := range n {
			v := jac[i*cols+k] * f.unit(i) / f.unit(k)
			if v == 0 {
				continue
			}
			for q := range m {
				out[p*m+q] += v * f.link[k*m+q]
			}
		}
	}
	return out
}

// eigenvalues gives those of the Jacobian on the class at u, by real part
// descending, the positive one of a complex pair first; nil where the derivatives
// are not finite. Species are balanced by weight.
func (f *field) eigenvalues(u, weight []float64) []complex128 {
	m := len(f.independent)
	if m == 0 {
		return nil
	}
	a := f.reduced(u)
	for p, i := range f.independent {
		for q, j := range f.independent {
			a[p*m+q] *= weight[j] * f.unit(j) / (weight[i] * f.unit(i))
		}
	}
	var e mat.Eigen
	if math.IsInf(largest(a), 1) || !e.Factorize(mat.NewDense(m, m, a), mat.EigenNone) {
		return nil
	}
	values := e.Values(nil)
	slices.SortFunc(values, func(a, b complex128) int {
		if real(a) != real(b) {
			return compare(real(b), real(a))
		}
		return compare(imag(b), imag(a))
	})
	return values
}

func compare(a, b float64) int {
	switch {
	case a < b:
		return -1
	case a > b:
		return 1
	}
	return 0
}

// unstable counts the eigenvalues with positive real part.
func unstable(values []complex128) int {
	count := 0
	for _, v := range values {
		if real(v) > 0 {
			count++
		}
	}
	return count
}

// slowRate is the smallest |Re λ|; +Inf where there is none.
func slowRate(values []complex128) float64 {
	rate := math.Inf(1)
	for _, v := range values {
		rate = min(rate, math.Abs(real(v)))
	}
	return rate
}

// pairs is the test function of Hopf points: the product over pairs of eigenvalues
// of their sums (the determinant of the bialternate product; Guckenheimer, Myers,
// Sturmfels, SIAM J. Numer. Anal. 34 (1997) 1), here its sign times its smallest
// real factor. The frequency is the imaginary part of the pair of that factor, 0
// where the two are real.
func pairs(values []complex128) (test, frequency float64) {
	sign := 1.0
	test = math.Inf(1)
	for i, a := range values {
		for _, b := range values[i+1:] {
			sum := a + b
			if imag(sum) != 0 || (imag(a) != 0 && real(a) != real(b)) {
				continue // comes with its conjugate: the product of both is positive
			}
			if real(sum) < 0 {
				sign = -sign
			}
			if s := math.Abs(real(sum)); s < test {
				test, frequency = s, math.Abs(imag(a))
			}
		}
	}
	return sign * test, frequency
}

// covariance gives the linear-noise covariance at a stable u in molecules², species
// by species in row-major order; nil where there is none.
func (f *field) covariance(u, weight []float64) []float64 {
	m := len(f.independent)
	a, d := f.reduced(u), f.diffusion(u)
	size := make([]float64, m)
	for p, i := range f.independent {
		size[p] = math.Sqrt(max(weight[i]*f.unit(i), 1e-300))
	}
	e := make([]float64, m*m)
	for p, i := range f.independent {
		for q, j := range f.independent {
			a[p*m+q] *= size[q] / size[p]
			e[p*m+q] = d[i*f.n+j] / (size[p] * size[q])
		}
	}
	c, ok := deterministic.Lyapunov(a, e, m)
	if !ok || math.IsInf(largest(c), 1) {
		return nil
	}
	for p := range m {
		for q := range m {
			c[p*m+q] *= size[p] * size[q]
		}
	}
	return f.extend(c)
}

// extend is link·C·linkᵀ, in molecules.
func (f *field) extend(c []float64) []float64 {
	m := len(f.independent)
	out := make([]float64, f.n*f.n)
	if m == 0 {
		return out
	}
	link := mat.NewDense(f.n, m, f.link)
	full := mat.NewDense(f.n, f.n, out)
	full.Product(link, mat.NewDense(m, m, c), link.T())
	return out
}

// diffusion gives the matrix of the linear noise at u, molecules² per unit of
// time: Σ propensity·⟨ΔΔᵀ⟩ over the reactions, Δ the change of counts by one
// firing. A geometric burst of mean b has variance b + b².
func (f *field) diffusion(u []float64) []float64 {
	f.turn(u[f.n:])
	d := make([]float64, f.n*f.n)
	for i := range f.channels {
		c := &f.channels[i]
		a := c.law.Eval(u[:f.n], f.constants)
		if c.scaling {
			a *= f.copies
		}
		change := make([]float64, f.n)
		for _, t := range c.terms {
			change[t.species] += t.count
			if t.mean != nil {
				b := t.mean.Eval(nil, f.constants)
				change[t.species] += b
				d[t.species*f.n+t.species] += a * b * (1 + b)
			}
		}
		for p, v := range change {
			for q, w := range change {
				d[p*f.n+q] += a * v * w
			}
		}
	}
	return d
}
