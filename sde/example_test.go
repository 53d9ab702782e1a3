package sde_test

import (
	"context"
	"fmt"

	"holdfast/model"
	"holdfast/sde"
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
	result, err := sde.Run(context.Background(), sde.Plan{
		System: sde.Chemical(network),
		Start:  []float64{100},
		Cores: []model.Core{
			{State: "low", Low: []int64{80}, High: []int64{120}, Center: []float64{99}},
			{State: "high", Low: []int64{400}, High: []int64{500}, Center: []float64{404}},
		},
		From: 0,
		Runs: 4,
		Seed: 1,
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("steps of %.3g min\n", result.Step)
	for _, o := range result.Outcomes {
		fmt.Printf("run %d: %v at %.4f min with %.2f molecules\n", o.Replicate, o.Ending, o.Time, o.State[0])
	}
	// Output:
	// steps of 0.00142 min
	// run 0: flipped at 6.3688 min with 402.42 molecules
	// run 1: flipped at 31.0754 min with 404.63 molecules
	// run 2: flipped at 8.2355 min with 402.78 molecules
	// run 3: flipped at 82.1799 min with 402.44 molecules
}
