package sde_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/sde"
)

// refused runs a plan that must be refused, with a message that holds all of words.
func refused(t *testing.T, p sde.Plan, words ...string) error {
	t.Helper()
	res, err := sde.Run(context.Background(), p)
	if err == nil || res.Outcomes != nil {
		t.Fatalf("%+v was not refused", p)
	}
	for _, w := range words {
		if !strings.Contains(err.Error(), w) {
			t.Errorf("error %q does not say %q", err, w)
		}
	}
	return err
}

// The fastest mode of the latch near its high state: a step beyond 1/rate is refused with
// the largest good one, which is then taken. For dX = −kX dt + … that is 1/k.
func TestStepTooLarge(t *testing.T) {
	p := sde.Plan{System: line{linear(-4), constant(1)}, Start: []float64{1}, From: -1, Runs: 1, MaxSteps: 10, Step: 0.26}
	var e *sde.StepError
	if err := refused(t, p, "0.26", "0.25"); !errors.As(err, &e) || math.Abs(e.Largest-0.25) > 1e-6 || e.Step != 0.26 {
		t.Errorf("%v", err)
	}
	p.Step = e.Largest
	run(t, p)
	p.Step = 0
	if res := run(t, p); math.Abs(res.Step-0.005) > 1e-7 {
		t.Errorf("the chosen step is %v, want 0.02/4", res.Step)
	}
	// A stiff core counts though the start is slow.
	cubic := line{func(x float64) float64 { return -x * x * x }, constant(1)}
	p = sde.Plan{System: cubic, Start: []float64{0}, From: -1, Runs: 1, MaxSteps: 1, Step: 0.1}
	run(t, p)
	p.Cores = []model.Core{{State: "far", Low: []int64{9}, High: []int64{11}, Center: []float64{10}}}
	refused(t, p, "too large")
	refused(t, sde.Plan{System: line{constant(0), constant(1)}, Start: []float64{0}, From: -1}, "no step can be chosen")
}

// badSystem is a system with some wrong shape.
type badSystem struct {
	doubleWell
	dimension  int
	directions [][]float64
	low, high  []float64
}

func (s badSystem) Dimension() int                { return s.dimension }
func (s badSystem) Directions() [][]float64       { return s.directions }
func (s badSystem) Bounds() (low, high []float64) { return s.low, s.high }

func TestBadSystems(t *testing.T) {
	one := [][]float64{{1}}
	for want, s := range map[string]sde.System{
		"no system":                          nil,
		"dimension 0":                        badSystem{},
		"no noise direction":                 badSystem{dimension: 1},
		"noise direction 1 is missing":       badSystem{dimension: 1, directions: [][]float64{{1}, nil}},
		"noise direction 0 is zero":          badSystem{dimension: 1, directions: [][]float64{{0}}},
		"noise direction 0 has NaN":          badSystem{dimension: 1, directions: [][]float64{{math.NaN()}}},
		"for 1 coordinates":                  badSystem{dimension: 1, directions: one, low: []float64{0, 0}},
		"the first must be below the second": badSystem{dimension: 1, directions: one, low: []float64{1}, high: []float64{1}},
		"it must be from 0 to":               badSystem{dimension: 1, directions: one, low: []float64{0}},
	} {
		refused(t, sde.Plan{System: s, Start: []float64{-1}, From: -1}, want)
	}
	idle, err := (&model.Draft{Copies: 1, Species: []model.Species{{Name: "x"}}}).Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	refused(t, sde.Plan{System: sde.Chemical(idle), From: -1}, "no noise direction")
}

func TestBadPlans(t *testing.T) {
	sample := func(int, int, float64, []float64) {}
	for want, p := range map[string]sde.Plan{
		"start has 1 coordinates":     {Start: []float64{1}},
		"start coordinate 1":          {Start: []float64{1, math.NaN()}},
		"runs is -1":                  {Runs: -1},
		"replicates":                  {FirstReplicate: 1 << 40},
		"group is":                    {Group: 1 << 21},
		"until is NaN":                {Until: math.NaN()},
		"step is -1":                  {Step: -1},
		"max steps":                   {MaxSteps: -1},
		"limit is":                    {Limit: math.Inf(1)},
		"cell is":                     {Cell: -1},
		"threads and lanes":           {Lanes: -1},
		"from is core 0":              {From: 0},
		"core 0 (a) bounds":           {From: -1, Cores: []model.Core{{State: "a"}}},
		"beyond the horizon":          {Until: 1, Times: []float64{2}, Sample: sample},
		"ascend":                      {Until: 3, Times: []float64{2, 1}, Sample: sample},
		"no sample function":          {Until: 3, Times: []float64{2}},
		"more than 2⁵³ steps":         {Until: 1e200, Step: 0.01},
		"has a shape of 1 numbers":    {From: -1, Cores: []model.Core{{State: "a", Low: []int64{0, 0}, High: []int64{1, 1}, Shape: []float64{1}}}},
		"has a centre of 1 numbers":   {From: -1, Cores: []model.Core{{State: "a", Low: []int64{0, 0}, High: []int64{1, 1}, Center: []float64{1}}}},
		"must not be more than 2⁶² c": {Cell: 1e-300},
	} {
		p.System = sde.Chemical(zoo.Latch(100))
		if p.From == 0 && want != "from is core 0" {
			p.From = -1
		}
		refused(t, p, want)
	}
}

// A path whose next step is not finite is stopped before it and counted: √(1−x) has no
// value above 1, so a path stops when it gets there.
func TestNotFinite(t *testing.T) {
	root := line{linear(-0.1), func(x float64) float64 { return math.Sqrt(1 - x) }}
	p := sde.Plan{System: root, Start: []float64{0}, From: -1, Runs: 200, Seed: 3, Step: 0.1, Until: 5, Lanes: 7}
	res := run(t, p)
	lost := 0
	for _, o := range res.Outcomes {
		if o.Ending != sde.NotFinite {
			continue
		}
		lost++
		var e *sde.NotFiniteError
		if !errors.As(o.Err(), &e) || e.Coordinate != 0 || e.Reaction != -1 || !math.IsNaN(e.Value) || !o.Ending.Early() {
			t.Fatalf("%v: %v", o, o.Err())
		}
		if o.State[0] <= 1 || o.Time != float64(o.Steps)*res.Step || e.Time != o.Time {
			t.Errorf("%v: the last finite state must be the first above 1", o)
		}
	}
	if lost == 0 || lost == 200 || res.Lost != lost {
		t.Errorf("%d runs of 200 lost, %d counted", lost, res.Lost)
	}
}

// A law that goes below 0 stops the path with the reaction and the state, though the noise it
// is merged with stays positive.
func TestNegativeRate(t *testing.T) {
	law := model.Call(model.OpSub, model.Number(10), model.SpeciesRef(0))
	d := model.Draft{
		Copies: 1, Species: []model.Species{{Name: "x"}},
		Reactions: []model.DraftReaction{
			{Name: "steady", MassAction: model.Number(50), Makes: []model.Term{{Species: 0, Count: 1}}},
			{Name: "falling", Rate: law, Makes: []model.Term{{Species: 0, Count: 1}}},
		},
	}
	net, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	res := run(t, sde.Plan{System: sde.Chemical(net), From: -1, Runs: 20, Seed: 4, Step: 0.01, Until: 100})
	for _, o := range res.Outcomes {
		var e *sde.NotFiniteError
		if !errors.As(o.Err(), &e) || e.Name != "falling" || e.Reaction != 1 || e.Value != 10-o.State[0] || o.State[0] <= 10 {
			t.Errorf("%v: %v", o, o.Err())
		}
	}
	if res.Lost != 20 {
		t.Errorf("%d lost, want 20", res.Lost)
	}
}

func TestRunaway(t *testing.T) {
	p := sde.Plan{System: line{linear(1), linear(0.1)}, Start: []float64{-1}, From: -1, Runs: 9, Step: 0.1, Limit: 1000}
	res := run(t, p)
	for _, o := range res.Outcomes {
		var e *sde.RunawayError
		if o.Ending != sde.RanAway || !errors.As(o.Err(), &e) || o.State[0] >= -1000 || e.Coordinate != 0 || !strings.Contains(e.Error(), "ran away") {
			t.Errorf("%v: %v", o, o.Err())
		}
	}
	if res.Lost != 9 {
		t.Errorf("%d lost, want 9", res.Lost)
	}
}

// Cancelling ends the runs under way with what they have, and leaves the others unbegun.
func TestCancel(t *testing.T) {
	cause := errors.New("enough")
	ctx, cancel := context.WithCancelCause(context.Background())
	p := sde.Plan{System: sde.Chemical(zoo.Latch(100)), From: -1, Runs: 100, Threads: 2, Lanes: 3}
	p.Progress = func(_ int, steps int64) {
		if steps > 1000 {
			cancel(cause)
		}
	}
	res, err := sde.Run(ctx, p)
	if !errors.Is(err, cause) || len(res.Outcomes) != 100 || res.Steps <= 1000 {
		t.Fatalf("%v, %d outcomes, %d steps", err, len(res.Outcomes), res.Steps)
	}
	begun := 0
	for _, o := range res.Outcomes {
		if o.Ending != sde.Cancelled || !errors.Is(o.Err(), sde.ErrCancelled) || !o.Ending.Early() {
			t.Fatalf("%v", o)
		}
		if o.Steps > 0 {
			begun++
		}
	}
	if begun != 6 {
		t.Errorf("%d runs had begun, want 6", begun)
	}
	res, err = sde.Run(ctx, p)
	if !errors.Is(err, cause) || res.Steps != 0 {
		t.Errorf("a context that is done: %v, %d steps", err, res.Steps)
	}
}

// Samples come at the last step not later than their time, each once, in order, up to the end;
// the step divides the horizon.
func TestSamples(t *testing.T) {
	times := []float64{0, 0, 0.1, 0.25, 0.3, 0.7, 1}
	seen := map[int]int{}
	p := sde.Plan{
		System: line{constant(1), constant(1e-300)}, Start: []float64{0}, From: -1, Runs: 5, Step: 0.11, Until: 1, Times: times, Threads: 1,
	}
	p.Sample = func(run, k int, at float64, x []float64) {
		if seen[run] != k || at != times[k] {
			t.Errorf("run %d: sample %d at %v after %d", run, k, at, seen[run])
		}
		seen[run]++
		if want := math.Floor(times[k]*10+1e-9) / 10; math.Abs(x[0]-want) > 1e-12 {
			t.Errorf("sample at %v is %v, want %v", at, x[0], want)
		}
	}
	res := run(t, p)
	if res.Step != 0.1 || len(seen) != 5 || seen[4] != len(times) {
		t.Errorf("step %v, samples %v", res.Step, seen)
	}
}

// A target where the run starts, one that rounding reaches, and an excluded core.
func TestCores(t *testing.T) {
	p := sde.Plan{System: line{constant(1), constant(1e-300)}, Start: []float64{3.05}, From: 0, Runs: 2, Step: 0.1, Threads: 1}
	p.Cores = []model.Core{zoo.Interval("from", 2, 4, 3), zoo.Interval("to", 5, 7, 6)}
	for _, o := range run(t, p).Outcomes {
		if o.Ending != sde.Flipped || o.Core != 1 || o.State[0] < 4.5 || o.State[0] > 4.6+1e-9 {
			t.Errorf("%v", o)
		}
	}
	p.From = 1
	for _, o := range run(t, p).Outcomes {
		if o.Ending != sde.Flipped || o.Core != 0 || o.Steps != 0 || o.Time != 0 {
			t.Errorf("%v", o)
		}
	}
	p.From, p.MaxSteps = 0, 15
	for _, o := range run(t, p).Outcomes {
		if o.Ending != sde.Flipped || o.Steps != 15 {
			t.Errorf("by the last step of a budget: %v", o)
		}
	}
	p.MaxSteps = 14
	for _, o := range run(t, p).Outcomes {
		if o.Ending != sde.StepBudget || o.Steps != 14 || o.Ending.Early() || o.Err() != nil {
			t.Errorf("%v", o)
		}
	}
}
