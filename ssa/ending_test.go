package ssa_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"
	"time"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/ssa"
)

// network binds reactions over species x, y, … in molecules.
func network(t testing.TB, species int, reactions ...model.DraftReaction) *model.Network {
	t.Helper()
	d := model.Draft{Copies: 1, Reactions: reactions}
	for i := range species {
		d.Species = append(d.Species, model.Species{Name: string(rune('x' + i))})
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func one(species int) []model.Term { return []model.Term{{Species: species, Count: 1}} }

func made(k float64) model.DraftReaction {
	return model.DraftReaction{Name: "made", MassAction: model.Number(k), Makes: one(0)}
}

func lost(k float64) model.DraftReaction {
	return model.DraftReaction{Name: "lost", MassAction: model.Number(k), Uses: one(0)}
}

// law is a reaction that makes species 0 at a given law.
func law(name string, rate *model.Node) model.DraftReaction {
	return model.DraftReaction{Name: name, Rate: rate, Makes: one(0)}
}

// eachMethod runs a test with every method.
func eachMethod(t *testing.T, f func(t *testing.T, m ssa.Method)) {
	for _, m := range []ssa.Method{ssa.Auto, ssa.Dense, ssa.Sparse} {
		t.Run(m.String(), func(t *testing.T) { f(t, m) })
	}
}

// outcomes runs a plan without cores and tests how each run ended.
func outcomes(t *testing.T, p ssa.Plan, want ssa.Ending) []ssa.Outcome {
	t.Helper()
	if p.Cores == nil {
		p.From = -1
	}
	if p.Runs == 0 {
		p.Runs = 10
	}
	res := run(t, p)
	for _, o := range res.Outcomes {
		if o.Ending != want {
			t.Fatalf("run %d ended %v at %v after %d events, counts %v; want %v", o.Replicate, o.Ending, o.Time, o.Events, o.Counts, want)
		}
	}
	return res.Outcomes
}

// The law 5−x, and one that reads two species, go negative when x is 6.
func TestNegativeRate(t *testing.T) {
	five := model.Call(model.OpSub, model.Number(5), model.SpeciesRef(0))
	both := model.Call(model.OpAdd, five, model.Call(model.OpMul, model.Number(0), model.SpeciesRef(1)))
	for _, rate := range []*model.Node{five, both} {
		net := network(t, 2, made(1), law("falling", rate))
		eachMethod(t, func(t *testing.T, m ssa.Method) {
			for _, o := range outcomes(t, ssa.Plan{Network: net, Method: m}, ssa.BadRate) {
				var e *ssa.RateError
				if !errors.As(o.Err(), &e) || e.Name != "falling" || e.Reaction != 1 || e.Value != -1 || e.Counts[0] != 6 || o.Events != 6 {
					t.Errorf("run %d: %v, error %v", o.Replicate, o, o.Err())
				}
				if s := o.Err().Error(); !strings.Contains(s, `"falling"`) || !strings.Contains(s, "-1") || !strings.Contains(s, "[6 0]") {
					t.Errorf("the error does not name reaction, value and state: %s", s)
				}
			}
		})
	}
}

// A rate that is not a number, or infinite, at the start or later.
func TestRateNotFinite(t *testing.T) {
	inverse := model.Call(model.OpDiv, model.Number(1), model.Call(model.OpSub, model.SpeciesRef(0), model.Number(3)))
	square := model.Call(model.OpSqrt, model.Call(model.OpSub, model.SpeciesRef(0), model.Number(1)))
	cases := map[string]struct {
		net *model.Network
		at  int64
	}{
		"+Inf": {network(t, 1, made(1), law("inverse", model.Call(model.OpAbs, inverse))), 3},
		"NaN":  {network(t, 1, made(1), law("root", square)), 0},
	}
	for value, c := range cases {
		eachMethod(t, func(t *testing.T, m ssa.Method) {
			for _, o := range outcomes(t, ssa.Plan{Network: c.net, Method: m}, ssa.BadRate) {
				if o.Counts[0] != c.at || !strings.Contains(o.Err().Error(), value) {
					t.Errorf("%v: %v", o, o.Err())
				}
			}
		})
	}
}

func TestRunaway(t *testing.T) {
	net := network(t, 1, model.DraftReaction{MassAction: model.Number(1), Needs: one(0), Makes: one(0)})
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		for _, o := range outcomes(t, ssa.Plan{Network: net, Start: []int64{1}, MaxCount: 1000, Method: m}, ssa.RanAway) {
			var e *ssa.RunawayError
			if !errors.As(o.Err(), &e) || e.Species != 0 || e.Counts[0] != 1001 || o.Events != 1000 {
				t.Errorf("%v: %v", o, o.Err())
			}
		}
	})
}

// Pure death from 3: absorbed after 3 events, at their time, with samples to the end.
func TestAbsorbed(t *testing.T) {
	net := network(t, 1, lost(1))
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		seen := 0
		p := ssa.Plan{Network: net, Start: []int64{3}, Until: 1000, Times: []float64{0, 900, 1000}, Method: m, Threads: 1}
		p.Sample = func(_, k int, _ float64, c []int64) {
			if want := []int64{3, 0, 0}[k]; c[0] != want {
				t.Errorf("sample %d is %d, want %d", k, c[0], want)
			}
			seen++
		}
		for _, o := range outcomes(t, p, ssa.Absorbed) {
			if o.Events != 3 || o.Counts[0] != 0 || o.Time <= 0 || o.Time >= 100 || o.Ending.Early() || o.Err() != nil {
				t.Errorf("%v", o)
			}
		}
		if seen != 30 {
			t.Errorf("%d samples, want 30", seen)
		}
		for _, o := range outcomes(t, ssa.Plan{Network: net, Start: []int64{0}, Method: m}, ssa.Absorbed) {
			if o.Time != 0 || o.Events != 0 {
				t.Errorf("absorbed at the start: %v", o)
			}
		}
	})
}

// A network without reactions, or with none but at rate 0, is absorbed at once.
func TestNoReactions(t *testing.T) {
	for _, net := range []*model.Network{network(t, 1), network(t, 1, made(0)), network(t, 12, made(0))} {
		eachMethod(t, func(t *testing.T, m ssa.Method) {
			outcomes(t, ssa.Plan{Network: net, Method: m}, ssa.Absorbed)
		})
	}
}

// A reaction at rate 0 never fires and changes no law: the others' runs stay.
func TestZeroRate(t *testing.T) {
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		for _, o := range outcomes(t, ssa.Plan{Network: network(t, 2, made(1), lost(0)), MaxEvents: 1000, Method: m}, ssa.EventBudget) {
			if o.Counts[0] != 1000 {
				t.Errorf("%v", o)
			}
		}
	})
}

func TestHorizon(t *testing.T) {
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		p := ssa.Plan{Network: network(t, 1, made(100), lost(1)), Until: 2.5, Times: []float64{2.5}, Method: m, Runs: 50}
		last := make([]int64, p.Runs)
		p.Sample = func(run, _ int, _ float64, c []int64) { last[run] = c[0] }
		for i, o := range outcomes(t, p, ssa.Horizon) {
			if o.Time != 2.5 || o.Counts[0] != last[i] {
				t.Errorf("%v, sampled %d", o, last[i])
			}
		}
		// A horizon before any event.
		p.Until, p.Times = 1e-300, nil
		for _, o := range outcomes(t, p, ssa.Horizon) {
			if o.Events != 0 || o.Time != 1e-300 {
				t.Errorf("%v", o)
			}
		}
	})
}

// Runs to a budget, then to a horizon that the same runs reach one event later,
// have the same states: the state at the horizon is that before the next event.
func TestStateAtHorizon(t *testing.T) {
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		net := zoo.Latch(10)
		p := ssa.Plan{Network: net, MaxEvents: 500, Method: m}
		short := outcomes(t, p, ssa.EventBudget)
		p.MaxEvents = 501
		long := outcomes(t, p, ssa.EventBudget)
		for i := range short {
			p.MaxEvents, p.Runs, p.FirstReplicate = 0, 1, uint64(i)
			// At the very time of the event, its state; just before the next, the same.
			for _, until := range []float64{short[i].Time, math.Nextafter(long[i].Time, 0)} {
				p.Until = until
				if o := outcomes(t, p, ssa.Horizon)[0]; o.Events != 500 || o.Counts[1] != short[i].Counts[1] {
					t.Errorf("run %d until %v: %v; want the state of %v", i, until, o, short[i])
				}
			}
		}
	})
}

func TestFlipAtTheStart(t *testing.T) {
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		p := ssa.Plan{Network: zoo.Schlogl(), Start: []int64{100}, Method: m, Runs: 20, Times: []float64{0}}
		p.Sample = func(int, int, float64, []int64) { t.Error("a run of no length gives no samples") }
		p.Cores = []model.Core{zoo.Interval("a", 300, 400, 300), zoo.Interval("b", 100, 100, 100)}
		for _, o := range outcomes(t, p, ssa.Flipped) {
			if o.Core != 1 || o.Time != 0 || o.Events != 0 {
				t.Errorf("%v", o)
			}
		}
	})
}

// A target counts even where it is reached by the last event of a budget.
func TestFlipByTheLastEvent(t *testing.T) {
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		p := ssa.Plan{Network: network(t, 1, made(1)), MaxEvents: 7, Method: m, From: -1, Cores: []model.Core{zoo.Interval("seven", 7, 9, 7)}}
		outcomes(t, p, ssa.Flipped)
	})
}

// Tiny and huge propensities: times are exponential with mean 1e±200, to 4.9
// standard errors of 1000 runs.
func TestScales(t *testing.T) {
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		for _, k := range []float64{1e-200, 1e200} {
			mean := 0.0
			for _, o := range outcomes(t, ssa.Plan{Network: network(t, 1, made(k), lost(k)), MaxEvents: 1, Runs: 1000, Method: m}, ssa.EventBudget) {
				mean += o.Time * k / 1000
			}
			if math.Abs(mean-1) > 4.9/math.Sqrt(1000) {
				t.Errorf("mean time over 1/k is %v at k = %v", mean, k)
			}
		}
	})
}

func TestZeroRuns(t *testing.T) {
	res, err := ssa.Run(context.Background(), ssa.Plan{Network: zoo.Schlogl(), From: -1})
	if err != nil || len(res.Outcomes) != 0 || res.Events != 0 {
		t.Errorf("%v, %v", res, err)
	}
}

// Cancelling ends the runs under way with what they have, and leaves the others
// unbegun; a context that is done already begins none.
func TestCancel(t *testing.T) {
	eachMethod(t, func(t *testing.T, m ssa.Method) {
		cause := errors.New("enough")
		ctx, cancel := context.WithCancelCause(context.Background())
		p := ssa.Plan{Network: zoo.Latch(100), From: -1, Runs: 100, Threads: 2, Lanes: 3, Method: m, MaxEvents: 1 << 40}
		p.Progress = func(_ int, events int64) {
			if events > 1000 {
				cancel(cause)
			}
		}
		began := time.Now()
		res, err := ssa.Run(ctx, p)
		if !errors.Is(err, cause) || time.Since(began) > 20*time.Second {
			t.Errorf("error %v after %v", err, time.Since(began))
		}
		begun, events := 0, int64(0)
		for _, o := range res.Outcomes {
			if o.Ending != ssa.Cancelled || !o.Ending.Early() || !errors.Is(o.Err(), ssa.ErrCancelled) || o.Events > 0 != (o.Time > 0) {
				t.Fatalf("%v", o)
			}
			events += o.Events
			if o.Events > 0 {
				begun++
			}
		}
		if begun == 0 || begun > 6 || events != res.Events {
			t.Errorf("%d runs had begun, with %d events of %d", begun, events, res.Events)
		}
		res, err = ssa.Run(ctx, p)
		if !errors.Is(err, cause) || res.Events != 0 || len(res.Outcomes) != 100 || res.Outcomes[99].Ending != ssa.Cancelled {
			t.Errorf("begun with a context that is done: %v, %d events", err, res.Events)
		}
	})
}

func TestProgressEndsComplete(t *testing.T) {
	done, events := 0, int64(0)
	p := ssa.Plan{Network: zoo.Schlogl(), From: -1, Runs: 30, Until: 0.1, Progress: func(d int, e int64) { done, events = d, e }}
	if res := run(t, p); done != 30 || events != res.Events {
		t.Errorf("last progress: %d runs, %d events; want 30, %d", done, events, res.Events)
	}
}

func TestUnusablePlans(t *testing.T) {
	net := zoo.Schlogl()
	for want, p := range map[string]ssa.Plan{
		"no network":             {},
		"start has 2":            {Network: net, Start: []int64{1, 2}, From: -1},
		"start count of a is -1": {Network: net, Start: []int64{-1}, From: -1},
		"from is core 0":         {Network: net},
		"from is core -2":        {Network: net, From: -2},
		"runs is -1":             {Network: net, From: -1, Runs: -1},
		"until is NaN":           {Network: net, From: -1, Until: math.NaN()},
		"until is -1":            {Network: net, From: -1, Until: -1},
		"until is +Inf":          {Network: net, From: -1, Until: math.Inf(1)},
		"max events is -5":       {Network: net, From: -1, MaxEvents: -5},
		"max count is -5":        {Network: net, From: -1, MaxCount: -5},
		"times[1] is 1":          {Network: net, From: -1, Times: []float64{2, 1}, Sample: func(int, int, float64, []int64) {}},
		"times[0] is NaN":        {Network: net, From: -1, Times: []float64{math.NaN()}, Sample: func(int, int, float64, []int64) {}},
		"beyond the horizon":     {Network: net, From: -1, Until: 1, Times: []float64{2}, Sample: func(int, int, float64, []int64) {}},
		"no sample function":     {Network: net, From: -1, Times: []float64{2}},
		"threads and lanes":      {Network: net, From: -1, Threads: -1},
		"method is 9":            {Network: net, From: -1, Method: 9},
		"group is":               {Network: net, From: -1, Group: 1 << 22},
		"replicates":             {Network: net, From: -1, FirstReplicate: 1 << 40},
		"bounds 0 and 0":         {Network: net, From: -1, Cores: []model.Core{{}}},
	} {
		if _, err := ssa.Run(context.Background(), p); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("error %v; want one with %q", err, want)
		}
	}
}

func TestStrings(t *testing.T) {
	if ssa.Flipped.String() != "flipped" || ssa.BadRate.String() != "bad rate" || ssa.Ending(99).String() != "ending 99" {
		t.Error("endings")
	}
	if ssa.Auto.String() != "auto" || ssa.Dense.String() != "dense" || ssa.Sparse.String() != "sparse" || ssa.Method(9).String() != "method 9" {
		t.Error("methods")
	}
}
