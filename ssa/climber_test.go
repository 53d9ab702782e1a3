package ssa_test

import (
	"context"
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/ssa"
)

// Immigration–death, watched at the core of at most ten molecules: excursions to 15 and
// more are as many in a unit of time as the closed form says, one over the mean time
// from 10 to 15 plus that from 15 back to 10 (birth–death recursion; Gardiner, Handbook
// of Stochastic Methods, ch. 7). Excursions are renewals; the statistic is the
// normal deviate of their number, at most as spread as a Poisson number of twice the
// variance: within ±5 (a false alarm in a million).
func TestWatchCountsExcursions(t *testing.T) {
	n := zoo.ImmigrationDeath(1, 0.1)
	up, down := 0.0, 0.0
	step := 0.0
	for k := range 15 {
		if step = 1 + 0.1*float64(k)*step; k >= 10 { // per unit immigration
			up += step
		}
	}
	step = 0
	for k := 200; k > 10; k-- {
		if step = (1 + step) / (0.1 * float64(k)); k <= 15 {
			down += step
		}
	}
	c, err := ssa.NewClimber(ssa.Ladder{Network: n, Cores: []model.Core{zoo.Interval("low", 0, 10, 10)}})
	if err != nil {
		t.Fatal(err)
	}
	c.Reset(1, 0, 0, 0)
	const time = 400_000
	seen, err := c.Watch(context.Background(), ssa.Watch{Rungs: []ssa.Rung{{Weights: []int64{1}, Level: 15}}, Time: time, Burn: 200})
	if err != nil {
		t.Fatal(err)
	}
	want := time / (up + down)
	if z := (float64(len(seen)) - want) / math.Sqrt(2*want); math.Abs(z) > 5 {
		t.Errorf("%d excursions, want %.0f: z = %.1f", len(seen), want, z)
	}
}

// From one rung to the next the chance is that of the gambler's ruin, with runs
// dropped at a floor or without: Σ over the products of the ratios of the rates
// (Gardiner, as above). Runs of one number are independent; the deviate is within ±5.
func TestClimbChance(t *testing.T) {
	n := zoo.ImmigrationDeath(1, 0.1)
	ratio, sum, part := 1.0, 0.0, 0.0
	for k := 10; k < 18; k++ { // from 15 to 18 before 10
		if k > 10 {
			ratio *= 0.1 * float64(k)
		}
		if sum += ratio; k < 15 {
			part += ratio
		}
	}
	want := part / sum
	c, err := ssa.NewClimber(ssa.Ladder{Network: n, Cores: []model.Core{zoo.Interval("low", 0, 10, 10)}})
	if err != nil {
		t.Fatal(err)
	}
	starts := make([]ssa.Perch, 20_000)
	for i := range starts {
		starts[i] = ssa.Perch{Counts: []int64{15}, Weight: 1}
	}
	for repeat, floors := range [][]int64{nil, {13, 12}} {
		c.Reset(1, 0, 0, uint64(repeat))
		climbs, err := c.Climb(context.Background(), ssa.Stage{Rungs: []ssa.Rung{{Weights: []int64{1}, Level: 18}}, Floors: floors, Keep: 0.5}, starts)
		if err != nil {
			t.Fatal(err)
		}
		mean, square := 0.0, 0.0
		for i := range climbs {
			if climbs[i].Ending == ssa.Climbed {
				mean += climbs[i].Weight / float64(len(climbs))
				square += climbs[i].Weight * climbs[i].Weight / float64(len(climbs))
			}
		}
		if z := (mean - want) / math.Sqrt((square-mean*mean)/float64(len(climbs))); math.Abs(z) > 5 {
			t.Errorf("floors %v: chance %.4f, want %.4f: z = %.1f", floors, mean, want, z)
		}
	}
}
