package action

import (
	"context"
	"errors"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"holdfast/deterministic"
)

// A Join is a saddle with the two states that the flow leads to from it.
type Join struct {
	Saddle string
	// Ends are the names of the states; "" where there is no such side, since amounts
	// would fall below 0, or where the flow does not come to rest.
	Ends [2]string

	saddle int
	course [2][][]float64 // amounts along the flow, without the saddle itself
}

// joins follows the flow down both sides of every saddle.
func joins(ctx context.Context, m *deterministic.Map) ([]Join, error) {
	var out []Join
	for i := range m.States {
		s := &m.States[i]
		if s.UnstableDirections != 1 || s.Kind == deterministic.Degenerate {
			continue
		}
		j := Join{Saddle: s.Name, saddle: i}
		away := unstableDirection(m, i)
		for side := range j.Ends {
			if err := j.follow(ctx, m, side, away); err != nil {
				return nil, err
			}
			for k := range away {
				away[k] = -away[k]
			}
		}
		out = append(out, j)
	}
	return out, nil
}

// departures are the distances from the saddle at which its flow is taken up, as
// shares of that to the nearest other state: the smallest that the flow can tell
// from the saddle is taken.
func departures() [4]float64 { return [4]float64{1e-4, 1e-3, 1e-2, 0.1} }

// follow follows one side of the saddle.
func (j *Join) follow(ctx context.Context, m *deterministic.Map, side int, away []float64) error {
	from := m.States[j.saddle].Amounts
	for _, share := range departures() {
		x := slices.Clone(from)
		addScaled(x, share, away)
		if slices.Min(x) < 0 {
			continue
		}
		course, state, err := m.Course(ctx, x)
		if ctx.Err() != nil {
			return ctx.Err()
		}
		var stuck *deterministic.BasinError
		if errors.As(err, &stuck) && stuck.State == j.Saddle {
			continue
		}
		if err == nil {
			j.Ends[side], j.course[side] = m.States[state].Name, course
		}
		return nil
	}
	return nil
}

// unstableDirection gives the direction in which the flow leads away from a saddle,
// in amounts, as long as the way to the nearest other state.
func unstableDirection(m *deterministic.Map, state int) []float64 {
	at := m.States[state].Amounts
	nearest, scale := nearestState(m, state)
	s := newSystem(m.Network, at, nearest, make([]bool, len(m.Network.Reactions)))
	jacobian := deterministic.Jacobian(m.Network, at)
	small := mat.NewDense(s.m, s.m, nil)
	for i := range s.n {
		for k := range s.n {
			for a := range s.m {
				for b := range s.m {
					small.Set(a, b, small.At(a, b)+s.dual[i*s.m+a]*jacobian[i*s.n+k]*s.frame[k*s.m+b])
				}
			}
		}
	}
	away := make([]float64, s.n)
	for i := range away {
		away[i] = dot(s.frame[i*s.m:(i+1)*s.m], leading(small))
	}
	length := distance(away, make([]float64, s.n), scale)
	for i := range away {
		away[i] *= distance(at, nearest, scale) / length
	}
	return away
}

// leading gives the eigenvector of the eigenvalue of the largest real part, which is
// single and real at a saddle with one direction of escape.
func leading(a *mat.Dense) []float64 {
	n, _ := a.Dims()
	out := make([]float64, n)
	var eigen mat.Eigen
	if !eigen.Factorize(a, mat.EigenRight) {
		return out
	}
	values := eigen.Values(nil)
	best := 0
	for k := range values {
		if real(values[k]) > real(values[best]) {
			best = k
		}
	}
	var vectors mat.CDense
	eigen.VectorsTo(&vectors)
	for i := range out {
		out[i] = real(vectors.At(i, best))
	}
	return out
}

// nearestState gives the amounts of the resting state nearest to another, and the
// range of each species that distances are measured in.
func nearestState(m *deterministic.Map, state int) (nearest, scale []float64) {
	scale = make([]float64, len(m.Network.Species))
	most := 0.0
	for i := range scale {
		for k := range m.States {
			scale[i] = max(scale[i], m.States[k].Amounts[i])
		}
		most = max(most, scale[i])
	}
	for i := range scale {
		scale[i] = max(scale[i], 1e-6*most)
	}
	least := math.Inf(1)
	for k := range m.States {
		if k == state || m.States[k].Kind == deterministic.Declared {
			continue
		}
		if d := distance(m.States[k].Amounts, m.States[state].Amounts, scale); d < least {
			nearest, least = m.States[k].Amounts, d
		}
	}
	return nearest, scale
}

func distance(a, b, scale []float64) float64 {
	sum := 0.0
	for i, s := range scale {
		sum += (a[i] - b[i]) / s * (a[i] - b[i]) / s
	}
	return math.Sqrt(sum)
}
