package ssa_test

import (
	"context"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/ssa"
)

// Starts that are on the rung already end there, each as itself, without an event, also
// where they are more than the lanes that watched before.
func TestClimbOnTheRung(t *testing.T) {
	n := zoo.ImmigrationDeath(1, 0.1)
	c, err := ssa.NewClimber(ssa.Ladder{Network: n, Cores: []model.Core{zoo.Interval("low", 0, 10, 10)}})
	if err != nil {
		t.Fatal(err)
	}
	c.Reset(1, 0, 0, 0)
	rung := []ssa.Rung{{Weights: []int64{1}, Level: 15}}
	if _, err := c.Watch(context.Background(), ssa.Watch{Rungs: rung, Time: 100, Burn: 10}); err != nil {
		t.Fatal(err)
	}
	starts := make([]ssa.Perch, 20)
	for i := range starts {
		starts[i] = ssa.Perch{Counts: []int64{15}, Weight: 1, Family: i}
	}
	before := c.Events()
	climbs, err := c.Climb(context.Background(), ssa.Stage{Rungs: rung}, starts)
	if err != nil {
		t.Fatal(err)
	}
	for i := range climbs {
		if climbs[i].Ending != ssa.Climbed || climbs[i].Family != i || len(climbs[i].Hits) != 1 {
			t.Errorf("run %d: %+v", i, climbs[i])
		}
	}
	if made := c.Events() - before; made != 0 {
		t.Errorf("%d events", made)
	}
}
