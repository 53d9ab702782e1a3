package hold_test

import (
	"context"
	"fmt"
	"path/filepath"

	"holdfast/analysis/hold"
	"holdfast/model"
)

// How long the states of the demo latch hold at 20 copies, by the master equation.
func Example() {
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", "latch.toml"))
	if err != nil {
		fmt.Println(err)
		return
	}
	network, err := draft.Bind(20, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	report, err := hold.Run(context.Background(), network, hold.Options{Route: hold.Lattice})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, d := range report.Dwells {
		fmt.Printf("%s → %s: %.3f %s, %.3f generations\n", d.From, d.To, d.Mean, report.TimeUnit, d.Generations)
	}
	// Output:
	// low → high: 566.346 min, 12.585 generations
	// high → low: 151.775 min, 3.373 generations
}
