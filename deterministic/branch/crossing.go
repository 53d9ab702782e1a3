package branch

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// crossingSystem is the equations of a point where branches meet, a singular point
// of the equations of rest F(u) = 0 with one knob: with the left null vector ψ of
// all their derivatives and a slack μ that is 0 there,
//
//	F(u) + μψ = 0,  F_uᵀψ = 0,  ψᵀψ = 1.
//
// At a simple crossing it is regular: Moore, SIAM J. Numer. Anal. 17 (1980) 567.
// Unknowns are u, μ, ψ; F is scaled by equation, u in the ruler's units.
type crossingSystem struct {
	f             *field
	weight, scale []float64
}

func newCrossingSystem(f *field, u, weight []float64) *crossingSystem {
	s := &crossingSystem{f: f, weight: weight, scale: make([]float64, f.n)}
	a := s.raw(u)
	for i := range f.n {
		s.scale[i] = 1
		if size := largest(a[i*f.columns() : (i+1)*f.columns()]); size > 0 && !math.IsInf(size, 1) {
			s.scale[i] = 1 / size
		}
	}
	return s
}

// raw is F_u in the ruler's units, not scaled.
func (s *crossingSystem) raw(u []float64) []float64 {
	n, cols := s.f.n, s.f.columns()
	a := make([]float64, n*cols)
	s.f.evaluate(u, make([]float64, n), a)
	for i := range n {
		floats.Mul(a[i*cols:(i+1)*cols], s.weight)
	}
	return a
}

// scaled is F_u in the ruler's units, scaled.
func (s *crossingSystem) scaled(u []float64) []float64 {
	a := s.raw(u)
	for i, v := range s.scale {
		floats.Scale(v, a[i*s.f.columns():(i+1)*s.f.columns()])
	}
	return a
}

func (s *crossingSystem) columns() int { return 2*s.f.n + 2 }

func (s *crossingSystem) evaluate(z, out, jac []float64) {
	n, cols, width := s.f.n, s.f.columns(), s.columns()
	u, slack, psi := z[:cols], z[cols], z[cols+1:]
	rest := make([]float64, n)
	s.f.evaluate(u, rest, make([]float64, n*cols))
	a := s.scaled(u)
	clear(out)
	clear(jac)
	for i := range n {
		out[i] = s.scale[i]*rest[i] + slack*psi[i]
		for j := range cols {
			out[n+j] += a[i*cols+j] * psi[i]
			jac[i*width+j] = a[i*cols+j] / s.weight[j]
			jac[(n+j)*width+cols+1+i] = a[i*cols+j]
		}
		jac[i*width+cols] = psi[i]
		jac[i*width+cols+1+i] = slack
		jac[(width-1)*width+cols+1+i] = 2 * psi[i]
	}
	out[width-1] = floats.Dot(psi, psi) - 1
	s.bend(u, psi, jac)
}

// bend writes the second derivatives of ψᵀF, by differences.
func (s *crossingSystem) bend(u, psi, jac []float64) {
	n, cols, width := s.f.n, s.f.columns(), s.columns()
	for l := range cols {
		d := make([]float64, cols)
		d[l] = s.weight[l]
		change := s.second(u, d)
		for j := range cols {
			sum := 0.0
			for i := range n {
				sum += psi[i] * change[i*cols+j]
			}
			jac[(n+j)*width+l] = sum / s.weight[l]
		}
	}
}

// second is the derivative of scaled along d.
func (s *crossingSystem) second(u, d []float64) []float64 {
	n, cols := s.f.n, s.f.columns()
	change := s.f.jacobianAlong(u, d, make([]float64, n*cols), make([]float64, n*cols))
	for i := range n {
		for j := range cols {
			change[i*cols+j] *= s.scale[i] * s.weight[j]
		}
	}
	return change
}

// crossing is a converged point where branches meet, with the directions of the
// two, in the ruler's units and of length 1.
type crossing struct {
	u, weight  []float64
	null, left []float64 // of the Jacobian in the amounts, Σ left·null = 1
	kind       Kind
	directions [][]float64
}

// locateCrossing solves for the point near u where branches meet.
func locateCrossing(f *field, u, weight []float64) (*crossing, bool) {
	n, cols := f.n, f.columns()
	s := newCrossingSystem(f, u, weight)
	left, _, ok := nullSpace(s.scaled(u), n, cols)
	if !ok {
		return nil, false
	}
	z := append(append(append([]float64(nil), u...), 0), left...)
	unit := append([]float64(nil), weight...)
	for range n + 1 {
		unit = append(unit, 1)
	}
	if !newton(s, z, unit) {
		return nil, false
	}
	for i := range n {
		if math.Abs(z[i]) < 1e-12*weight[i] {
			z[i] = 0
		}
	}
	return s.crossing(z[:cols], z[cols+1:])
}

// nullSpace gives the left vector of the smallest singular value of an n×cols
// matrix, cols = n+1, and the right vectors of that and of 0.
func nullSpace(a []float64, n, cols int) (left []float64, right [2][]float64, ok bool) {
	var svd mat.SVD
	if math.IsInf(largest(a), 1) || !svd.Factorize(mat.NewDense(n, cols, a), mat.SVDFull) {
		return nil, right, false
	}
	var l, r mat.Dense
	svd.UTo(&l)
	svd.VTo(&r)
	right[0], right[1] = mat.Col(nil, cols-2, &r), mat.Col(nil, cols-1, &r)
	return mat.Col(nil, n-1, &l), right, true
}

// flatKnob is the knob's share of a direction below which it counts as none.
const flatKnob = 1e-5

// crossing solves the quadratic form of the branches' directions: Σ ψᵀF_uu dd = 0
// for d in the null space (Keller 1977).
func (s *crossingSystem) crossing(u, psi []float64) (*crossing, bool) {
	n, cols := s.f.n, s.f.columns()
	_, basis, ok := nullSpace(s.scaled(u), n, cols)
	if !ok {
		return nil, false
	}
	c := &crossing{u: append([]float64(nil), u...), weight: s.weight, kind: Crossing}
	s.setNull(c, psi, basis)
	a, b, d := s.form(u, psi, basis)
	c.directions = directions(basis, a, b, d)
	if c.directions == nil {
		return c, true
	}
	c.kind = Transcritical
	for _, t := range c.directions {
		if math.Abs(t[n]) < flatKnob {
			c.kind = Pitchfork
		}
	}
	return c, true
}

// form gives ψᵀF_uu on the basis of the null space: 11, 12, 22.
func (s *crossingSystem) form(u, psi []float64, basis [2][]float64) (a, b, d float64) {
	value := func(p, q []float64) float64 {
		step := make([]float64, len(p))
		floats.MulTo(step, p, s.weight)
		change := s.second(u, step)
		sum := 0.0
		for i, w := range psi {
			sum += w * floats.Dot(change[i*len(q):(i+1)*len(q)], q)
		}
		return sum
	}
	return value(basis[0], basis[0]), value(basis[0], basis[1]), value(basis[1], basis[1])
}

// directions gives the unit vectors on which the form a,b,d vanishes; nil where
// there are not two.
func directions(basis [2][]float64, a, b, d float64) [][]float64 {
	disc := b*b - a*d
	size := math.Max(math.Abs(b), math.Max(math.Abs(a), math.Abs(d)))
	if !(disc > 1e-8*size*size) {
		return nil
	}
	// (α, β) with aα² + 2bαβ + dβ² = 0: α = q, β = a... both roots without cancellation
	q := -(b + math.Copysign(math.Sqrt(disc), b))
	pairs := [2][2]float64{{q, a}, {d, q}}
	var out [][]float64
	for _, p := range pairs {
		t := make([]float64, len(basis[0]))
		floats.AddScaled(t, p[0], basis[0])
		floats.AddScaled(t, p[1], basis[1])
		unitLength(t)
		out = append(out, t)
	}
	return out
}

// setNull finds the null vector of the Jacobian in the amounts: the combination of
// the basis without a share of the knob.
func (s *crossingSystem) setNull(c *crossing, psi []float64, basis [2][]float64) {
	n := s.f.n
	c.null, c.left = make([]float64, n), make([]float64, n)
	p, q := basis[1][n], -basis[0][n]
	if math.Hypot(p, q) < flatKnob { // both are without it
		p, q = 1, 0
	}
	product := 0.0
	for j := range n {
		c.null[j] = (p*basis[0][j] + q*basis[1][j]) * s.weight[j]
		c.left[j] = psi[j] * s.scale[j]
	}
	for _, i := range s.f.independent {
		product += c.left[i] * c.null[i]
	}
	for j := range n {
		c.left[j] /= product
	}
}

// mark gives the crossing's mark on a branch that passes it in the direction t, in
// the ruler's units.
func (c *crossing) mark(f *field) Mark {
	m := Mark{Kind: c.kind, Knob: c.u[f.n], Amounts: append([]float64(nil), c.u[:f.n]...)}
	m.setNull(f, c.weight, c.null, c.left)
	return m
}
