package sizing_test

import (
	"context"
	"math"
	"slices"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/analysis/lattice"
	"holdfast/analysis/sizing"
	"holdfast/deterministic"
	"holdfast/model"
)

// The one-species chain with two states of zoo.Schlogl in units of 100 molecules, so
// that it can be had at any size: at copies = 100 it is that.
const chainText = `
title = "One-species chain"
time = "min"
copies = 100
[species]
x = { start = 1 }
[constants]
k1 = 2.5
k2 = 18
k3 = 37.5
k4 = 22
[[reaction]]
name = "three to two"
needs = { x = 2 }
uses = { x = 1 }
mass_action = "k1"
[[reaction]]
name = "two to three"
needs = { x = 2 }
makes = { x = 1 }
mass_action = "k2"
[[reaction]]
name = "loss"
uses = { x = 1 }
mass_action = "k3"
[[reaction]]
name = "source"
makes = { x = 1 }
mass_action = "k4"
`

func chain(t testing.TB) *model.Network {
	t.Helper()
	draft, err := model.Parse("chain.toml", []byte(chainText))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// chainMeans gives the mean dwells of low and high at a size, by the closed sums for a
// chain of births and deaths (Gardiner, Handbook of Stochastic Methods, ch. 7; here as
// the recursions for the mean time of one step up, and down). NaN where the two states
// share a lattice point.
func chainMeans(t testing.TB, n *model.Network, copies float64) (low, high float64) {
	t.Helper()
	bound, err := n.Rebind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	m, err := deterministic.Survey(context.Background(), bound, deterministic.Options{})
	if err != nil {
		return math.NaN(), math.NaN()
	}
	birth := func(k float64) float64 { return 22*copies + 18*k*(k-1)/copies }
	death := func(k float64) float64 { return 37.5*k + 2.5*k*(k-1)*(k-2)/(copies*copies) }
	up, step := 0.0, 0.0
	for k := 0.0; k < float64(m.Cores[1].Low[0]); k++ {
		step = (1 + death(k)*step) / birth(k)
		if k >= float64(m.Cores[0].Start[0]) {
			up += step
		}
	}
	down, back := 0.0, 0.0
	for k := 12*copies + 60; k > float64(m.Cores[0].High[0]); k-- { // the law is nothing beyond
		back = (1 + birth(k)*back) / death(k)
		if k <= float64(m.Cores[1].Start[0]) {
			down += back
		}
	}
	return up, down
}

// meansTo gives the lesser of the two means, and each, by copies.
func meansTo(t testing.TB, n *model.Network, most int) (low, high []float64) {
	t.Helper()
	low, high = make([]float64, most+1), make([]float64, most+1)
	for k := 1; k <= most; k++ {
		low[k], high[k] = chainMeans(t, n, float64(k))
	}
	return low, high
}

// first gives the smallest number of copies at which the mean is enough, and the one
// from which on it is.
func first(mean []float64, least float64) (smallest, steady int) {
	for k := len(mean) - 1; k > 0; k-- {
		if mean[k] >= least {
			smallest = k
		} else if steady == 0 {
			steady = k + 1
		}
	}
	return smallest, steady
}

// The smallest copies of a chain whose means are known in closed form, for thresholds
// on both sides of the design's size, and for both states together.
func TestSmallestOfChain(t *testing.T) {
	n := chain(t)
	low, high := meansTo(t, n, 220)
	for _, c := range []struct {
		text  string
		mean  []float64
		least float64
	}{
		{"high >= 12 min", high, 12},
		{"high >= 40 min", high, 40},
		{"low >= 200 min", low, 200},
		{"low >= 5 min", low, 5},
		{"every >= 30 min", high, 30},
		{"high >= 3 min", high, 3},
	} {
		want, steady := first(c.mean, c.least)
		r := size(t, n, sizing.Options{Knob: sizing.Knob{Name: "copies", Low: 1, High: 220}}, c.text)
		if r.Outcome != sizing.Met {
			t.Errorf("%s: %s, want %d", c.text, r.Outcome, want)
			continue
		}
		a := r.Answer
		if want == steady && (float64(a.Setting) != float64(want) || a.Steady != a.Setting || a.Short != a.Setting-1) {
			t.Errorf("%s: %+v, want %d", c.text, a, want)
		}
		if at := int(a.Setting); !(c.mean[at] >= c.least) || c.mean[at-1] >= c.least {
			t.Errorf("%s: %d gives %v, %d gives %v", c.text, at, c.mean[at], at-1, c.mean[at-1])
		}
		if a.May != a.Setting || a.Surely != a.Setting {
			t.Errorf("%s: the lattice is exact, but the answer is from %v to %v", c.text, a.May, a.Surely)
		}
		if len(r.Evaluations) > 25 {
			t.Errorf("%s: %d evaluations; root finding takes fewer", c.text, len(r.Evaluations))
		}
		for i := range r.Evaluations {
			e := &r.Evaluations[i]
			if e.Vanished == "" && c.text[0] != 'e' && math.Abs(float64(e.Checks[0].Found)/c.mean[int(e.Setting)]-1) > 1e-8 {
				t.Errorf("%s: at %v found %v, want %v", c.text, e.Setting, e.Checks[0].Found, c.mean[int(e.Setting)])
			}
		}
	}
}

// At small sizes the cores of the latch are a few lattice points, and its dwell times
// fall now and then as copies grow. A threshold between two such numbers has more than
// one crossing: the answer is one of them, and the number from which on it is steady is
// that of all numbers, each solved by itself.
func TestNotMonotone(t *testing.T) {
	n := demo(t, "latch", 12)
	const most = 24
	low := make([]float64, most+1)
	for k := 1; k <= most; k++ {
		low[k] = latticeMean(t, n, float64(k), "low")
	}
	tried := 0
	for k := 1; k < most; k++ {
		if !(low[k+1] < low[k]*(1-1e-6)) {
			continue
		}
		tried++
		least := (low[k] + low[k+1]) / 2
		_, steady := first(low, least)
		spec := sizing.Spec{State: "low", Amount: least, Unit: "min", Time: least}
		r, err := sizing.Run(context.Background(), n, sizing.Options{Specs: []sizing.Spec{spec}, Knob: sizing.Knob{Name: "copies", Low: 1, High: most}})
		if err != nil {
			t.Fatal(err)
		}
		at := int(r.Answer.Setting)
		if low[at] < least || at > 1 && low[at-1] >= least || int(r.Answer.Steady) != steady || at != steady && len(r.Warnings) == 0 {
			t.Errorf("least %v, falling from %d to %d: answer %v, steady from %v, want %d; warnings %v", least, k, k+1, r.Answer.Setting, r.Answer.Steady, steady, r.Warnings)
		}
	}
	if tried == 0 {
		t.Error("the latch is monotone in copies: find another design for this test")
	}
}

// latticeMean solves the master equation at so many copies; NaN where the two states
// share a lattice point.
func latticeMean(t testing.TB, n *model.Network, copies float64, state string) float64 {
	t.Helper()
	bound, err := n.Rebind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	m, err := deterministic.Survey(context.Background(), bound, deterministic.Options{})
	if err != nil {
		return math.NaN()
	}
	s, err := lattice.Solve(context.Background(), lattice.Problem{Network: bound, Cores: m.Cores, MeansOnly: true})
	if err != nil {
		t.Fatal(err)
	}
	return s.Mean[slices.Index(s.Names, state)]
}

// A chance of holding comes from the rate of escape: with it, the smallest copies are
// those of a direct job of package hold.
func TestChanceOfChain(t *testing.T) {
	n := chain(t)
	r := size(t, n, sizing.Options{Knob: sizing.Knob{Name: "copies", Low: 1, High: 200}}, "high holds 5 min with chance 0.9")
	at := float64(r.Answer.Setting)
	for k, meets := range map[float64]bool{at: true, at - 1: false} {
		bound, err := n.Rebind(k, nil)
		if err != nil {
			t.Fatal(err)
		}
		timed := *bound
		timed.Generation = 5
		h, err := hold.Run(context.Background(), &timed, hold.Options{Route: hold.Lattice, Holds: []float64{1}})
		if err != nil {
			t.Fatal(err)
		}
		for _, d := range h.Dwells {
			if d.From == "high" && d.Holds[0].Chance >= 0.9 != meets {
				t.Errorf("%v copies: chance %v", k, d.Holds[0].Chance)
			}
		}
	}
}
