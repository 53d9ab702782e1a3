package deterministic_test

import (
	"context"
	"fmt"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
)

// A one-gene latch with leak at 100 molecules to one unit of amount.
func ExampleSurvey() {
	m, err := deterministic.Survey(context.Background(), zoo.Latch(100), deterministic.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, s := range m.States {
		fmt.Printf("%-6s %-11v protein %.4f, slow rate %.4f\n", s.Name, s.Kind, s.Amounts[1], s.SlowRate)
	}
	for i, s := range m.Stable() {
		c := m.Cores[i]
		fmt.Printf("%-6s predicted %.1f ± %.1f molecules, core %d to %d from %v\n",
			s.Name, s.Molecules[1], s.SD(1), c.Low[1], c.High[1], c.Start)
	}
	from, err := m.Basin([]float64{0.2, 0.6})
	fmt.Println("0.2, 0.6 leads to", m.Stable()[from].Name, err)
	// Output:
	// low    stable node protein 0.0500, slow rate 0.3066
	// high   stable node protein 1.6908, slow rate 0.1748
	// saddle saddle      protein 0.5259, slow rate 0.1241
	// low    predicted 5.0 ± 3.2 molecules, core 1 to 9 from [2 5]
	// high   predicted 169.1 ± 22.9 molecules, core 135 to 203 from [76 169]
	// 0.2, 0.6 leads to high <nil>
}
