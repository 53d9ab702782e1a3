package action_test

import (
	"context"
	"fmt"

	"holdfast/analysis/action"
	"holdfast/deterministic"
	"holdfast/model"
)

// The exponents of the demo latch, and what one per cent of a constant does to the
// first: with 100 copies ln τ moves by 100·ΔS.
func Example() {
	draft, err := model.Load("../../testdata/designs/latch.toml")
	if err != nil {
		fmt.Println(err)
		return
	}
	network, err := draft.Bind(0, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	survey, err := deterministic.Survey(context.Background(), network, deterministic.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	routes, err := action.Survey(context.Background(), survey, action.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, pair := range routes.Pairs {
		fmt.Printf("%s to %s over the %s: S = %.9f\n", pair.From, pair.To, pair.Paths[0].Saddle, pair.S)
	}
	for i, c := range network.Constants {
		fmt.Printf("%s: %+.4f\n", c.Name, 0.01*c.Value*routes.Pairs[0].Paths[0].Gradient[i])
	}
	// Output:
	// low to high over the saddle: S = 0.083303368
	// high to low over the saddle: S = 0.080518800
	// leak: -0.0009
	// drive: -0.0023
	// half: +0.0040
	// b: +0.0033
	// k: -0.0036
	// a: +0.0034
}
