package levers

import (
	"context"
	"errors"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/deterministic"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
)

func run(t *testing.T, n *model.Network, o Options) *Report {
	t.Helper()
	r, err := Run(context.Background(), n, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// design binds one of the demo designs.
func design(t *testing.T, name string, copies float64, set map[string]float64) *model.Network {
	t.Helper()
	d, err := model.Load(filepath.Join("..", "..", "testdata", "designs", name+".toml"))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(copies, set)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// block finds the hold time of a state.
func block(t *testing.T, r *Report, from string) *Block {
	t.Helper()
	for i := range r.Blocks {
		if r.Blocks[i].From == from {
			return &r.Blocks[i]
		}
	}
	t.Fatalf("no block of %s", from)
	return nil
}

// The rules of analysis/lattice's TestSumRules, on what is reported: the slopes of what
// carries 1/time add up to −1, and those of leak, drive and half to that of copies.
func TestSumRules(t *testing.T) {
	r := run(t, zoo.Latch(20), Options{})
	for i := range r.Blocks {
		b := &r.Blocks[i]
		slope := func(names ...string) (sum float64) {
			for _, name := range names {
				sum += float64(b.lever(name).Slope().Value)
			}
			return sum
		}
		if rates := slope("leak", "drive", "b", "k", "a"); math.Abs(rates+1) > 1e-10 {
			t.Errorf("%s: rates add up to %v", b.From, rates)
		}
		if amounts := slope("leak", "drive", "half") - slope("copies"); math.Abs(amounts) > 1e-10 {
			t.Errorf("%s: amounts add up to %v", b.From, amounts)
		}
		for k := 1; k < len(b.Levers); k++ {
			if rank(&b.Levers[k]) > rank(&b.Levers[k-1]) {
				t.Errorf("%s: %s is not in its place", b.From, b.Levers[k].Name)
			}
		}
	}
}

// One molecule that goes forth and back: dwells are 1/forth and 1/back, so that each
// slope is −1 or 0 exactly (closed form).
func TestTwoStateChain(t *testing.T) {
	n := zoo.TwoStateChain(0.02, 0.5)
	d := n.Draft()
	d.Declared = []model.DeclaredCore{declared("low", 1, 0), declared("high", 0, 1)}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := run(t, n, Options{})
	for state, want := range map[string][3]float64{"low": {-1, 0, 0}, "high": {0, -1, 0}} {
		for k, name := range []string{"forth", "back", "copies"} {
			s := block(t, r, state).lever(name).Slope()
			if math.Abs(float64(s.Value)-want[k]) > 1e-12 {
				t.Errorf("%s, %s: %v, want %v", state, name, s.Value, want[k])
			}
		}
	}
}

func declared(state string, a, b int64) model.DeclaredCore {
	return model.DeclaredCore{State: state, Ranges: []model.Range{{Species: 0, Min: a, Max: a}, {Species: 1, Min: b, Max: b}}}
}

// The leakless latch loses its high state where ab = 1/2 (Griffith, J. Theor. Biol. 20
// (1968) 209, the model; the closed form is common practice), 11.1 % above a = 0.45;
// with every constant free the fold is at ab half/(k drive) = 1/2 (algebra).
func TestLosses(t *testing.T) {
	r := run(t, zoo.LeaklessLatch(0.45, 1, 20), Options{})
	b := block(t, r, "high")
	up, down := 100*(0.5/0.45-1), 100*(0.45/0.5-1)
	for name, want := range map[string][2]float64{
		"a": {0, up}, "b": {0, up}, "half": {0, up}, "k": {down, 0}, "drive": {down, 0}, "leak": {0, 0}, "copies": {0, 0},
	} {
		l := b.lever(name)
		for side, loss := range []*Loss{l.Below, l.Above} {
			switch {
			case want[side] == 0 && loss == nil:
			case want[side] == 0 || loss == nil:
				t.Errorf("%s, side %d: %v, want %v", name, side, loss, want[side])
			case loss.State != "high" || loss.Kind != "fold" || math.Abs(float64(loss.Percent)-want[side]) > 1e-6:
				t.Errorf("%s, side %d: %v, want %v", name, side, *loss, want[side])
			}
		}
	}
	if low := block(t, r, "low"); low.Note == "" || len(low.Levers) > 0 {
		t.Errorf("low never returns, and has %v", low)
	}
	if leak := b.lever("leak"); !leak.PerUnit || leak.Note == "" {
		t.Errorf("a leak of 0 has no per cent: %+v", leak)
	}
}

// A constant that nothing reads, and one under a steep exponent.
func TestUnreadConstant(t *testing.T) {
	d := design(t, "pair", 12, nil).Draft()
	d.Constants = append(d.Constants, model.Constant{Name: "idle", Value: 3})
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := run(t, n, Options{})
	for _, state := range []string{"low", "high"} {
		l := block(t, r, state).lever("idle")
		if s := l.Slope(); s.Route != Lattice || s.Value != 0 || s.Low != 0 || s.High != 0 || l.Note != "no reaction reads it" || l.Below != nil || l.Above != nil {
			t.Errorf("%s: %+v", state, l)
		}
		if s := block(t, r, state).lever("steep").Slope(); !(s.Value > 1) {
			t.Errorf("%s: steep has the slope %v", state, s.Value)
		}
	}
}

// Differences of sampled hold times against the lattice's slopes: n = 8, two states and
// four constants. A score is the distance over the half-width's 1.96th, and their squares
// add up to chi-square but for what the slope changes over the step (below a tenth of
// the half-widths here): above 45 with 8 degrees of freedom once in 3e6. On 1,000 other seeds the sum was 7.57 in mean
// and 31.8 at most.
func TestDifferencesOfRuns(t *testing.T) {
	if race.Enabled {
		t.Skip("takes a minute under the race detector")
	}
	n := design(t, "latch", 8, nil)
	exact := run(t, n, Options{})
	r := run(t, n, Options{Route: Differences, Step: 0.2, Hold: hold.Options{Route: hold.Runs, Precision: 0.2, Seed: 3}})
	sum, count := 0.0, 0
	for _, state := range []string{"low", "high"} {
		for _, name := range []string{"leak", "half", "a", "copies"} {
			s, want := block(t, r, state).lever(name).Slope(), block(t, exact, state).lever(name).Slope()
			score := float64((s.Value-want.Value)/(s.High-s.Low)) * 2 * 1.96
			sum += score * score
			count++
		}
	}
	if sum > 45 || count != 8 {
		t.Errorf("squares of the scores of %d slopes add up to %v", count, sum)
	}
	if s := block(t, r, "low").lever("half").Slope(); s.Route != Differences || !(s.Low < s.Value && s.Value < s.High) {
		t.Errorf("no interval: %+v", s)
	}
}

// Differences of lattice hold times are extrapolated, and their intervals cover the
// lattice's own slopes.
func TestDifferencesOfLattice(t *testing.T) {
	if race.Enabled {
		t.Skip("takes a minute under the race detector")
	}
	n := design(t, "pair", 6, nil)
	exact := run(t, n, Options{})
	r := run(t, n, Options{Route: Differences})
	for i := range r.Blocks {
		for k := range r.Blocks[i].Levers {
			l := &r.Blocks[i].Levers[k]
			s, want := l.Slope(), block(t, exact, r.Blocks[i].From).lever(l.Name).Slope()
			if !(s.Low <= want.Value && want.Value <= s.High) || !(s.High-s.Low < 0.1) {
				t.Errorf("%s, %s: %v, want %v", r.Blocks[i].From, l.Name, s, want)
			}
		}
	}
}

// Whatever the number of threads, the slopes are the same to the last digit.
func TestThreads(t *testing.T) {
	for _, o := range []Options{{}, {Route: Differences, Hold: hold.Options{Route: hold.Runs, Runs: 40}}} {
		var first *Report
		for _, threads := range []int{1, 3} {
			o.Hold.Threads = threads
			r := run(t, design(t, "pair", 6, nil), o)
			r.Seconds = 0
			if first == nil {
				first = r
				continue
			}
			for i := range r.Blocks {
				for k := range r.Blocks[i].Levers {
					if a, b := r.Blocks[i].Levers[k], first.Blocks[i].Levers[k]; a.Name != b.Name || a.Slope().Value != b.Slope().Value || a.Slope().High != b.Slope().High {
						t.Errorf("%s: %v and %v", a.Name, a.Slope(), b.Slope())
					}
				}
			}
		}
	}
}

func TestRefusals(t *testing.T) {
	var option *hold.OptionError
	for _, o := range []Options{{Route: "guess"}, {Step: 2}, {Step: math.NaN()}, {Step: -0.1}, {Hold: hold.Options{Route: "guess"}}, {Hold: hold.Options{Precision: 2}}} {
		if _, err := Run(context.Background(), zoo.Latch(10), o); !errors.As(err, &option) {
			t.Errorf("%+v: %v", o, err)
		}
	}
	_, err := Run(context.Background(), zoo.Latch(10), Options{Step: math.Log(3)})
	if err == nil || err.Error() != "step is 200 %; it must be from 0.1 % to 64 %" {
		t.Errorf("a step of 200 %%: %v", err)
	}
	var one *deterministic.OneStateError
	if _, err := Run(context.Background(), design(t, "latch", 20, map[string]float64{"a": 1}), Options{}); !errors.As(err, &one) {
		t.Errorf("one state: %v", err)
	}
	stopped, stop := context.WithCancel(context.Background())
	stop()
	if _, err := Run(stopped, zoo.Latch(10), Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("stopped at once: %v", err)
	}
}

// The table has a row for each hold time, constant and route.
func TestTable(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "out")
	r := run(t, design(t, "latch", 10, nil), Options{Hold: hold.Options{Folder: folder, Command: "test"}})
	opened, err := records.Open(folder)
	if err != nil {
		t.Fatal(err)
	}
	rows := 0
	for i := range r.Blocks {
		for k := range r.Blocks[i].Levers {
			rows += len(r.Blocks[i].Levers[k].Slopes)
		}
	}
	for _, table := range opened.Manifest.Tables {
		if table.Name == "levers" && table.Rows == int64(rows) && rows == 28 {
			return
		}
	}
	t.Errorf("%d rows in %+v", rows, opened.Manifest.Tables)
}

// A chain of three states between declared counts: the middle one has a table for leaving
// it, and one for each end, whose slopes follow from the chances of the ends: with p the
// chance of one end, Σ over ends of p (slope of the pair − slope of the state) = 0, since
// the chances add up to 1 (algebra).
func TestSeveralEnds(t *testing.T) {
	d := zoo.LeakyActivator(0.45, 0.02, 20).Draft()
	core := func(name string, low, high int64) model.DeclaredCore {
		return model.DeclaredCore{State: name, Ranges: []model.Range{{Species: 0, Min: low, Max: high}}}
	}
	d.Declared = []model.DeclaredCore{core("empty", 0, 2), core("half", 9, 12), core("full", 30, 40)}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := run(t, n, Options{})
	var blocks []*Block
	for i := range r.Blocks {
		if r.Blocks[i].From == "half" {
			blocks = append(blocks, &r.Blocks[i])
		}
	}
	if len(blocks) != 3 || blocks[0].To != anyState {
		t.Fatalf("%d blocks of half", len(blocks))
	}
	for _, name := range []string{"r", "s", "copies"} {
		sum := 0.0
		for _, b := range blocks[1:] {
			sum += float64(blocks[0].Mean/b.Mean) * float64(b.lever(name).Slope().Value-blocks[0].lever(name).Slope().Value)
		}
		if math.Abs(sum) > 1e-9 {
			t.Errorf("%s: the chances of the ends change by %v in all", name, sum)
		}
	}
	if !strings.Contains(blocks[1].First, "the time between flips from half to") {
		t.Errorf("of a pair: %q", blocks[1].First)
	}
}

// A closed pair of forms: another number of copies is another total, and the lattice's
// derivative in copies gives way to a difference, between cores that move.
func TestClosedTotal(t *testing.T) {
	x, c := model.SpeciesRef, model.ConstantRef
	up := model.Call(model.OpMul, x(0), model.Call(model.OpAdd, c(0), model.Call(model.OpMul, c(1), model.Call(model.OpHill, x(1), model.Number(0.8), model.Number(4)))))
	d := model.Draft{
		Title: "closed pair", TimeUnit: "min", Copies: 20, Readout: 1,
		Species:   []model.Species{{Name: "off", Start: 2}, {Name: "on"}},
		Constants: []model.Constant{{Name: "up", Value: 0.05}, {Name: "push", Value: 1}, {Name: "down", Value: 0.45}},
		Reactions: []model.DraftReaction{
			{Name: "up", Uses: []model.Term{{Species: 0, Count: 1}}, Makes: []model.Term{{Species: 1, Count: 1}}, Rate: up},
			{Name: "down", Uses: []model.Term{{Species: 1, Count: 1}}, Makes: []model.Term{{Species: 0, Count: 1}}, MassAction: c(2)},
		},
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := run(t, n, Options{})
	for _, state := range []string{"low", "high"} {
		b := block(t, r, state)
		sum := float64(b.lever("up").Slope().Value + b.lever("push").Slope().Value + b.lever("down").Slope().Value)
		if math.Abs(sum+1) > 1e-10 {
			t.Errorf("%s: rates add up to %v", state, sum)
		}
		if l := b.lever("copies"); l.Slope().Route != Differences || l.Note != ownCores || math.IsNaN(float64(l.Slope().Value)) {
			t.Errorf("%s: copies %+v", state, l)
		}
	}
}

// Constants that vary from cell to cell: differences of runs, each constant turned in its
// median.
func TestVaryingConstants(t *testing.T) {
	d := design(t, "latch", 8, nil).Draft()
	d.Constants[5].Spread = 0.05
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r := run(t, n, Options{Hold: hold.Options{Runs: 60}})
	l := block(t, r, "low").lever("a")
	if s := l.Slope(); s.Route != Differences || !(s.Low < s.High) || l.Note != "varies: its median is turned" {
		t.Errorf("%+v", l)
	}
	if !strings.Contains(r.Route, "constants vary") {
		t.Errorf("route %q", r.Route)
	}
}

// However large a factor is, its power of ten is written whole: e^300 = 1.94e130, and
// 1.01^50000 = 1.17e216 (computed).
func TestFactor(t *testing.T) {
	for _, c := range []struct {
		log  float64
		want string
	}{{math.Log(123), "120"}, {300, "1.9e130"}, {50000 * math.Log1p(0.01), "1.2e216"}} {
		if got := factor(c.log); got != c.want {
			t.Errorf("factor of %v: %s, want %s", c.log, got, c.want)
		}
	}
}

// Stopped in the middle of differences, the report holds what was known by then.
func TestInterrupted(t *testing.T) {
	ctx, stop := context.WithCancel(context.Background())
	defer stop()
	o := Options{Route: Differences, Hold: hold.Options{Route: hold.Runs, Runs: 30}}
	o.Hold.Progress = func(p hold.Progress) {
		if p.Stage == "hold times a step away in b" {
			stop()
		}
	}
	r, err := Run(ctx, design(t, "latch", 8, nil), o)
	if err != nil {
		t.Fatal(err)
	}
	b := block(t, r, "low")
	if s := b.lever("leak").Slope(); math.IsNaN(float64(s.Value)) {
		t.Errorf("leak was done before the stop: %+v", s)
	}
	if l := b.lever("a"); !r.Interrupted || !math.IsNaN(float64(l.Slope().Value)) || l.Note == "" {
		t.Errorf("after the stop: %+v", l)
	}
}
