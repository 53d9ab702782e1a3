package kramers_test

import (
	"fmt"

	"holdfast/analysis/kramers"
)

// A fold with a slow rate of 0.2·√distance and a noise of 1e-6, by Kramers' rate and by the
// slow motion's own mean time.
func Example() {
	f := kramers.Fold{Drive: 0.01, Noise: 1e-6}
	for _, distance := range []float64{0, 0.01, 0.02, 0.04} {
		fmt.Printf("distance %.2f: barrier %5.2f, Kramers %8.4g, passage %8.4g\n", distance, f.Barrier(distance), 1/f.Rate(distance), f.Passage(distance))
	}
	// Output:
	// distance 0.00: barrier  0.00, Kramers     +Inf, passage    497.6
	// distance 0.01: barrier  1.33, Kramers     1192, passage     1457
	// distance 0.02: barrier  3.77, Kramers     9649, passage 1.074e+04
	// distance 0.04: barrier 10.67, Kramers 6.739e+06, passage 6.939e+06
}
