package survey_test

import (
	"context"
	"fmt"

	"holdfast/analysis/survey"
	"holdfast/internal/zoo"
)

// The latch as its protein's loss is turned: what is proved of its states, the window
// of each, and how far today is from the folds.
func Example() {
	o := survey.Options{Knobs: []survey.Knob{{Name: "a", Low: 0.2, High: 0.8}}}
	r, err := survey.Run(context.Background(), zoo.Latch(100), o)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(r.List.Text)
	for _, w := range r.Diagram.Windows {
		fmt.Printf("%s: a from %.8f (%s, %.2f %% below today) to %.8f (%s, %.2f %% above)\n", w.State,
			w.Low.Knob, w.Low.Kind, w.Low.Distance, w.High.Knob, w.High.Kind, w.High.Distance)
	}
	for _, s := range r.Basins.Shares {
		fmt.Printf("%s draws in %.2f %% of the box\n", s.State, s.Share)
	}
	for _, n := range r.Diagram.Noise {
		last := n.Rows[len(n.Rows)-1]
		fmt.Printf("%s: correlation time %.2f min today, %.0f min at %.6f\n", n.State, n.Rows[0].CorrelationTime, last.CorrelationTime, last.Knob)
	}
	// Output:
	// complete (proved): 3 resting states, 5 boxes
	// low: a from 0.27993912 (fold, 37.79 % below today) to 0.80000000 (end of the range, 77.78 % above)
	// high: a from 0.20000000 (end of the range, 55.56 % below today) to 0.52041723 (fold, 15.65 % above)
	// low draws in 17.96 % of the box
	// high draws in 82.04 % of the box
	// low: correlation time 3.26 min today, 137 min at 0.280105
	// high: correlation time 5.72 min today, 187 min at 0.520348
}
