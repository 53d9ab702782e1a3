package staged_test

import (
	"context"
	"math"
	"testing"

	"holdfast/analysis/staged"
	"holdfast/deterministic"
	"holdfast/model"
)

func survey(t *testing.T, n *model.Network) *deterministic.Map {
	t.Helper()
	m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// plan counts flips from one state of a map to another along the straight line.
func plan(m *deterministic.Map, from, to int) staged.Plan {
	a, b := &m.States[from], &m.States[to]
	return staged.Plan{
		Network: m.Network, Cores: m.Cores, From: from, To: to, Relaxation: 1 / a.SlowRate,
		Along: staged.Line(a.Molecules, b.Molecules, a.Covariance), Seed: 1,
	}
}

func estimate(t *testing.T, p staged.Plan) *staged.Result {
	t.Helper()
	r, err := staged.Run(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// apart gives how many standard errors of its logarithm a rate is away from the truth.
func apart(r *staged.Result, rate float64) float64 {
	return math.Log(r.Rate/rate) / (r.StandardError / r.Rate)
}

// wide is what a deviate by Student's t with n−1 degrees of freedom exceeds once in a
// million times, rounded up (tables; common practice).
func wide(n int) float64 {
	switch {
	case n >= 60:
		return 5.5
	case n >= 20:
		return 6.9
	}
	return 10.7 // 9 degrees of freedom
}

// chain gives the rates at which the count of the only species goes up and down by one.
func chain(n *model.Network) (up, down func(count int64) float64) {
	sum := func(by int) func(int64) float64 {
		return func(count int64) float64 {
			total := 0.0
			for r := range n.Reactions {
				if n.Reactions[r].Net[0].Count == by {
					total += n.Propensity(r, []int64{count})
				}
			}
			return total
		}
	}
	return sum(1), sum(-1)
}

// passage gives the mean time of a birth–death chain from a count to another, by the
// closed double sum as a recursion (Gardiner, Handbook of Stochastic Methods, ch. 7): up
// from 0, or down from a count so high that it is hardly ever reached.
func passage(up, down func(int64) float64, from, to, highest int64) float64 {
	step, total := 0.0, 0.0
	if to > from {
		for n := range to {
			if step = (1 + down(n)*step) / up(n); n >= from {
				total += step
			}
		}
		return total
	}
	for n := highest; n > to; n-- {
		if step = (1 + up(n)*step) / down(n); n <= from {
			total += step
		}
	}
	return total
}

// dwell is the mean dwell in state from of a chain of two states, from the start of
// its core to the nearest count of the other's.
func dwell(m *deterministic.Map, from int) float64 {
	up, down := chain(m.Network)
	other := &m.Cores[1-from]
	to := other.Low[0]
	if from == 1 {
		to = other.High[0]
	}
	return passage(up, down, m.Cores[from].Start[0], to, 4*m.Cores[1].High[0])
}
