package proof_test

import (
	"context"
	"fmt"

	"holdfast/deterministic/proof"
	"holdfast/internal/zoo"
)

// A latch of one gene without leak: off at exactly 0, a saddle, and on.
func Example() {
	r, err := proof.Prove(context.Background(), proof.Problem{Network: zoo.LeaklessLatch(0.4, 1, 100)})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(r)
	for _, root := range r.Roots {
		fmt.Printf("mrna %.6f, protein %.6f\n", root.Point[0], root.Point[1])
	}
	// Output:
	// complete (proved): 3 resting states, 5 boxes
	// mrna 0.000000, protein 0.000000
	// mrna 0.200000, protein 0.500000
	// mrna 0.800000, protein 2.000000
}

// At the fold itself no proof exists, and the box around the fold is given.
func Example_fold() {
	r, err := proof.Prove(context.Background(), proof.Problem{Network: zoo.LeaklessLatch(0.5, 1, 100)})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(r.Complete, len(r.Roots), len(r.Unresolved))
	for _, a := range r.Unresolved[0].Box {
		fmt.Printf("%.6f to %.6f\n", a.Lo, a.Hi)
	}
	// Output:
	// false 1 1
	// 0.500000 to 0.500000
	// 1.000000 to 1.000000
}
