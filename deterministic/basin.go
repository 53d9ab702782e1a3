package deterministic

import (
	"context"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// basinTolerance is the relative error of a step of the flow that labels a point,
// by the method's estimate of order 3; the error of the step taken, of order 4, is
// smaller.
const basinTolerance = 1e-6

// onSaddle is how close to a state that is not stable, relative to its amounts, a
// flow may come: what lies nearer is not told apart by a flow of that accuracy.
const onSaddle = 10 * basinTolerance

// A BasinError tells why a point has no label.
type BasinError struct {
	// State names the saddle or other unstable state that the flow runs into; ""
	// where the flow did not come to rest.
	State string
	// Amounts is where the flow was last.
	Amounts []float64
	problem string
}

func (e *BasinError) Error() string { return e.problem }

// Basin gives the index in States of the stable resting state that the flow of
// the rate equations from amounts x leads to. x must have the conserved totals of
// the map; where it has not, where the flow runs away (*RunawayError), and where it
// ends on a saddle or does not come to rest (*BasinError) there is an error.
//
// The flow is followed by an implicit method to a relative accuracy of 1e-6 a
// step, so that points nearer to a boundary of basins than about that may get either
// label, until it enters a region about a stable state in which a quadratic form
// falls along the flow. Basin is safe for concurrent use.
func (m *Map) Basin(x []float64) (state int, err error) {
	return m.BasinContext(context.Background(), x)
}

// BasinContext is Basin with a context that can stop it.
func (m *Map) BasinContext(ctx context.Context, x []float64) (state int, err error) {
	if err := m.checkPoint(x); err != nil {
		return 0, err
	}
	m.sinksOnce.Do(m.makeSinks)
	x = slices.Clone(x)
	g := newIntegrator(newWorkspace(m.sys), basinTolerance, m.resolution)
	label, stuck := m.inSink(x), m.onUnstable(x)
	if label >= 0 {
		return label, nil
	}
	limit := slices.Clone(m.limit)
	for i, v := range x {
		limit[i] = max(limit[i], 1e6*v)
	}
	end, species := flowSettled, -1
	if stuck < 0 {
		end, species = g.follow(ctx, x, limit, flowSteps, func(float64) bool {
			label, stuck = m.inSink(x), m.onUnstable(x)
			return label >= 0 || stuck >= 0
		})
	}
	return label, m.basinError(ctx, x, end, species, label, stuck)
}

func (m *Map) basinError(ctx context.Context, x []float64, end flowEnd, species, label, stuck int) error {
	switch {
	case end == flowRanAway:
		return &RunawayError{m.Network.Species[species].Name, x[species]}
	case end == flowSettled && label >= 0:
		return nil
	case end == flowSettled:
		name := m.States[stuck].Name
		return &BasinError{name, x, fmt.Sprintf("the flow from there runs into %s: the point lies on the boundary between basins", name)}
	case ctx.Err() != nil:
		return ctx.Err()
	}
	return &BasinError{"", x, fmt.Sprintf("the flow from there does not come to rest: %v at %.6g", end, x)}
}

func (m *Map) checkPoint(x []float64) error {
	if len(x) != m.class.n {
		return fmt.Errorf("%d amounts given for %d species", len(x), m.class.n)
	}
	for i, v := range x {
		if !(v >= 0 && v <= math.MaxFloat64) {
			return fmt.Errorf("%s = %v: an amount must be finite and not below 0", m.Network.Species[i].Name, v)
		}
	}
	if !m.class.holds(x) {
		return fmt.Errorf("amounts %v do not have the conserved totals of the map", x)
	}
	return nil
}

// onUnstable gives the index in States of a state that is not stable and that x
// lies on, or -1.
func (m *Map) onUnstable(x []float64) int {
	for k := range m.States {
		s := &m.States[k]
		near := !s.Kind.Stable() && s.Kind != Declared
		for i, v := range s.Amounts {
			if !(abs(x[i]-v) <= onSaddle*(v+m.resolution[i])) {
				near = false
				break
			}
		}
		if near {
			return k
		}
	}
	return -1
}

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
