package staged_test

import (
	"context"
	"errors"
	"math"
	"testing"

	"holdfast/analysis/lattice"
	"holdfast/analysis/staged"
	"holdfast/deterministic"
	"holdfast/model"
)

// bind builds a network from a design's text (invented).
func bind(t *testing.T, text string) *model.Network {
	t.Helper()
	draft, err := model.Parse("design.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// threeSteps is a gene with two thresholds: three states, one above the other.
const threeSteps = `
time = "min"
copies = 14
[species]
x = { start = 0, readout = true }
[[reaction]]
name = "production"
makes = { x = 1 }
rate = "0.12 + hill(x, 0.7, 6) + 1.2*hill(x, 2.15, 12)"
[[reaction]]
name = "loss"
uses = { x = 1 }
mass_action = 0.8
`

// solve gives the lattice's answer for a map.
func solve(t *testing.T, m *deterministic.Map) *lattice.Solution {
	t.Helper()
	p := lattice.Problem{Network: m.Network, Cores: m.Cores}
	for _, s := range m.Stable() {
		p.States = append(p.States, lattice.Noise{Center: s.Molecules, Covariance: s.Covariance})
	}
	s, err := lattice.Solve(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Of three states the middle one is left both ways, each at its own rate; from low no
// run comes to high without entering the core of middle. Against the master equation
// on its lattice; Student's t, a false alarm in a million for each.
func TestThreeStates(t *testing.T) {
	m := survey(t, bind(t, threeSteps))
	if len(m.Stable()) != 3 {
		t.Fatalf("%d stable states, want 3", len(m.Stable()))
	}
	exact := solve(t, m)
	for _, pair := range [][2]int{{0, 1}, {1, 0}, {1, 2}, {2, 1}} {
		p := plan(m, pair[0], pair[1])
		p.Precision = 0.3
		r, truth := estimate(t, p), exact.Pair[pair[0]][pair[1]]
		if z := apart(r, 1/truth); !(math.Abs(z) < wide(len(r.Repeats))) {
			t.Errorf("%v: %.4g, want %.4g: z = %.1f", pair, 1/r.Rate, truth, z)
		}
		t.Logf("%v: %.4g, lattice %.4g, z %.1f", pair, 1/r.Rate, truth, apart(r, 1/truth))
	}
	_, err := staged.Run(context.Background(), plan(m, 0, 2))
	var stuck *staged.StuckError
	if !errors.As(err, &stuck) || stuck.Elsewhere != "middle" {
		t.Errorf("low to high: %v, want to be stuck at middle", err)
	}
}

// twoWays is a latch that is also pushed over while a second gene is on, which is
// rarely: two ways from low to high, with and without it.
const twoWays = `
time = "min"
copies = 20
[species]
x = { start = 0, readout = true }
helper = { start = 0 }
[[reaction]]
name = "production"
makes = { x = 1 }
rate = "0.01 + x^2/(1 + x^2) + 0.25*hill(helper, 0.4, 4)"
[[reaction]]
name = "loss"
uses = { x = 1 }
mass_action = 0.4
[[reaction]]
name = "helper made"
makes = { helper = 1 }
rate = "0.03"
[[reaction]]
name = "helper lost"
uses = { helper = 1 }
mass_action = 0.4
`

// A design with two ways between its states, along three coordinates, one of which
// sees a helper only that most flips may do without. Against the lattice as above.
func TestTwoWays(t *testing.T) {
	m := survey(t, bind(t, twoWays))
	exact := solve(t, m)
	a, b := m.States[0].Molecules, m.States[1].Molecules
	count, err := staged.Count(a, b, 0, "x")
	if err != nil {
		t.Fatal(err)
	}
	both := staged.Path("x and its helper", [][]float64{a, b}, [][]float64{{1, 0.7}, {1, 0.7}})
	for _, c := range []staged.Coordinate{count, both, staged.Line(a, b, m.States[0].Covariance)} {
		p := plan(m, 0, 1)
		p.Along, p.Precision = c, 0.2
		r, truth := estimate(t, p), exact.Mean[0]
		if z := apart(r, 1/truth); !(math.Abs(z) < wide(len(r.Repeats))) {
			t.Errorf("along %s: %.4g, want %.4g: z = %.1f", c.Name, 1/r.Rate, truth, z)
		}
		t.Logf("along %s: %.4g, lattice %.4g, z %.1f, disagreement %.2f", c.Name, 1/r.Rate, truth, apart(r, 1/truth), r.Disagreement)
	}
}
