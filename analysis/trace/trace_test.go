package trace_test

import (
	"context"
	"errors"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"holdfast/analysis/records"
	"holdfast/analysis/trace"
	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

func survey(t testing.TB, n *model.Network) *deterministic.Map {
	t.Helper()
	m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
	var one *deterministic.OneStateError
	if err != nil && !errors.As(err, &one) {
		t.Fatal(err)
	}
	return m
}

func paths(t testing.TB, n *model.Network, o trace.Options) *trace.Paths {
	t.Helper()
	p, err := trace.New(n, survey(t, n), o)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// The mean of 10,000 sampled paths of immigration–death at several times, against the
// closed form Poisson law with mean in/out (1−e^{−out t}): common practice. n is
// 10,000, the statistic the mean's z, limits ±4.9 (a false alarm in a million).
func TestMeansOfImmigrationDeath(t *testing.T) {
	const runs, in, out = 10_000, 1.0, 0.1
	p := paths(t, zoo.ImmigrationDeath(in, out), trace.Options{Runs: runs, Until: 50, Every: 10, Seed: 3})
	sums := make([]float64, 6)
	err := p.Make(context.Background(), func(r trace.Row) error {
		sums[int(r.Time/10+0.5)] += float64(r.Counts[0])
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	for k, sum := range sums {
		mean := in / out * (1 - math.Exp(-out*float64(10*k)))
		if k == 0 {
			if sum != 0 {
				t.Errorf("%v molecules at time 0", sum)
			}
			continue
		}
		if z := (sum/runs - mean) * math.Sqrt(runs/mean); math.Abs(z) > 4.9 {
			t.Errorf("t = %d: mean %v, want %v: z = %.1f", 10*k, sum/runs, mean, z)
		}
	}
}

func TestRowsAreInOrderAndTheSameForAnyThreads(t *testing.T) {
	collect := func(threads int) (rows []trace.Row) {
		p := paths(t, zoo.Schlogl(), trace.Options{Runs: 130, Until: 0.2, Every: 0.05, Seed: 9, Threads: threads})
		err := p.Make(context.Background(), func(r trace.Row) error {
			r.Counts = slices.Clone(r.Counts)
			rows = append(rows, r)
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
		return rows
	}
	one := collect(1)
	if len(one) != 130*5 {
		t.Fatalf("%d rows, want %d", len(one), 130*5)
	}
	for i, r := range one {
		if r.Run != i/5 || math.Abs(r.Time-0.05*float64(i%5)) > 1e-12 {
			t.Fatalf("row %d is run %d at %v", i, r.Run, r.Time)
		}
	}
	if !slices.EqualFunc(one, collect(7), func(a, b trace.Row) bool {
		return a.Run == b.Run && a.Time == b.Time && a.State == b.State && slices.Equal(a.Counts, b.Counts)
	}) {
		t.Error("seven threads give other rows than one")
	}
}

// A path begun in a state is labelled so until it is found in the other's core.
func TestLabels(t *testing.T) {
	p := paths(t, zoo.Schlogl(), trace.Options{Until: 400, Every: 0.5, Seed: 1, From: "high"})
	seen := map[int]bool{}
	last := -1
	err := p.Make(context.Background(), func(r trace.Row) error {
		seen[r.State] = true
		if last < 0 && r.State != 1 {
			t.Errorf("first label is %d, want 1", r.State)
		}
		inside := p.Survey.Cores[1-max(r.State, 0)].Contains(r.Counts)
		if inside {
			t.Errorf("labelled %d while in the other core, at %v", r.State, r.Counts)
		}
		last = r.State
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if !seen[0] || !seen[1] {
		t.Errorf("labels seen: %v; 400 min are some ten flips", seen)
	}
}

func TestBadOptions(t *testing.T) {
	n := zoo.Schlogl()
	for _, o := range []trace.Options{
		{Until: math.Inf(1)},
		{Until: -1},
		{Until: math.NaN()},
		{Until: 10, Every: 20},
		{Until: 10, Every: -1},
		{Until: 1e9, Every: 1e-9},
		{Until: 1, Every: math.NaN()},
		{Runs: -1, Until: 1},
		{From: "hihg", Until: 1},
	} {
		if _, err := trace.New(n, survey(t, n), o); err == nil {
			t.Errorf("%+v: no error", o)
		}
	}
}

func TestSketchMarksWhatWasSeen(t *testing.T) {
	p := paths(t, zoo.ImmigrationDeath(1, 0.1), trace.Options{Until: 72, Every: 1, Seed: 2})
	s := trace.NewSketch(p)
	for i := range 72 {
		s.Add(trace.Row{Time: float64(i) + 0.5, Counts: []int64{int64(i % 14)}})
	}
	var b strings.Builder
	if err := s.Write(&b, "a", "min"); err != nil {
		t.Fatal(err)
	}
	if marks := strings.Count(b.String(), "▪"); marks != 72 {
		t.Errorf("%d marks for 72 samples in 72 columns:\n%s", marks, b.String())
	}
}

func TestRunWritesPaths(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "records")
	s, err := trace.Run(context.Background(), zoo.Schlogl(), trace.Options{Runs: 3, Until: 1, Every: 0.25, Seed: 4},
		trace.Output{Folder: folder, Command: "holdfast trace x"})
	if err != nil {
		t.Fatal(err)
	}
	r, err := records.Open(folder)
	if err != nil {
		t.Fatal(err)
	}
	for _, table := range r.Manifest.Tables {
		if table.Name == "paths" && table.Rows != 15 || s.Rows != 15 {
			t.Errorf("%d rows in paths, %d said, want 15", table.Rows, s.Rows)
		}
	}
}

func TestCancelledTraceLeavesNothing(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	folder := filepath.Join(t.TempDir(), "records")
	_, err := trace.Run(ctx, zoo.Schlogl(), trace.Options{Until: 1e6, Seed: 4}, trace.Output{Folder: folder})
	if !errors.Is(err, trace.ErrNothingDone) {
		t.Errorf("got %v", err)
	}
	if _, err := os.Stat(folder); !os.IsNotExist(err) {
		t.Errorf("the folder is there: %v", err)
	}
}

// A run longer than a segment goes on from where the last one ended: no step is
// larger than one event can make it between samples this dense, and the times run on.
func TestLongRunsGoOn(t *testing.T) {
	const every = 1e-5
	// 262,145 samples end in a segment of one sample.
	short := paths(t, zoo.ImmigrationDeath(1, 0.1), trace.Options{Until: 262_144 * every, Every: every, Seed: 2})
	if err := short.Make(context.Background(), func(trace.Row) error { return nil }); err != nil {
		t.Fatal(err)
	}
	p := paths(t, zoo.ImmigrationDeath(1, 0.1), trace.Options{Until: 6, Every: every, Seed: 2})
	rows, last := 0, []int64{0}
	err := p.Make(context.Background(), func(r trace.Row) error {
		if math.Abs(r.Time-every*float64(rows)) > 1e-9 {
			t.Fatalf("row %d is at %v", rows, r.Time)
		}
		if d := r.Counts[0] - last[0]; d > 2 || d < -2 {
			t.Fatalf("a step of %d at %v", d, r.Time)
		}
		copy(last, r.Counts)
		rows++
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	if rows != 600_001 {
		t.Errorf("%d rows, want 600001", rows)
	}
}

// Constants that vary: paths are the same for any number of threads, differ from those
// at the medians, say so, and may not be so long that they would be made in segments.
func TestConstantsThatVary(t *testing.T) {
	load := func(set func(*model.Constant)) *model.Network {
		d, err := model.Load("../../testdata/designs/varied.toml")
		if err != nil {
			t.Fatal(err)
		}
		for i := range d.Constants {
			set(&d.Constants[i])
		}
		n, err := d.Bind(0, nil)
		if err != nil {
			t.Fatal(err)
		}
		return n
	}
	varied := load(func(*model.Constant) {})
	plain := load(func(c *model.Constant) { c.Spread, c.Memory = 0, 0 })
	collect := func(n *model.Network, threads int) (counts []int64) {
		p := paths(t, n, trace.Options{Runs: 5, Until: 100, Every: 1, Seed: 2, Threads: threads})
		err := p.Make(context.Background(), func(r trace.Row) error {
			counts = append(counts, r.Counts...)
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
		return counts
	}
	one := collect(varied, 1)
	if !slices.Equal(one, collect(varied, 3)) || slices.Equal(one, collect(plain, 1)) {
		t.Error("paths depend on threads, or not on what varies")
	}
	s, err := trace.Run(context.Background(), varied, trace.Options{Until: 10}, trace.Output{})
	if err != nil || len(s.Warnings) == 0 || !strings.Contains(s.Warnings[0], "constants vary") {
		t.Errorf("%v, %v", s, err)
	}
	if _, err := trace.New(varied, survey(t, varied), trace.Options{Until: 1e6, Every: 1}); err == nil || !strings.Contains(err.Error(), "constants vary") {
		t.Errorf("a path in segments: %v", err)
	}
}
