package lattice_test

import (
	"context"
	"fmt"

	"holdfast/analysis/lattice"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// The one-species chain with two states, between its resting counts 100 and 400.
func ExampleSolve() {
	s, err := lattice.Solve(context.Background(), lattice.Problem{
		Network: zoo.Schlogl(),
		Cores:   []model.Core{zoo.Interval("low", 100, 100, 100), zoo.Interval("high", 400, 400, 400)},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	for a, name := range s.Names {
		fmt.Printf("%s: mean dwell %.6g min, escape rate %.6g per min, weight %.4f\n", name, s.Mean[a], s.Escape[a], s.Weight[a])
	}
	fmt.Printf("relaxation %.5g min; truncation error below 1e-10: %t\n", s.Relaxation, s.Truncation < 1e-10)
	// Output:
	// low: mean dwell 28.6719 min, escape rate 0.0356188 per min, weight 0.7634
	// high: mean dwell 8.88407 min, escape rate 0.12075 per min, weight 0.2366
	// relaxation 6.1681 min; truncation error below 1e-10: true
}

// Two-stage expression: the stationary law of transcripts and protein.
func ExampleStationary() {
	law, err := lattice.Stationary(context.Background(), lattice.Problem{Network: zoo.TwoStage(2, 1, 3, 0.5)})
	if err != nil {
		fmt.Println(err)
		return
	}
	mean := 0.0
	for i, p := range law.Probability {
		mean += p * float64(law.Counts[i*law.Species+1])
	}
	fmt.Printf("mean protein %.6f\n", mean)
	// Output:
	// mean protein 12.000000
}

// What a problem takes is known before it starts.
func ExampleProblem_Estimate() {
	p := lattice.Problem{
		Network: zoo.Schlogl(), Low: []int64{0}, High: []int64{1000},
		Cores: []model.Core{zoo.Interval("low", 100, 100, 100), zoo.Interval("high", 400, 400, 400)},
	}
	e, err := p.Estimate(context.Background())
	fmt.Println(e.States, e.Box, err)
	// Output:
	// 1001 [0, 1000] <nil>
}
