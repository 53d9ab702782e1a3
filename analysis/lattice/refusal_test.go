package lattice

import (
	"context"
	"errors"
	"strings"
	"testing"
	"time"

	"holdfast/internal/zoo"
	"holdfast/model"
)

func refusal(t *testing.T, p Problem, want string) error {
	t.Helper()
	_, err := Solve(context.Background(), p)
	if err == nil || !strings.Contains(err.Error(), want) {
		t.Errorf("got %v, want an error with %q", err, want)
	}
	return err
}

func TestRefusals(t *testing.T) {
	latch := latchProblem(100, 1)

	one := latch
	one.Cores = latch.Cores[:1]
	if err := refusal(t, one, "at least two states"); !errors.Is(err, ErrOneState) {
		t.Errorf("got %v, want ErrOneState", err)
	}

	poor := latch
	poor.MaxMemory = 60 << 20
	var large *TooLargeError
	if err := refusal(t, poor, "allow more memory"); !errors.As(err, &large) || large.Estimate.States < 50000 || large.Estimate.Bytes < poor.MaxMemory {
		t.Errorf("got %v, want a TooLargeError with the estimate", err)
	}
	poor.MaxMemory = 1 << 20
	refusal(t, poor, "at least")

	twin := latch
	twin.Cores = []model.Core{latch.Cores[0], latch.Cores[0]}
	refusal(t, twin, "meets the core")

	off := latch
	off.Cores = []model.Core{latch.Cores[0], latch.Cores[1]}
	off.Cores[1].Start = []int64{0, 500}
	refusal(t, off, "does not hold its own start")
}

func TestUnreachableCore(t *testing.T) {
	chain := zoo.TwoStateCores()
	two := func(c model.Core) model.Core {
		c.Start, c.Low, c.High = []int64{0, 2}, []int64{0, 2}, []int64{0, 2}
		return c
	}
	err := refusal(t, Problem{Network: zoo.TwoStateChain(1, 1), Cores: []model.Core{chain[0], two(chain[1])}}, "conserved totals")
	var cut *UnreachableError
	if !errors.As(err, &cut) {
		t.Errorf("got %v, want an UnreachableError", err)
	}
}

func TestFourSpecies(t *testing.T) {
	d := draft{species: []string{"a", "b", "c", "d"}}
	for s := range 4 {
		d.reactions = append(d.reactions, draftReaction{makes: counts{s: 1}, k: 30}, draftReaction{uses: counts{s: 1}, k: 1})
	}
	at := func(k int64) []int64 { return []int64{k, k, k, k} }
	err := refusal(t, Problem{Network: bind(t, d, 1), Cores: []model.Core{box("low", at(20), at(20), at(20)), box("high", at(40), at(40), at(40))}}, "exact runs")
	var deep *DimensionError
	if !errors.As(err, &deep) || deep.Dimensions != 4 {
		t.Errorf("got %v, want a DimensionError for 4", err)
	}
}

func TestBadRate(t *testing.T) {
	law := model.Call(model.OpSub, model.Number(9.5), model.SpeciesRef(0))
	n := bind(t, draft{species: []string{"a"}, reactions: []draftReaction{{makes: counts{0: 1}, rate: law}, {uses: counts{0: 1}, k: 1}}}, 1)
	at := func(k int64) []int64 { return []int64{k} }
	err := refusal(t, Problem{Network: n, Cores: []model.Core{box("low", at(2), at(2), at(2)), box("high", at(9), at(9), at(9))}}, "not negative")
	var bad *RateError
	if !errors.As(err, &bad) || bad.Reaction != "r0" || bad.Counts[0] != 10 || bad.Value != -0.5 {
		t.Errorf("got %+v, want reaction r0 at 10 with −0.5", bad)
	}
}

// Growth without limit is told from a switch.
func TestRunaway(t *testing.T) {
	n := bind(t, draft{species: []string{"a"}, reactions: []draftReaction{{needs: counts{0: 1}, makes: counts{0: 1}, k: 2}, {uses: counts{0: 1}, k: 1}, {makes: counts{0: 1}, k: 1}}}, 1)
	at := func(k int64) []int64 { return []int64{k} }
	err := refusal(t, Problem{Network: n, MaxMemory: 64 << 20, Cores: []model.Core{box("low", at(2), at(2), at(2)), box("high", at(9), at(9), at(9))}}, "")
	var boxed *BoxError
	var large *TooLargeError
	if !errors.As(err, &boxed) && !errors.As(err, &large) {
		t.Errorf("got %v, want a BoxError or a TooLargeError", err)
	}
}

func TestCancel(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	p := latchProblem(30, 1)
	p.Progress = func(stage string, _ float64) {
		if stage == "eliminating" {
			cancel()
		}
	}
	if _, err := Solve(ctx, p); !errors.Is(err, context.Canceled) {
		t.Errorf("got %v, want that it was cancelled", err)
	}
}

func TestEstimate(t *testing.T) {
	p := latchProblem(30, 1)
	e, err := p.Estimate(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	s := solve(t, p)
	if e.States > s.States || e.States < s.States/2 || e.Bytes <= 0 || e.Seconds <= 0 {
		t.Errorf("estimate %+v for %d states in the end", e, s.States)
	}
}

// Two genes with dimers and an operator: of the eight species four have long
// ranges, and those are named.
func TestDimerSwitchRefused(t *testing.T) {
	n := zoo.DimerSwitch()
	at := func(k ...int64) []int64 { return k }
	low, high := at(20, 5, 0, 0, 1, 0, 0, 0), at(0, 0, 20, 5, 1, 0, 0, 0)
	err := refusal(t, Problem{Network: n, Cores: []model.Core{box("low", low, low, low), box("high", high, high, high)}}, "[a a2 b b2]")
	var deep *DimensionError
	if !errors.As(err, &deep) || deep.Dimensions != 4 {
		t.Errorf("got %v, want a DimensionError for 4", err)
	}
}

// Counts beyond any lattice are refused before they are counted.
func TestHugeCounts(t *testing.T) {
	n := bind(t, toggle(20, 20), 1e9)
	low, high := []int64{20e9, 0}, []int64{0, 20e9}
	var large *TooLargeError
	err := refusal(t, Problem{Network: n, Cores: []model.Core{box("low", low, low, low), box("high", high, high, high)}}, "at least")
	if !errors.As(err, &large) {
		t.Errorf("got %v, want a TooLargeError", err)
	}
}

// Cancelled at any moment, Solve gives the context's error: it does not go on with what
// was left half done. The moments are spread over the whole solution.
func TestCancelAnywhere(t *testing.T) {
	p := latchProblem(12, 1)
	p.Threads = 1
	begun := time.Now()
	solve(t, p)
	took := time.Since(begun)
	for i := range 30 {
		ctx, cancel := context.WithTimeout(context.Background(), took*time.Duration(i)/30)
		if s, err := Solve(ctx, p); err == nil && ctx.Err() != nil && s == nil || err != nil && !errors.Is(err, context.DeadlineExceeded) {
			t.Errorf("moment %d: %v", i, err)
		}
		cancel()
	}
}
