package hold_test

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"os"
	"path/filepath"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/deterministic"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// demo gives a demo design at a copy number.
func demo(t testing.TB, name string, copies float64) *model.Network {
	t.Helper()
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", name+".toml"))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// declare gives the network with cores of its own.
func declare(n *model.Network, cores ...model.DeclaredCore) *model.Network {
	m := *n
	m.Declared = cores
	return &m
}

func counts(state string, low, high int64) model.DeclaredCore {
	return model.DeclaredCore{State: state, Ranges: []model.Range{{Species: 0, Min: low, Max: high}}}
}

func run(t testing.TB, n *model.Network, o hold.Options) *hold.Report {
	t.Helper()
	r, err := hold.Run(context.Background(), n, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func row(t testing.TB, r *hold.Report, from, to, route string) hold.DwellReport {
	t.Helper()
	for _, d := range r.Dwells {
		if d.From == from && d.To == to && d.Route == route {
			return d
		}
	}
	t.Fatalf("no row from %s to %s by %s", from, to, route)
	return hold.DwellReport{}
}

// The mean times of a one-species chain with two states, between declared cores,
// against the tridiagonal recursion in 40 digits (computed; see zoo.SchloglPassages),
// by both routes: the lattice to its bound, runs within 4.9 standard errors (a false
// alarm in a million).
func TestSchloglPassages(t *testing.T) {
	n := declare(zoo.Schlogl(), counts("low", 100, 100), counts("high", 400, 400))
	r := run(t, n, hold.Options{Seed: 1, Route: hold.Lattice})
	for _, p := range zoo.SchloglPassages() {
		from, to := "low", "high"
		switch {
		case p.From == 400 && p.To == 100:
			from, to = to, from
		case p.From != 100 || p.To != 400:
			continue
		}
		if d := row(t, r, from, to, hold.Lattice); math.Abs(float64(d.Mean)/p.Computed-1) > 2e-6 {
			t.Errorf("%s → %s: lattice %v, want %v to its six digits", from, to, d.Mean, p.Computed)
		}
	}
}

func TestSchloglRuns(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	n := declare(zoo.Schlogl(), counts("low", 100, 100), counts("high", 235, math.MaxInt64))
	r := run(t, n, hold.Options{Seed: 3, Route: hold.Runs, Runs: 60})
	d := row(t, r, "low", "high", hold.Runs)
	if z := float64((d.Mean - 15.5765) / d.StandardError); math.Abs(z) > 4.9 {
		t.Errorf("100 → 235: %v ± %v, want 15.5765: %.1f standard errors", d.Mean, d.StandardError, z)
	}
}

// Of 1,000 repeats on a two-state chain with known rates, 93 to 97 % of the printed
// 95 % intervals hold the truth (calibration). With a coverage of 95 % the count is
// binomial with standard deviation 6.9, so that the band of ±20 is 2.9 of them.
func TestCoverageOnTwoStateChain(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	const repeats, forth, back = 1000, 0.02, 0.05
	n := declare(zoo.TwoStateChain(forth, back), counts("low", 1, 1), counts("high", 0, 0))
	held := map[string]int{}
	for seed := range uint64(repeats) {
		r := run(t, n, hold.Options{Seed: seed + 1, Route: hold.Runs, Precision: 0.3, Threads: 1})
		for from, truth := range map[string]float64{"low": 1 / forth, "high": 1 / back} {
			for _, d := range r.Dwells {
				if d.From == from && float64(d.Low) <= truth && truth <= float64(d.High) {
					held[from]++
				}
			}
		}
	}
	for from, k := range held {
		if k < 930 || k > 970 {
			t.Errorf("%s: %d of %d intervals hold the truth; want 930 to 970", from, k, repeats)
		}
	}
	if len(held) != 2 {
		t.Errorf("intervals of %d states, want 2", len(held))
	}
}

// The lattice and the runs share start and target: the means agree, at a copy
// number so low that every difference of definition would show.
func TestRoutesAgree(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	for _, name := range []string{"latch", "pair", "leakless"} {
		r := run(t, demo(t, name, 12), hold.Options{Seed: 11, Route: hold.Lattice, Second: hold.Runs, Precision: 0.03})
		if len(r.Verdicts) == 0 {
			t.Errorf("%s: no verdicts", name)
		}
		for _, v := range r.Verdicts {
			if v.StandardErrors > 4.9 {
				t.Errorf("%s: %s → %s: %s", name, v.From, v.To, v.Text)
			}
		}
	}
}

func TestThreadsAndLanesChangeNothing(t *testing.T) {
	n := demo(t, "latch", 15)
	want := run(t, n, hold.Options{Seed: 5, Route: hold.Runs, Precision: 0.2, Threads: 1, Lanes: 1})
	for _, o := range []hold.Options{{Threads: 2}, {Threads: 7, Lanes: 3}, {Threads: 2, Lanes: 64}} {
		o.Seed, o.Route, o.Precision = 5, hold.Runs, 0.2
		got := run(t, n, o)
		if got.Work.Events != want.Work.Events {
			t.Errorf("%d threads, %d lanes: %d events, want %d", o.Threads, o.Lanes, got.Work.Events, want.Work.Events)
		}
		for i, d := range got.Dwells {
			if d.Mean != want.Dwells[i].Mean || d.High != want.Dwells[i].High {
				t.Errorf("%d threads, %d lanes: %v, want %v", o.Threads, o.Lanes, d.Mean, want.Dwells[i].Mean)
			}
		}
	}
}

func TestPrecisionIsReached(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	r := run(t, demo(t, "pair", 12), hold.Options{Seed: 2, Route: hold.Runs, Precision: 0.05})
	for _, d := range r.Dwells {
		if d.Flips < 1500 {
			t.Errorf("%s → %s: %v flips for a precision of 0.05", d.From, d.To, d.Flips)
		}
	}
}

func TestBudgetIsKept(t *testing.T) {
	const budget = 2_000_000
	r := run(t, demo(t, "latch", 60), hold.Options{Seed: 2, Events: budget})
	if r.Work.Events > budget*1.01 || r.Work.Events < budget/2 {
		t.Errorf("%d events of a budget of %d", r.Work.Events, budget)
	}
}

func TestCancelledJobSaysSo(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	told := 0
	folder := filepath.Join(t.TempDir(), "records")
	r, err := hold.Run(ctx, demo(t, "latch", 100), hold.Options{
		Runs: 1000, Folder: folder,
		Progress: func(hold.Progress) {
			if told++; told == 3 {
				cancel()
			}
		},
	})
	cancel()
	if err != nil {
		t.Fatal(err)
	}
	if !r.Interrupted {
		t.Error("the report does not say that the job was interrupted")
	}
	data, err := os.ReadFile(filepath.Join(folder, "manifest.json"))
	if err != nil {
		t.Fatal(err)
	}
	var m struct {
		CutShort bool `json:"cut_short"`
	}
	if err := json.Unmarshal(data, &m); err != nil || !m.CutShort {
		t.Errorf("manifest: cut short %v, %v", m.CutShort, err)
	}
}

func TestOneStateIsRefused(t *testing.T) {
	n, err := latchWith(t, "a", 1)
	if err != nil {
		t.Fatal(err)
	}
	_, err = hold.Run(context.Background(), n, hold.Options{})
	var one *deterministic.OneStateError
	if !errors.As(err, &one) {
		t.Errorf("got %v, want a OneStateError", err)
	}
}

func latchWith(t *testing.T, name string, value float64) (*model.Network, error) {
	t.Helper()
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", "latch.toml"))
	if err != nil {
		return nil, err
	}
	return draft.Bind(0, map[string]float64{name: value})
}

func TestOptionsOutOfRange(t *testing.T) {
	n := demo(t, "latch", 10)
	for _, o := range []hold.Options{
		{Precision: math.NaN()},
		{Precision: 1},
		{Precision: -1},
		{Runs: -1},
		{Events: -1},
		{Until: math.Inf(1)},
		{Until: -1},
		{Threads: -1},
		{Route: "railway"},
		{Second: "railway"},
		{Route: hold.Runs, Second: hold.Runs},
	} {
		_, err := hold.Run(context.Background(), n, o)
		var option *hold.OptionError
		if !errors.As(err, &option) {
			t.Errorf("%+v: got %v, want an OptionError", o, err)
		}
	}
}

func TestReportIsPlainJSON(t *testing.T) {
	r := run(t, demo(t, "leakless", 12), hold.Options{Runs: 2, Until: 0.5})
	data, err := json.Marshal(r)
	if err != nil {
		t.Fatal(err)
	}
	var back map[string]any
	if err := json.Unmarshal(data, &back); err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{"design", "sha256", "seed", "time_unit", "generation", "states", "dwells", "work", "warnings"} {
		if _, ok := back[key]; !ok {
			t.Errorf("no key %q", key)
		}
	}
}

// Of 200 seeds at each of three copy numbers, the runs' 95 % interval holds the
// lattice value 91 to 99 % of the time, and 93 to 97 % of the 600 together
// (calibration). The dwells of the two states are independent, so that each copy
// number gives two counts of 200.
func TestRunsCoverTheLattice(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	const seeds = 200
	total := map[string]int{}
	for _, copies := range []float64{12, 16, 20} {
		n := demo(t, "latch", copies)
		exact := run(t, n, hold.Options{Route: hold.Lattice})
		held := map[string]int{}
		for seed := range uint64(seeds) {
			r := run(t, n, hold.Options{Seed: seed + 1, Route: hold.Runs, Precision: 0.2})
			for i, d := range r.Dwells {
				truth := exact.Dwells[i].Mean
				if d.Low <= truth && truth <= d.High {
					held[d.From]++
					total[d.From]++
				}
			}
		}
		for _, from := range []string{"low", "high"} {
			if k := held[from]; k < 182 || k > 198 {
				t.Errorf("%v copies, %s: %d of %d intervals hold the lattice value; want 182 to 198", copies, from, k, seeds)
			}
		}
	}
	for _, from := range []string{"low", "high"} {
		if k := total[from]; k < 558 || k > 582 {
			t.Errorf("%s: %d of 600 intervals hold the lattice value; want 558 to 582", from, k)
		}
	}
	t.Logf("held: %v of 600", total)
}

// Chances of holding are given for the generations asked, by every route: those of a
// two-state chain are exp(−rate·t) (closed form).
func TestHoldsAsked(t *testing.T) {
	const forth, back = 0.02, 0.05
	n := declare(zoo.TwoStateChain(forth, back), counts("low", 1, 1), counts("high", 0, 0))
	n.Generation = 10
	for _, route := range []string{hold.Lattice, hold.Runs} {
		r := run(t, n, hold.Options{Seed: 1, Route: route, Holds: []float64{0.5, 7}})
		d := row(t, r, "low", "high", route)
		if len(d.Holds) != 2 || d.Holds[0].Generations != 0.5 || d.Holds[1].Generations != 7 {
			t.Fatalf("%s: chances %v, want those for 0.5 and 7 generations", route, d.Holds)
		}
		for _, h := range d.Holds {
			mean := 1 / forth
			if route == hold.Runs {
				mean = float64(d.Mean)
			}
			if want := math.Exp(-h.Generations * 10 / mean); math.Abs(float64(h.Chance)-want) > 1e-9 {
				t.Errorf("%s: chance %v of %v generations, want %v", route, h.Chance, h.Generations, want)
			}
		}
	}
}

func TestHoldsRefused(t *testing.T) {
	for _, holds := range [][]float64{{0}, {-1}, {math.NaN()}, {math.Inf(1)}, {5, 5}} {
		_, err := hold.Run(context.Background(), demo(t, "latch", 10), hold.Options{Holds: holds})
		var option *hold.OptionError
		if !errors.As(err, &option) || option.Name != "holds" {
			t.Errorf("%v: %v, want an error of the option holds", holds, err)
		}
	}
}
