package staged_test

import (
	"context"
	"fmt"

	"holdfast/analysis/staged"
	"holdfast/deterministic"
	"holdfast/internal/zoo"
)

// How often does a latch of 80 copies flip from low to high? It holds for 84,568 min on
// average (computed: the master equation on its lattice).
func Example() {
	latch := zoo.Latch(80)
	survey, err := deterministic.Survey(context.Background(), latch, deterministic.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	low, high := survey.States[0], survey.States[1]
	r, err := staged.Run(context.Background(), staged.Plan{
		Network: latch, Cores: survey.Cores, From: 0, To: 1, Relaxation: 1 / low.SlowRate,
		Along: staged.Line(low.Molecules, high.Molecules, low.Covariance), Precision: 0.3, Seed: 1,
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("mean dwell %.3g min, from %.3g to %.3g, in %d stages\n", 1/r.Rate, 1/r.High, 1/r.Low, len(r.Stages))
	// Output: mean dwell 8.09e+04 min, from 5.97e+04 to 1.09e+05, in 15 stages
}
