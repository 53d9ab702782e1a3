package hold_test

import (
	"context"
	"errors"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// TestActionCarriesOn: prefactors found at about 60 to 130 copies and carried on to
// 200 and 400 must hold the lattice's means there (computed, by the route
// lattice; those at 200 are in the README's table). The intervals are to be of
// use: within a factor of 1.1.
func TestActionCarriesOn(t *testing.T) {
	if race.Enabled {
		t.Skip("six lattices")
	}
	for copies, want := range map[float64]map[string]float64{
		200: {"low": 1.784666e9, "high": 2.445223e8},
		400: {"low": 3.0360107792783184e16, "high": 2.3711793834743515e15},
	} {
		r := run(t, demo(t, "latch", copies), hold.Options{Seed: 1, Route: hold.Action})
		for from, to := range map[string]string{"low": "high", "high": "low"} {
			d := row(t, r, from, to, hold.Action)
			if float64(d.Low) > want[from] || float64(d.High) < want[from] || d.High > 1.1*d.Low {
				t.Errorf("%s at %v copies: %v [%v, %v], want %v", from, copies, d.Mean, d.Low, d.High, want[from])
			}
		}
		for _, p := range r.Action.Paths {
			if len(p.Copies) != 3 || float64(p.Copies[2]) >= copies || p.Source != hold.Lattice {
				t.Errorf("the prefactor comes from %v copies by %s", p.Copies, p.Source)
			}
		}
	}
}

// TestActionLargeCopies: a state with a dwell beyond 1e308 has it by its logarithm, and
// the path goes into the records; the state that is never left says so.
func TestActionLargeCopies(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "records")
	r := run(t, demo(t, "leakless", 20000), hold.Options{Seed: 1, Route: hold.Action, Folder: folder})
	d := row(t, r, "high", "low", hold.Action)
	s := float64(r.Action.Paths[0].Exponent) // its prefactor is between 1 and 1000 min
	if lead := 20000 * s / math.Ln10; d.Logs == nil || float64(d.Logs.Mean) < lead || float64(d.Logs.Mean) > lead+3 {
		t.Fatalf("log10 of the mean %+v, want %v to %v", d.Logs, lead, lead+3)
	}
	if !math.IsInf(float64(d.Mean), 1) || d.Holds[2].Chance != 1 || d.LogPerGeneration.Mean > -300 {
		t.Errorf("mean %v, chance %v, per generation 10^%v", d.Mean, d.Holds[2].Chance, d.LogPerGeneration.Mean)
	}
	if off := row(t, r, "low", "high", "absorbing"); !off.Never {
		t.Error("the off state is left")
	}
	checkPathTable(t, folder, s)
}

// checkPathTable sees that the path begins in the on state, whose protein is
// (1+√(1−4a²b²))/(2ab) (zoo.LeaklessStates), ends in the off state, and spends s.
func checkPathTable(t *testing.T, folder string, s float64) {
	t.Helper()
	record, err := records.Open(folder)
	if err != nil {
		t.Fatal(err)
	}
	table, err := record.Table("action_path")
	if err != nil {
		t.Fatal(err)
	}
	defer table.Close()
	b, err := table.Next()
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"amount_mrna", "momentum_mrna", "momentum_protein"} {
		if _, err := b.Floats(name); err != nil {
			t.Error(err)
		}
	}
	_, on := zoo.LeaklessStates(0.45, 1)
	for name, want := range map[string][2]float64{"action": {0, s}, "position": {0, 1}, "amount_protein": {on, 0}} {
		got, err := b.Floats(name)
		if err != nil {
			t.Fatal(err)
		}
		if last := got[len(got)-1]; math.Abs(got[0]-want[0]) > 1e-12 || math.Abs(last-want[1]) > 1e-12 {
			t.Errorf("%s from %v to %v, want %v", name, got[0], last, want)
		}
	}
	if from, err := b.Labels("from"); err != nil || from[0] != "high" {
		t.Errorf("leaves %v, %v", from, err)
	}
}

// TestActionRefuses: what the route cannot serve, in words that say what to take.
func TestActionRefuses(t *testing.T) {
	for name, c := range map[string]struct {
		network *model.Network
		says    string
	}{
		"operator":    {demo(t, "operator", 50), "a species of fixed count, and its noise does not vanish"},
		"few copies":  {demo(t, "latch", 20), "are not rare"},
		"no state":    {declare(zoo.Schlogl(), counts("low", 100, 100), counts("far", 600, 600)), "is no resting state"},
		"few species": {zoo.ImmigrationDeath(1, 0.1), "one stable state"},
	} {
		_, err := hold.Run(context.Background(), c.network, hold.Options{Route: hold.Action})
		if err == nil || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: %v; want %q", name, err, c.says)
		}
	}
}

// TestActionStops: a job that is stopped says so.
func TestActionStops(t *testing.T) {
	if race.Enabled {
		t.Skip("a lattice")
	}
	ctx, cancel := context.WithCancel(context.Background())
	n := demo(t, "latch", 300)
	stop := func(p hold.Progress) {
		if strings.HasPrefix(p.Stage, "action: lattice") {
			cancel()
		}
	}
	r, err := hold.Run(ctx, n, hold.Options{Route: hold.Action, Progress: stop})
	if err != nil && !errors.Is(err, context.Canceled) {
		t.Fatal(err)
	}
	if err == nil && (!r.Interrupted || len(r.Dwells) != 0) {
		t.Errorf("interrupted %v, %d rows", r.Interrupted, len(r.Dwells))
	}
}
