package levers_test

import (
	"context"
	"fmt"

	"holdfast/analysis/levers"
	"holdfast/model"
)

// Which constant of the demo latch to change first, at 20 copies.
func Example() {
	draft, err := model.Load("../../testdata/designs/latch.toml")
	if err != nil {
		fmt.Println(err)
		return
	}
	network, err := draft.Bind(20, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	report, err := levers.Run(context.Background(), network, levers.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, block := range report.Blocks {
		l := block.Levers[0]
		fmt.Printf("%s: %s %+.3f, lost at %.4f\n", block.From, l.Name, l.Slope().Value, l.Above.At)
		fmt.Println(block.First)
	}
	fmt.Println(report.Together)
	// Output:
	// low: half +8.946, lost at 1.1565
	// change first: half; +1 % of it makes low hold 9.3 % longer, and high 10 % shorter
	// high: a -12.634, lost at 0.5204
	// change first: a; −1 % of it makes high hold 14 % longer, and low 7.1 % shorter
	// for all states at once: copies; +1 % of it makes each hold at least 1.2 % longer
}
