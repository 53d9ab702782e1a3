package batch_test

import (
	"math"
	"path/filepath"
	"testing"

	"gonum.org/v1/gonum/mat"

	"holdfast/analysis/action"
	"holdfast/analysis/batch"
	"holdfast/deterministic"
	"holdfast/internal/race"
)

// The logarithm of the mean dwell of a batch over copies Ω grows as Ω S, where S is the
// action of the likeliest way out (Freidlin and Wentzell, Random Perturbations of Dynamical
// Systems, 2nd ed., 1998, ch. 4), which package action finds by another method. The rest
// falls off in powers of 1/Ω, so S is the second coefficient of ln τ = a + S Ω + b/Ω through
// the three largest copy numbers; its error is what a fourth one with the next power changes.
func TestSlopeIsTheAction(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	draft, err := latch()
	if err != nil {
		t.Fatal(err)
	}
	j, err := jobOf(draft, filepath.Join(t.TempDir(), "out"), []batch.Axis{axis(t, "copies=40:100:4")}, 0)
	if err != nil {
		t.Fatal(err)
	}
	run(t, j)
	s, err := batch.Summarise(j.Folder)
	if err != nil {
		t.Fatal(err)
	}
	for state, want := range actions(t) {
		var copies, logs []float64
		for _, r := range s.Rows {
			if r.Dwell.From == state {
				copies, logs = append(copies, r.Copies), append(logs, math.Log(float64(r.Dwell.Mean)))
			}
		}
		slope := slopeOf(t, copies[1:], logs[1:])
		bound := math.Abs(slopeOf(t, copies, logs) - slope)
		if math.Abs(slope-want) > bound || bound > 0.01*want {
			t.Errorf("%s: slope %.6f ± %.1g, action %.6f", state, slope, bound, want)
		}
		t.Logf("%s: slope %.6f ± %.1g, action %.6f", state, slope, bound, want)
	}
}

// actions are the actions of leaving each state of the latch.
func actions(t *testing.T) map[string]float64 {
	t.Helper()
	draft, err := latch()
	if err != nil {
		t.Fatal(err)
	}
	network, err := draft.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	survey, err := deterministic.Survey(t.Context(), network, deterministic.Options{})
	if err != nil {
		t.Fatal(err)
	}
	routes, err := action.Survey(t.Context(), survey, action.Options{})
	if err != nil {
		t.Fatal(err)
	}
	out := map[string]float64{}
	for _, p := range routes.Pairs {
		out[p.From] = p.S
	}
	return out
}

// slopeOf solves for ln τ = a + S Ω + b/Ω + c/Ω² + …, with as many terms as points, and
// gives S.
func slopeOf(t *testing.T, copies, logs []float64) float64 {
	t.Helper()
	n := len(copies)
	m := mat.NewDense(n, n, nil)
	for i, c := range copies {
		for k := range n {
			m.Set(i, k, math.Pow(c, float64(1-k)))
		}
	}
	var x mat.VecDense
	if err := x.SolveVec(m, mat.NewVecDense(n, logs)); err != nil {
		t.Fatal(err)
	}
	return x.AtVec(0)
}
