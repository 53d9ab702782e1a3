package hold_test

import (
	"math"
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/internal/race"
	"holdfast/model"
)

// coupled is a pair of genes that keep themselves on and pass protein to each other: both
// off or both on, with a saddle for either to go first.
const coupled = `
title = "Two vats that share what they make"
time = "min"
copies = 25
[species]
x = { start = 0, readout = true }
y = { start = 0 }
[[reaction]]
name = "x made"
makes = { x = 1 }
rate = "0.1 + 1.5*hill(x, 1, 4)"
[[reaction]]
name = "y made"
makes = { y = 1 }
rate = "0.1 + 1.5*hill(y, 1, 4)"
[[reaction]]
name = "x lost"
uses = { x = 1 }
mass_action = "0.8"
[[reaction]]
name = "y lost"
uses = { y = 1 }
mass_action = "0.8"
[[reaction]]
name = "x to y"
uses = { x = 1 }
makes = { y = 1 }
mass_action = "0.3"
[[reaction]]
name = "y to x"
uses = { y = 1 }
makes = { x = 1 }
mass_action = "0.3"
`

// Two ways of the same action lead from a state to the other: staged runs count both,
// against the lattice (computed by elimination without subtraction). Along the path by one
// of them they would miss half of the flips and not know it. The statistic is the logarithm
// of the ratio over the relative standard error, Student's t with nine degrees of freedom
// or more, within ±10.7 (a false alarm in a million or less).
func TestStagedRunsCountBothWays(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	draft, err := model.Parse("coupled.toml", []byte(coupled))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := run(t, n, hold.Options{Seed: 1, Route: hold.Staged, Second: hold.Lattice, Precision: 0.2})
	for _, s := range r.Staged {
		if !strings.Contains(s.Along, "2 saddles join the two") {
			t.Errorf("%s → %s is measured along %s", s.From, s.To, s.Along)
		}
	}
	for k := range 2 {
		s, exact := r.Dwells[k], r.Dwells[k+2]
		z := math.Log(float64(s.Mean/exact.Mean)) * float64(s.Mean/s.StandardError)
		t.Logf("%s → %s: %.4g by %s, %.4g by %s: z = %.1f", s.From, s.To, s.Mean, s.Route, exact.Mean, exact.Route, z)
		if !(math.Abs(z) < 10.7) {
			t.Errorf("%s → %s: z = %.1f", s.From, s.To, z)
		}
	}
}
