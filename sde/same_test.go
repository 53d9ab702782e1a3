package sde_test

import (
	"context"
	"fmt"
	"math"
	"reflect"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/sde"
)

// Outcomes and samples do not depend on threads, lanes, or shards.
func TestSameBytes(t *testing.T) {
	plans := []sde.Plan{
		latch(),
		{System: sde.Chemical(zoo.DimerSwitch()), From: -1, MaxSteps: 1500},
		{System: doubleWell{0.3}, Start: []float64{-1}, From: -1, Cores: []model.Core{zoo.Interval("right", 1, 5, 1)}},
		{System: sde.Chemical(zoo.SymmetricRepression(3, 20)), From: -1, Until: 15},
	}
	for i, p := range plans {
		p.Runs, p.Seed, p.Point, p.Group, p.Step = 60, 21, 3, 1, 0
		if p.Until == 0 {
			p.Until = 16
		}
		p.Times = []float64{1, 2, 15}
		want, wantSamples := sampled(t, p, 0, p.Runs)
		for _, threads := range []int{1, 2, 7} {
			for _, lanes := range []int{1, 5, 33} {
				p.Threads, p.Lanes = threads, lanes
				got, samples := sampled(t, p, 0, p.Runs)
				if !reflect.DeepEqual(got, want) || !reflect.DeepEqual(samples, wantSamples) {
					t.Fatalf("plan %d: %d threads and %d lanes give other outcomes", i, threads, lanes)
				}
			}
		}
		a, _ := sampled(t, p, 0, 13)
		b, _ := sampled(t, p, 13, p.Runs-13)
		if !reflect.DeepEqual(append(a, b...), want) {
			t.Fatalf("plan %d: shards give other outcomes", i)
		}
	}
}

func sampled(t *testing.T, p sde.Plan, first, runs int) ([]sde.Outcome, []float64) {
	t.Helper()
	n := p.System.Dimension()
	samples := make([]float64, runs*len(p.Times)*n)
	p.FirstReplicate, p.Runs = uint64(first), runs
	p.Sample = func(run, k int, _ float64, x []float64) { copy(samples[(run*len(p.Times)+k)*n:], x) }
	return run(t, p).Outcomes, samples
}

// Outcomes as they were when the engine was first written: a seed means the same
// runs in every later version.
func TestFrozen(t *testing.T) {
	var got strings.Builder
	for _, net := range []*model.Network{
		zoo.Latch(20), zoo.Schlogl(), zoo.DimerSwitch(), zoo.BurstExpression(1, 20, 0.1), zoo.SymmetricRepression(3, 20),
	} {
		p := sde.Plan{System: sde.Chemical(net), From: -1, Runs: 1, Seed: 42, Point: 7, Group: 1, FirstReplicate: 5, MaxSteps: 1000, Step: 0.001}
		o := run(t, p).Outcomes[0]
		got.WriteString(fmt.Sprintf("%s: %.12g\n", net.Title, o.State))
	}
	if got.String() != frozen {
		t.Errorf("outcomes have changed:\n%s", got.String())
	}
}

const frozen = `one-gene latch: [0.281866622062 0.509813268737]
one-species chain with two states: [127.761918154]
two genes, dimers, two overlapping operators: [1.62834480644 10.2269179907 0.141789405468 0 0.110816079615 0.889183920385 0 0]
expression in bursts: [17.8411424929]
a pair of genes that repress each other: [32.0789127129 14.9553893175]
`

// Half the step: the double well at a coarse step has a passage time that is too long by
// what the scheme itself has; the helper shows it. n = 20,000 twice.
func TestHalve(t *testing.T) {
	long(t)
	p := sde.Plan{
		System: doubleWell{0.2}, Start: []float64{-1}, From: -1, Cell: 1e-3, Cores: above(-5e-4, 1e-3), Step: 0.1, Runs: 20_000, Seed: 22,
	}
	h, err := sde.Halve(context.Background(), p)
	if err != nil || h.Half.Step != 0.05 || h.Full.Step != 0.1 {
		t.Fatalf("%v, steps %v and %v", err, h.Full.Step, h.Half.Step)
	}
	difference, sampling := h.StepError()
	want := schemePassage(p.System, 0.1, -1, -3, -5e-4) - schemePassage(p.System, 0.05, -1, -3, -5e-4)
	t.Logf("step error %v ± %v, want %v", difference, sampling, want)
	if math.Abs(difference-want) > alarm*sampling || want < 3*sampling {
		t.Errorf("step error %v ± %v, want %v", difference, sampling, want)
	}
	p.Cores, p.MaxSteps, p.Runs = nil, 10, 2
	h, err = sde.Halve(context.Background(), p)
	if d, _ := h.StepError(); err != nil || !math.IsNaN(d) || h.Half.Steps != 40 {
		t.Errorf("%v, %v, %d steps with half the step", d, err, h.Half.Steps)
	}
}
