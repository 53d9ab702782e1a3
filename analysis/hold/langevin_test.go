package hold_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/sde"
)

// diffusionPassage is the mean first-passage time of a one-species Langevin equation
// from a to b with a wall at 0: ∫_a^b dy/ψ(y) ∫_0^y 2ψ(z)/g²(z)dz, ψ = exp ∫2f/g² (Gardiner,
// Handbook of Stochastic Methods, 5.2.160, from memory), by the trapezoidal rule.
func diffusionPassage(n *model.Network, a, b float64) float64 {
	const h = 0.05
	s := sde.Chemical(n)
	at := func(x float64) (push, noise float64) {
		var f, g [1]float64
		s.Drift(f[:], []float64{x})
		s.Noise(g[:], []float64{x})
		return 2 * f[0] / (g[0] * g[0]), g[0] * g[0]
	}
	logPsi, inner, outer := 0.0, 0.0, 0.0
	for x := 0.0; x < b; x += h {
		p, _ := at(x + h/2)
		_, noise := at(x + h/2)
		middle := logPsi + p*h/2
		inner += 2 * h * math.Exp(middle) / noise
		logPsi += p * h
		if x >= a {
			outer += h * math.Exp(-logPsi) * inner
		}
	}
	return outer
}

// The chain of Schlögl by Langevin paths, from its low resting point into a core from 400 up, against the
// mean time of the diffusion by quadrature (computed here), n = 400 flips, within 4.9 standard
// errors (a false alarm in a million) and what halving the step moves; the exact chain's time differs.
func TestLangevinPassage(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	n := declare(zoo.Schlogl(), counts("low", 100, 100), counts("high", 400, math.MaxInt64))
	r := run(t, n, hold.Options{Seed: 2, Route: hold.Langevin, Runs: 400, Step: 0.002})
	d := row(t, r, "low", "high", hold.Langevin)
	want := diffusionPassage(n, 100, 399.5)
	t.Logf("%v ± %v, by quadrature %v; exact chain 28.6719", d.Mean, d.StandardError, want)
	if z := (float64(d.Mean) - want) / float64(d.StandardError); math.Abs(z) > 4.9 {
		t.Errorf("mean %v ± %v, want %v: %.1f standard errors", d.Mean, d.StandardError, want, z)
	}
	s := r.Langevin.States[0]
	if s.Paths != 400 || s.Lost != 0 || math.Abs(float64(s.Change/s.Sampling)) > 4.9 {
		t.Errorf("halving: %+v", s)
	}
	if r.Work.Events != 0 || r.Work.Steps == 0 {
		t.Errorf("work: %+v", r.Work)
	}
}

// One, two and seven threads, and any lanes, give the same numbers.
func TestLangevinThreadsChangeNothing(t *testing.T) {
	n := demo(t, "latch", 15)
	want := run(t, n, hold.Options{Seed: 5, Route: hold.Langevin, Runs: 10, Threads: 1, Lanes: 1})
	for _, o := range []hold.Options{{Threads: 2}, {Threads: 7, Lanes: 3}} {
		o.Seed, o.Route, o.Runs = 5, hold.Langevin, 10
		got := run(t, n, o)
		for i, d := range got.Dwells {
			if d.Mean != want.Dwells[i].Mean || got.Langevin.States[i] != want.Langevin.States[i] {
				t.Errorf("%d threads: %v, %+v; want %v, %+v", o.Threads, d.Mean, got.Langevin.States[i], want.Dwells[i].Mean, want.Langevin.States[i])
			}
		}
	}
}

func TestLangevinBudgetIsKept(t *testing.T) {
	const budget = 1_000_000
	r := run(t, demo(t, "latch", 60), hold.Options{Seed: 2, Route: hold.Langevin, Events: budget})
	if r.Work.Steps > budget*1.1 || r.Work.Steps < budget/2 {
		t.Errorf("%d steps of a budget of %d", r.Work.Steps, budget)
	}
}

// A step beyond stability is refused with the largest good one: of the latch at its
// high state, from the eigenvalues −0.1748 and −1.275 per min that its map shows, 1/1.275.
func TestLangevinStepIsRefused(t *testing.T) {
	n := demo(t, "latch", 100)
	_, err := hold.Run(context.Background(), n, hold.Options{Route: hold.Langevin, Step: 0.9, Runs: 1})
	var option *hold.OptionError
	if !errors.As(err, &option) || !strings.Contains(err.Error(), "at most 0.784") {
		t.Errorf("got %v, want an OptionError with the largest step 0.784", err)
	}
	allowed := 0.0
	for _, copies := range []float64{20, 30, 50, 100, 200} {
		m, err := n.Rebind(copies, nil)
		if err != nil {
			t.Fatal(err)
		}
		_, err = hold.Run(context.Background(), m, hold.Options{Route: hold.Langevin, Step: 0.9, Runs: 1})
		if _, scan := fmt.Sscanf(err.Error(), "step is 0.9; it must be at most %g", &allowed); scan != nil {
			t.Fatal(err)
		}
		if _, err = hold.Run(context.Background(), m, hold.Options{Route: hold.Langevin, Step: allowed, Runs: 1, Until: 10}); err != nil {
			t.Errorf("at %v copies the step that was called good: %v", copies, err)
		}
	}
	if _, err = hold.Run(context.Background(), n, hold.Options{Step: 0.01}); !errors.As(err, &option) {
		t.Errorf("a step for no Langevin paths: got %v, want an OptionError", err)
	}
}

// breaking is the pair of genes with a law that is no number where flow is above a limit.
func breaking(t *testing.T, limit float64) *model.Network {
	t.Helper()
	d, err := model.Load(filepath.Join("..", "..", "testdata", "designs", "pair.toml"))
	if err != nil {
		t.Fatal(err)
	}
	law := model.Call(model.OpMul, model.Number(1e-9), model.Call(model.OpSqrt, model.Call(model.OpSub, model.Number(limit), model.SpeciesRef(1))))
	d.Reactions = append(d.Reactions, model.DraftReaction{Name: "brittle", Rate: law, Makes: []model.Term{{Species: 0, Count: 1}}})
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// A path whose state is not finite is stopped and counted, and never averaged: dwells
// and exposure are those of the other paths.
func TestLangevinPathsThatBreak(t *testing.T) {
	r := run(t, breaking(t, 3.4), hold.Options{Seed: 3, Route: hold.Langevin, Runs: 60, Folder: filepath.Join(t.TempDir(), "records")})
	if s := r.Langevin.States[1]; s.Lost < 1 || s.Paths >= 60 || s.Paths < 1 {
		t.Errorf("%s: %d of 60 paths count, %d lost", s.State, s.Paths, s.Lost)
	}
	for i, s := range r.Langevin.States {
		if int(r.Dwells[i].Flips) != s.Paths {
			t.Errorf("%s: %v flips of %d paths", s.State, r.Dwells[i].Flips, s.Paths)
		}
	}
	text := strings.Join(r.Warnings, "\n")
	if !strings.Contains(text, "not finite or ran away") || !strings.Contains(text, "brittle") {
		t.Errorf("no warning of lost paths that names the reaction in:\n%s", text)
	}
}

// Where a state rests below 10 molecules or can run out, the report says so.
func TestLangevinCautions(t *testing.T) {
	for design, words := range map[string][]string{
		"latch":    {"low rests at 1.12 molecules of mrna"},
		"leakless": {"cannot see extinction", "never absorbed"},
	} {
		r := run(t, demo(t, design, 50), hold.Options{Route: hold.Langevin, Runs: 2, Until: 1})
		text := strings.Join(r.Warnings, "\n")
		if strings.Contains(text, "high rests") {
			t.Errorf("%s: high, at 36 molecules of mrna or more, is warned of:\n%s", design, text)
		}
		for _, w := range words {
			if !strings.Contains(text, w) {
				t.Errorf("%s: no %q in:\n%s", design, w, text)
			}
		}
	}
}

// The verdict of the second route says how far off the approximation is, with an interval.
func TestLangevinVerdict(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	r := run(t, demo(t, "latch", 15), hold.Options{Seed: 4, Route: hold.Lattice, Second: hold.Langevin, Precision: 0.15})
	for _, v := range r.Verdicts {
		off := 1/v.Ratio - 1
		if v.Off == nil || math.Abs(float64(v.Off.Value-off)) > 1e-9 || v.Off.Low >= off || v.Off.High <= off {
			t.Errorf("%s → %s: ratio %v, off %+v", v.From, v.To, v.Ratio, v.Off)
		}
		if !strings.HasPrefix(v.Text, "approximation off by ") {
			t.Errorf("verdict %q", v.Text)
		}
	}
	if len(r.Verdicts) != 2 {
		t.Errorf("%d verdicts, want 2", len(r.Verdicts))
	}
}
