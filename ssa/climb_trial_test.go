package ssa_test

import (
	"context"
	"testing"
	"time"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/ssa"
)

func TestTrialWatch(t *testing.T) {
	for _, copies := range []float64{100, 200} {
		n := zoo.Latch(copies)
		m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
		if err != nil {
			t.Fatal(err)
		}
		for from := range 2 {
			c, err := ssa.NewClimber(ssa.Ladder{Network: n, Cores: m.Cores, From: from})
			if err != nil {
				t.Fatal(err)
			}
			c.Reset(1, 0, 0, 0)
			sign := int64(1)
			if from == 1 {
				sign = -1
			}
			s := m.States[from]
			p := s.Molecules[1] + 2*s.SD(1)*float64(sign)
			begun := time.Now()
			ex, err := c.Watch(context.Background(), ssa.Watch{Rungs: []ssa.Rung{{Weights: []int64{0, sign}, Level: int64(p) * sign}}, Time: 20000, Burn: 60})
			took := time.Since(begun)
			t.Logf("%v %d: %d excursions %v events %.1f ns/event", copies, from, len(ex), c.Events(), float64(took.Nanoseconds())/float64(c.Events()))
			_ = err
		}
	}
}
