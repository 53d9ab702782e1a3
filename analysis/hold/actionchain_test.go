package hold_test

import (
	"testing"

	"holdfast/analysis/hold"
	"holdfast/model"
)

// population has two levels and dies out from the lower one: no individuals are never
// left, and the flow leads away from there.
const population = `
title = "two levels of a population"
time = "min"
generation = 10.0
copies = 400
[species]
p = { start = 1, readout = true }
[[reaction]]
name = "birth"
needs = { p = 1 }
makes = { p = 1 }
rate = "p*(1 + 2*p^4/(1+p^4))"
[[reaction]]
name = "death"
uses = { p = 1 }
rate = "p*(0.5 + 1.4*p)"
`

// TestActionWithExtinction holds all ways out of both states, that to extinction among
// them (1e19 min at 400 copies), against the lattice, which solves a chain of one
// species to rounding.
func TestActionWithExtinction(t *testing.T) {
	draft, err := model.Parse("population.toml", []byte(population))
	if err != nil {
		t.Fatal(err)
	}
	for _, copies := range []float64{300, 400} {
		n, err := draft.Bind(copies, nil)
		if err != nil {
			t.Fatal(err)
		}
		r := run(t, n, hold.Options{Seed: 1, Route: hold.Action, Second: hold.Lattice})
		pairs := 0
		for _, d := range r.Dwells {
			if d.Route != hold.Action {
				continue
			}
			pairs++
			if want := row(t, r, d.From, d.To, hold.Lattice).Mean; want < d.Low || want > d.High || d.High > 1.2*d.Low {
				t.Errorf("%v copies, %s to %s: %v [%v, %v], lattice %v", copies, d.From, d.To, d.Mean, d.Low, d.High, want)
			}
		}
		if pairs != 4 {
			t.Errorf("%d rows by action, want those of low to any, high and absorbed, and high to low", pairs)
		}
		for _, v := range r.Verdicts {
			if !v.Agree {
				t.Errorf("%s to %s: %s", v.From, v.To, v.Text)
			}
		}
	}
}
