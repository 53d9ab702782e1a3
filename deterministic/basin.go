package deterministic

import (
	"context"
	"fmt"
	"math"
	"slices"
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

// Error says what is wrong and what to do.
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
	return m.trace(ctx, x, func([]float64) {})
}

// trace follows the flow from x to its label and shows every point of it to visit.
func (m *Map) trace(ctx context.Context, x []float64, visit func(x []float64)) (state int, err error) {
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
			visit(x)
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
