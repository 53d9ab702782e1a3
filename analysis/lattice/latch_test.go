package lattice

import (
	"math"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// latchNoise is the linear noise of the latch with leak about one of its resting
// states, in molecules: the Lyapunov equation JC + CJᵀ + D = 0 of two species
// written out, with J = (−b, f'; k, −a) and D = diag(2 b m, 2 a p).
func latchNoise(state [2]float64, copies float64) Noise {
	const a, b, k = 0.45, 1, 1
	m, p := state[0]*copies, state[1]*copies
	x := state[1]
	slope := 2 * x / ((1 + x*x) * (1 + x*x))
	// C_mm = m + (slope/b) C_mp and C_pp = p + (k/a) C_mp go into
	// k C_mm − (a+b) C_mp + slope C_pp = 0.
	cmp := (k*m + slope*p) / (a + b - k*slope/b - slope*k/a)
	cmm, cpp := m+slope/b*cmp, p+k/a*cmp
	return Noise{Center: []float64{m, p}, Covariance: []float64{cmm, cmp, cmp, cpp}}
}

// ellipse is the core of the given size in standard deviations about a state of
// two species.
func ellipse(state string, n Noise, size float64) model.Core {
	c := n.Covariance
	det := (c[0]*c[3] - c[1]*c[2]) * size * size
	core := model.Core{
		State: state, Center: n.Center,
		Shape: []float64{c[3] / det, -c[1] / det, -c[2] / det, c[0] / det},
	}
	for s := range 2 {
		core.Start = append(core.Start, int64(math.Round(n.Center[s])))
		core.Low = append(core.Low, 0)
		core.High = append(core.High, int64(math.Ceil(n.Center[s]+size*math.Sqrt(c[3*s]))))
	}
	return core
}

// latchProblem is the latch with leak between ellipses of the given size.
func latchProblem(copies, size float64) Problem {
	states := zoo.LatchStates()
	low, high := latchNoise(states[0], copies), latchNoise(states[2], copies)
	return Problem{
		Network: zoo.Latch(copies),
		Cores:   []model.Core{ellipse("low", low, size), ellipse("high", high, size)},
		States:  []Noise{low, high},
	}
}
