package trace_test

import (
	"context"
	"fmt"

	"holdfast/analysis/trace"
	"holdfast/deterministic"
	"holdfast/internal/zoo"
)

// One path of a one-species chain with two states, seen at five times.
func Example() {
	network := zoo.Schlogl()
	survey, err := deterministic.Survey(context.Background(), network, deterministic.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	paths, err := trace.New(network, survey, trace.Options{Until: 2, Every: 0.5, Seed: 1, From: "low"})
	if err != nil {
		fmt.Println(err)
		return
	}
	err = paths.Make(context.Background(), func(r trace.Row) error {
		fmt.Printf("%.1f min: %d molecules, state %s\n", r.Time, r.Counts[0], survey.Stable()[r.State].Name)
		return nil
	})
	if err != nil {
		fmt.Println(err)
	}
	// Output:
	// 0.0 min: 100 molecules, state low
	// 0.5 min: 109 molecules, state low
	// 1.0 min: 97 molecules, state low
	// 1.5 min: 97 molecules, state low
	// 2.0 min: 127 molecules, state low
}
