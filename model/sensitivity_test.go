package model_test

import (
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// networks are laws of every sort: mass action of several orders, with species of fixed
// count, Hill exponents and powers, bursts.
func sensitiveNetworks() []*model.Network {
	return []*model.Network{
		zoo.Schlogl(), zoo.Latch(37), zoo.AsymmetricRepression(3, 2.5, 2.2, 1.7, 12), zoo.DimerSwitch(),
		zoo.BurstLatch(9), zoo.SelfActivator(1.1, 0.7, 0.4, 2.6, 23), scaledOperator(),
	}
}

// scaledOperator has a site of fixed count beside a protein that scales with copies.
func scaledOperator() *model.Network {
	c := model.ConstantRef
	d := model.Draft{
		Title: "site and protein", TimeUnit: "min", Copies: 40,
		Species:   []model.Species{{Name: "x", Start: 1}, {Name: "free", Start: 1, Fixed: true}, {Name: "bound", Fixed: true}},
		Constants: []model.Constant{{Name: "bind", Value: 0.6}, {Name: "leave", Value: 0.2}, {Name: "make", Value: 0.9}, {Name: "loss", Value: 0.3}},
		Reactions: []model.DraftReaction{
			{Name: "bind", Uses: []model.Term{{Species: 0, Count: 2}, {Species: 1, Count: 1}}, Makes: []model.Term{{Species: 2, Count: 1}}, MassAction: c(0)},
			{Name: "leave", Uses: []model.Term{{Species: 2, Count: 1}}, Makes: []model.Term{{Species: 0, Count: 2}, {Species: 1, Count: 1}}, Rate: model.Call(model.OpMul, c(1), model.Call(model.OpMul, model.SpeciesRef(2), model.SpeciesRef(0)))},
			{Name: "make", Needs: []model.Term{{Species: 2, Count: 1}}, Makes: []model.Term{{Species: 0, Count: 1}}, MassAction: c(2)},
			{Name: "loss", Uses: []model.Term{{Species: 0, Count: 1}}, MassAction: model.Call(model.OpMul, c(3), c(3))},
		},
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		panic(err)
	}
	return n
}

// at gives the network with constant k, or copies for k beyond the last, multiplied.
func at(t *testing.T, n *model.Network, k int, factor float64) *model.Network {
	t.Helper()
	copies, set := n.Copies*factor, map[string]float64{}
	if k < len(n.Constants) {
		copies, set = 0, map[string]float64{n.Constants[k].Name: n.Constants[k].Value * factor}
	}
	out, err := n.Rebind(copies, set)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// Derivatives of propensities in every constant and in copies against central differences
// in networks bound anew. With a step of 1e-4 the error of truncation is of the order of
// 1e-8 times the third derivative, and that of rounding 1e-12: 1e-6 of the propensity is
// allowed.
func TestPropensityConstants(t *testing.T) {
	const h = 1e-4
	for _, n := range sensitiveNetworks() {
		counts := make([]int64, len(n.Species))
		for i := range counts {
			counts[i] = int64(3 + 4*i)
		}
		slope := make([]float64, len(n.Constants)+1)
		for r := range n.Reactions {
			last := len(n.Constants)
			slope[last] = n.PropensityConstants(r, counts, slope[:last])
			for k, got := range slope {
				value := n.Copies
				if k < last {
					value = n.Constants[k].Value
				}
				up, down := at(t, n, k, 1+h).Propensity(r, counts), at(t, n, k, 1-h).Propensity(r, counts)
				want := (up - down) / (2 * h)
				if math.Abs(got*value-want) > 1e-6*math.Abs(n.Propensity(r, counts)) {
					t.Errorf("%s, %s, parameter %d: %v, want %v", n.Title, n.Reactions[r].Name, k, got*value, want)
				}
			}
		}
	}
}

// Where what a reaction uses is not there its propensity is 0, and so are its slopes.
func TestPropensityConstantsWithoutReactants(t *testing.T) {
	for _, n := range sensitiveNetworks() {
		dc := make([]float64, len(n.Constants))
		for r := range n.Reactions {
			if len(n.Reactions[r].Uses) == 0 {
				continue
			}
			copies := n.PropensityConstants(r, make([]int64, len(n.Species)), dc)
			for _, d := range append(dc, copies) {
				if d != 0 {
					t.Errorf("%s, %s: slopes %v and %v", n.Title, n.Reactions[r].Name, dc, copies)
					break
				}
			}
		}
	}
}

// The mean of a burst made of two constants, by the product rule.
func TestBurstConstants(t *testing.T) {
	n := zoo.BurstLatch(10)
	dc := make([]float64, len(n.Constants))
	n.BurstConstants(n.Reactions[0].Bursts[0], dc)
	size, plenty := n.ConstantIndex("size"), n.ConstantIndex("plenty")
	for k, got := range dc {
		want := map[int]float64{size: n.Constants[plenty].Value, plenty: n.Constants[size].Value}[k]
		if got != want {
			t.Errorf("%s: %v, want %v", n.Constants[k].Name, got, want)
		}
	}
	n.BurstConstants(model.Term{Burst: 3}, dc)
	if dc[size] != 0 {
		t.Errorf("a plain number has the slope %v", dc[size])
	}
}

func TestReadsConstant(t *testing.T) {
	d := zoo.BurstLatch(10).Draft()
	d.Constants = append(d.Constants, model.Constant{Name: "idle", Value: 1})
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	for k, c := range n.Constants {
		if n.ReadsConstant(k) != (c.Name != "idle") {
			t.Errorf("%s: %v", c.Name, n.ReadsConstant(k))
		}
	}
}

// Sites do not come with copies; a closed pair of protein forms does.
func TestTotalsScale(t *testing.T) {
	if zoo.TwoStateChain(1, 1).TotalsScale() || zoo.DimerSwitch().TotalsScale() || scaledOperator().TotalsScale() {
		t.Error("a total of fixed counts is taken to scale")
	}
	if !zoo.Chain(3, 1, 5).TotalsScale() {
		t.Error("a total that scales is not seen")
	}
}
