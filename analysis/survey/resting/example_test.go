package resting_test

import (
	"context"
	"fmt"

	"holdfast/analysis/survey/resting"
	"holdfast/internal/zoo"
)

// The states of the latch without leak, all three proved.
func Example() {
	list, err := resting.States(context.Background(), zoo.LeaklessLatch(0.4, 1, 100))
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(list)
	for _, s := range list.Map.States {
		fmt.Printf("%s: protein %.4f\n", s.Name, s.Amounts[1])
	}
	// Output:
	// complete (proved): 3 resting states, 5 boxes
	// low: protein 0.0000
	// high: protein 2.0000
	// saddle: protein 0.5000
}
