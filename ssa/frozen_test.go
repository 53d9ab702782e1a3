package ssa_test

import (
	"fmt"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/ssa"
)

// Outcomes as they were when each method was first written: a seed means the same
// runs in every later version.
func TestFrozen(t *testing.T) {
	var got strings.Builder
	for _, c := range []ssa.Plan{
		{Network: zoo.Latch(20), Method: ssa.Dense},
		{Network: zoo.Schlogl(), Method: ssa.Dense},
		{Network: zoo.DimerSwitch(), Method: ssa.Dense},
		{Network: zoo.Chain(30, 1, 400), Method: ssa.Dense},
		{Network: zoo.BurstExpression(1, 20, 0.1), Method: ssa.Dense},
		{Network: zoo.Latch(20), Method: ssa.Sparse},
		{Network: zoo.Chain(100, 1, 400)},
		{Network: zoo.BurstExpression(1, 20, 0.1), Method: ssa.Sparse},
	} {
		c.Runs, c.Seed, c.Point, c.Group, c.FirstReplicate, c.MaxEvents, c.From = 1, 42, 7, 1, 5, 3000, -1
		o := run(t, c).Outcomes[0]
		sum := int64(0)
		for i, n := range o.Counts {
			sum += int64(i+1) * n
		}
		got.WriteString(fmt.Sprintf("%s, %v: %d at %.17g\n", c.Network.Title, c.Method, sum, o.Time))
	}
	if got.String() != frozen {
		t.Errorf("outcomes have changed:\n%s", got.String())
	}
}

const frozen = `one-gene latch, dense: 86 at 670.01950189393892
one-species chain with two states, dense: 154 at 0.34317085893514876
two genes, dimers, two overlapping operators, dense: 22 at 52.350181351071669
chain of one-way conversions, dense: 3400 at 7.3951350118220445
expression in bursts, dense: 275 at 144.20573312817638
one-gene latch, sparse: 70 at 409.23649246141355
chain of one-way conversions, auto: 3400 at 7.5215320961758909
expression in bursts, sparse: 233 at 150.86344067145234
`
