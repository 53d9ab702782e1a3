package branch

import (
	"math"
)

// fold is what is known at a converged fold, in amounts and time.
type fold struct {
	u, weight   []float64
	null, left  []float64 // Σ left·null = 1 over the independent species
	quadratic   float64   // leftᵀ F_xx null null
	push        []float64 // leftᵀ F_p, by knob
	transversal float64   // |leftᵀ F_p| over its largest possible size, of the first knob
}

// locateFold solves for the fold near u in the first knob.
func locateFold(f *field, u, weight []float64) (*fold, bool) {
	s, ok := newFoldSystem(f, u, weight)
	if !ok {
		return nil, false
	}
	v := append([]float64(nil), u...)
	if !newton(s, v, weight) || !s.renew(v, weight) {
		return nil, false
	}
	return s.fold(v), true
}

// fold reads the normal form at u, where the borders are the null vectors.
func (s *foldSystem) fold(u []float64) *fold {
	n, cols := s.f.n, s.f.columns()
	out := &fold{u: u, weight: s.weight, null: make([]float64, n), left: make([]float64, n), push: make([]float64, s.f.knobs)}
	for j := range n {
		out.null[j] = s.weight[j] * s.right[j]
		out.left[j] = s.left[j] * s.scale[j]
	}
	product := 0.0
	for _, i := range s.f.independent {
		product += out.left[i] * out.null[i]
	}
	size, sum := 0.0, 0.0
	for i := range n {
		out.left[i] /= product
		for k := range out.push {
			out.push[k] += out.left[i] * s.jac[i*cols+n+k]
		}
		slope := s.jac[i*cols+n] * s.scale[i]
		sum += s.left[i] * slope
		size += slope * slope
	}
	out.transversal = math.Abs(sum) / math.Sqrt(size)
	for i, e := range s.f.expand(u, out.null) {
		out.quadratic += 2 * out.left[i] * e[2]
	}
	return out
}

// leastTransversal is the transversality below which a turn is no fold but a place
// where branches meet: there it is 0 to within the root of rounding.
const leastTransversal = 1e-6

// mark gives the fold's mark.
func (d *fold) mark(f *field) Mark {
	m := Mark{Kind: Fold, Knob: d.u[f.n], Amounts: append([]float64(nil), d.u[:f.n]...), Turns: true, Opens: 1}
	m.Bend = d.quadratic / m.setNull(f, d.weight, d.null, d.left)
	drive := -2 * d.quadratic * d.push[0]
	m.RateCoefficient = math.Sqrt(math.Abs(drive))
	if drive < 0 {
		m.Opens = -1
	}
	return m
}

// setNull sets the null vectors on the side and of the size that Mark promises, and
// gives what null was divided by.
func (m *Mark) setNull(f *field, weight, null, left []float64) float64 {
	best := 0.0
	for i, v := range null {
		if r := v / weight[i]; math.Abs(r) > math.Abs(best) {
			best = r
		}
	}
	m.Null, m.Left = make([]float64, f.n), make([]float64, f.n)
	for i := range null {
		m.Null[i] = null[i] / best
	}
	for _, i := range f.independent {
		m.Left[i] = left[i] * best
	}
	return best
}
