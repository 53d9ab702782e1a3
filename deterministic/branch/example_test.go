package branch_test

import (
	"context"
	"fmt"

	"holdfast/deterministic/branch"
	"holdfast/model"
)

// latch is a gene that keeps itself on: x' = leak + x²/(1+x²) − loss·x.
func latch() (*model.Network, error) {
	x, leak := model.SpeciesRef(0), model.ConstantRef(0)
	law := model.Call(model.OpAdd, leak, model.Call(model.OpHill, x, model.Number(1), model.Number(2)))
	d := model.Draft{
		Title: "latch", TimeUnit: "min", Copies: 100,
		Species:   []model.Species{{Name: "x"}},
		Constants: []model.Constant{{Name: "leak", Value: 0.03}, {Name: "loss", Value: 0.48}},
		Reactions: []model.DraftReaction{
			{Name: "production", Rate: law, Makes: []model.Term{{Species: 0, Count: 1}}},
			{Name: "loss", MassAction: model.ConstantRef(1), Uses: []model.Term{{Species: 0, Count: 1}}},
		},
	}
	return d.Bind(0, nil)
}

// The window of each state in the loss, and what ends it.
func Example() {
	n, err := latch()
	if err != nil {
		fmt.Println(err)
		return
	}
	k, err := branch.NewKnob(n, "loss", 0.1, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	d, err := branch.Follow(context.Background(), n, k, branch.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, w := range d.Windows {
		fmt.Printf("%s: %.5f (%v, %.1f %% away) to %.5f (%v, %.1f %% away)\n", w.State,
			w.Low.Knob, w.Low.Mark.Kind, w.Low.Distance, w.High.Knob, w.High.Mark.Kind, w.High.Distance)
	}
	// Output:
	// low: 0.34100 (fold, 29.0 % away) to 1.00000 (end of the range, 108.3 % away)
	// high: 0.10000 (end of the range, 79.2 % away) to 0.53096 (fold, 10.6 % away)
}
