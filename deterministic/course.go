package deterministic

import (
	"context"
	"slices"
)

// courseEnd is how near a course comes to its resting state before the state itself
// ends it, as a share of the quadratic form that the state's region is told by.
const courseEnd = 1e-6

// Course gives the amounts along the flow of the rate equations from x, one point a
// step of the integration and the stable resting state itself at its end, together
// with the index of that state in States. Errors are those of BasinContext.
func (m *Map) Course(ctx context.Context, x []float64) (points [][]float64, state int, err error) {
	keep := func(at []float64) { points = append(points, slices.Clone(at)) }
	keep(x)
	state, err = m.trace(ctx, x, keep)
	if err != nil {
		return points, state, err
	}
	m.settle(ctx, slices.Clone(points[len(points)-1]), state, keep)
	keep(m.States[state].Amounts)
	return points, state, ctx.Err()
}

// settle follows the flow from x, which lies in the sink of a state, to near the state.
func (m *Map) settle(ctx context.Context, x []float64, state int, visit func(x []float64)) {
	for k := range m.sinks {
		s := &m.sinks[k]
		if m.stateOf(k) != state || s.value(m.class, x) <= courseEnd*s.level {
			continue
		}
		g := newIntegrator(newWorkspace(m.sys), basinTolerance, m.resolution)
		g.follow(ctx, x, m.limit, flowSteps, func(float64) bool {
			visit(x)
			return s.value(m.class, x) <= courseEnd*s.level
		})
	}
}
