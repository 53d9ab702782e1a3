package hold_test

import (
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/internal/race"
	"holdfast/model"
)

// A gene without leak has one species and no saddle, but an unstable point: what staged
// runs would take is weighed there too, and at a million copies is beyond their budget.
func TestAutoWeighsStagedRunsOfOneSpecies(t *testing.T) {
	if testing.Short() || race.Enabled {
		t.Skip("left to the plain run")
	}
	draft, err := model.Parse("gene.toml", []byte(`
title = "A gene without leak"
time = "h"
copies = 1e6
[species]
x = { start = 2, readout = true }
[[reaction]]
name = "on"
makes = { x = 1 }
rate = "2.4*hill(x, 1, 2)"
[[reaction]]
name = "off"
uses = { x = 1 }
mass_action = "1"
`))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := run(t, n, hold.Options{Seed: 1})
	if !strings.HasPrefix(r.Route, hold.Action+": ") {
		t.Errorf("route %s", r.Route)
	}
}
