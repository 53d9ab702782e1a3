package separatrix_test

import (
	"context"
	"fmt"

	"holdfast/deterministic"
	"holdfast/deterministic/separatrix"
	"holdfast/model"
)

// pair is two genes that shut each other off: u' = 3/(1+v²) − u and its mirror image.
func pair() (*model.Network, error) {
	law := func(other int) *model.Node {
		return model.Call(model.OpMul, model.Number(3), model.Call(model.OpHillFall, model.SpeciesRef(other), model.Number(1), model.Number(2)))
	}
	one := func(i int) []model.Term { return []model.Term{{Species: i, Count: 1}} }
	d := model.Draft{
		Title: "pair", TimeUnit: "min", Copies: 100, Readout: 1,
		Species: []model.Species{{Name: "u"}, {Name: "v"}},
		Reactions: []model.DraftReaction{
			{Name: "make u", Rate: law(1), Makes: one(0)},
			{Name: "make v", Rate: law(0), Makes: one(1)},
			{Name: "lose u", MassAction: model.Number(1), Uses: one(0)},
			{Name: "lose v", MassAction: model.Number(1), Uses: one(1)},
		},
	}
	return d.Bind(0, nil)
}

// The separatrix, the basins' shares, and the basin of some counts.
func Example() {
	n, err := pair()
	if err != nil {
		fmt.Println(err)
		return
	}
	ctx := context.Background()
	m, err := deterministic.Survey(ctx, n, deterministic.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	curves, err := separatrix.Trace(ctx, m, separatrix.Options{High: []float64{4, 4}})
	if err != nil {
		fmt.Println(err)
		return
	}
	c := curves[0]
	fmt.Printf("through the saddle at %.4f from the %v to the %v\n", c.Points[c.At], c.Ends[0].Ending, c.Ends[1].Ending)
	basins, err := separatrix.Measure(ctx, m, separatrix.Options{High: []float64{4, 4}})
	if err != nil {
		fmt.Println(err)
		return
	}
	label, ok := separatrix.NewLattice(m).Label([]int64{90, 100})
	fmt.Printf("low has %.3f of the box; 90 and 100 molecules lie with %s: %t\n", basins.Shares[0], m.Stable()[label].Name, ok)
	// Output:
	// through the saddle at [1.2134 1.2134] from the edge of the box to the edge of the box
	// low has 0.500 of the box; 90 and 100 molecules lie with high: true
}
