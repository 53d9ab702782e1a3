package dwell_test

import (
	"fmt"

	"holdfast/analysis/dwell"
)

// Ten dwells of a state in minutes; two were cut off at 400. A generation is 45 min.
func ExampleSummarise() {
	var dwells []dwell.Observation
	for _, minutes := range []float64{31, 202, 87, 15, 340, 121, 66, 259} {
		dwells = append(dwells, dwell.Observation{To: 1, Time: minutes})
	}
	for range 2 {
		dwells = append(dwells, dwell.Observation{To: dwell.Censored, Time: 400})
	}
	s, err := dwell.Summarise(dwells, 2, dwell.Options{From: 0, Generation: 45})
	if err != nil {
		fmt.Println(err)
		return
	}
	e := s.Any
	fmt.Printf("%d flips in %.0f min: mean %.0f min [%.0f, %.0f], %s\n", e.Flips, e.Exposure, e.Mean, e.Low, e.High, e.Method)
	fmt.Printf("%.3f flips per generation [%.3f, %.3f]\n", e.PerGeneration.Value, e.PerGeneration.Low, e.PerGeneration.High)
	fmt.Printf("holds %v generations with chance %.3f [%.3f, %.3f]\n", e.Hold[0].Generations, e.Hold[0].Value, e.Hold[0].Low, e.Hold[0].High)
	fmt.Println(s.Memory)
	// Output:
	// 8 flips in 1921 min: mean 240 min [122, 556], count given the exposure
	// 0.187 flips per generation [0.081, 0.369]
	// holds 10 generations with chance 0.154 [0.025, 0.445]
	// consistent with memoryless dwells (p = 1, 8 flips)
}

func ExampleGarwood() {
	low, high := dwell.Garwood(10, 0.95)
	fmt.Printf("10 events: %.4f to %.4f\n", low, high)
	// Output: 10 events: 4.7954 to 18.3904
}

func ExampleFlipsFor() {
	fmt.Println(dwell.FlipsFor(0.1), "flips put both limits within 10 % of the mean")
	// Output: 444 flips put both limits within 10 % of the mean
}
