package deterministic

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// sink is a region about a stable state that flows do not leave and that holds no
// other state: uᵀPu ≤ level for the independent species u relative to the state in
// units of scale.
type sink struct {
	center, scale []float64
	p             []float64
	level         float64
}

// inSink gives the stable state whose sink x lies in, or -1.
func (m *Map) inSink(x []float64) int {
	for k := range m.sinks {
		if m.sinks[k].value(m.class, x) <= m.sinks[k].level {
			return m.stateOf(k)
		}
	}
	return -1
}

// stateOf gives the index in States of the resting state that is root k: where the
// design declares cores their order differs.
func (m *Map) stateOf(k int) int {
	return slices.IndexFunc(m.States, func(s State) bool { return s.Name == m.names[k] })
}

func (s *sink) value(c *class, x []float64) float64 {
	m := c.dim()
	q := 0.0
	for a, i := range c.independent {
		for b, j := range c.independent {
			q += (x[i] - s.center[i]) / s.scale[i] * s.p[a*m+b] * (x[j] - s.center[j]) / s.scale[j]
		}
	}
	return q
}

// makeSinks finds a sink about each stable state: AᵀP + PA = −1 makes V = uᵀPu fall
// near the state (Lyapunov); its level is halved, from a quarter of the nearest
// other state's, until V falls at every sampled point of shells inside it.
func (m *Map) makeSinks() {
	w := newWorkspace(m.sys)
	for k, c := range m.roots {
		if !c.kind.Stable() {
			break
		}
		m.sinks = append(m.sinks, m.makeSink(w, k, c))
	}
}

func (m *Map) makeSink(w *workspace, k int, c *candidate) sink {
	d := m.class.dim()
	s := sink{center: c.x, scale: slices.Clone(c.scale), level: 1}
	for i := range s.scale {
		s.scale[i] = max(s.scale[i], m.resolution[i])
	}
	w.sys.jacobian(c.x, w.jac, w.grad)
	a := scaledRestriction(m.class, w.jac, s.scale)
	transposed, one := make([]float64, d*d), make([]float64, d*d)
	for i := range d {
		one[i*d+i] = 1
		for j := range d {
			transposed[i*d+j] = a[j*d+i]
		}
	}
	var ok bool
	if s.p, ok = lyapunov(transposed, one, d); !ok {
		s.p = one
	}
	for j, other := range m.roots {
		if j != k {
			s.level = min(s.level, s.value(m.class, other.x)/4)
		}
	}
	for range 100 {
		if m.falls(w, &s) {
			break
		}
		s.level /= 2
	}
	return s
}

// falls samples the shells of a sink at its level and at 1/4, 1/16 and 1/256 of
// it.
func (m *Map) falls(w *workspace, s *sink) bool {
	c := m.class
	d := c.dim()
	var chol mat.Cholesky
	if d == 0 || !chol.Factorize(mat.NewSymDense(d, s.p)) {
		return true
	}
	var r mat.TriDense
	chol.UTo(&r)
	for _, direction := range shell(d) {
		u := mat.NewVecDense(d, direction)
		if err := u.SolveVec(&r, mat.NewVecDense(d, slices.Clone(direction))); err != nil {
			return true
		}
		for _, part := range []float64{1, 0.25, 1.0 / 16, 1.0 / 256} {
			if !m.fallsAt(w, s, u, math.Sqrt(part*s.level)) {
				return false
			}
		}
	}
	return true
}

// fallsAt tells whether V falls at the state plus reach·u; points with negative
// amounts are no matter.
func (m *Map) fallsAt(w *workspace, s *sink, u *mat.VecDense, reach float64) bool {
	c := m.class
	d := c.dim()
	x := slices.Clone(s.center)
	for a, i := range c.independent {
		step := reach * u.AtVec(a) * s.scale[i]
		for k := range x {
			x[k] += c.link[k*d+a] * step
		}
	}
	if slices.Min(x) < 0 {
		return true
	}
	w.sys.drift(x, w.f)
	slope := 0.0
	for a, i := range c.independent {
		for b, j := range c.independent {
			slope += (x[i] - s.center[i]) / s.scale[i] * s.p[a*d+b] * w.f[j] / s.scale[j]
		}
	}
	return slope < 0
}

// mostPairs is the largest dimension in which directions between axes are sampled.
const mostPairs = 16

// shell lists unit vectors along the axes and between each two of them.
func shell(d int) [][]float64 {
	var out [][]float64
	for i := range d {
		for j := i; j < d && (j == i || d <= mostPairs); j++ {
			for _, signs := range [][2]float64{{1, 1}, {1, -1}, {-1, 1}, {-1, -1}} {
				v := make([]float64, d)
				v[i] += signs[0]
				v[j] += signs[1]
				if size := math.Sqrt(dot(v, v)); size > 0 {
					for k := range v {
						v[k] /= size
					}
					out = append(out, v)
				}
			}
		}
	}
	return out
}
