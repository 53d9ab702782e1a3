package ssa_test

import (
	"context"
	"fmt"

	"holdfast/model"
	"holdfast/ssa"
)

// A one-species chain with two states, run from the lower one until it enters the
// upper one.
func Example() {
	x := func(n int) []model.Term { return []model.Term{{Species: 0, Count: n}} }
	draft := model.Draft{
		TimeUnit: "min", Copies: 1,
		Species: []model.Species{{Name: "a"}},
		Reactions: []model.DraftReaction{
			{Name: "three to two", MassAction: model.Number(2.5e-4), Needs: x(2), Uses: x(1)},
			{Name: "two to three", MassAction: model.Number(0.18), Needs: x(2), Makes: x(1)},
			{Name: "loss", MassAction: model.Number(37.5), Uses: x(1)},
			{Name: "source", MassAction: model.Number(2200), Makes: x(1)},
		},
	}
	network, err := draft.Bind(0, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	result, err := ssa.Run(context.Background(), ssa.Plan{
		Network: network,
		Start:   []int64{100},
		Cores: []model.Core{
			{State: "low", Low: []int64{80}, High: []int64{120}},
			{State: "high", Low: []int64{400}, High: []int64{500}},
		},
		From: 0,
		Runs: 4,
		Seed: 1,
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, o := range result.Outcomes {
		fmt.Printf("run %d: %v at %.4f min with %d molecules, after %d events\n", o.Replicate, o.Ending, o.Time, o.Counts[0], o.Events)
	}
	// Output:
	// run 0: flipped at 16.9341 min with 400 molecules, after 158264 events
	// run 1: flipped at 71.1215 min with 400 molecules, after 623762 events
	// run 2: flipped at 17.9752 min with 400 molecules, after 158218 events
	// run 3: flipped at 50.0984 min with 400 molecules, after 421700 events
}
