package hold

import (
	"context"
	"errors"
	"path/filepath"
	"strings"
	"testing"

	"holdfast/analysis/lattice"
	"holdfast/analysis/staged"
	"holdfast/analysis/survey/resting"
	"holdfast/model"
)

// jobOf prepares a job on a demo design as Run does, up to its routes.
func jobOf(t *testing.T, design string, copies float64, o Options) *job {
	t.Helper()
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", design+".toml"))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	if o, err = o.complete(); err != nil {
		t.Fatal(err)
	}
	list, err := resting.States(context.Background(), n)
	if err != nil {
		t.Fatal(err)
	}
	j := &job{network: n, options: o, survey: list.Map}
	j.newReport()
	if err := j.setVariation(); err != nil {
		t.Fatal(err)
	}
	return j
}

// What auto chooses first, and next where that fails. Flips of the latch are rare from some 80 copies on (their means stand in
// the README's table), those of the pair from some 60 on.
func TestChoice(t *testing.T) {
	const small = 1 << 20 // a memory that holds no lattice
	for _, c := range []struct {
		name   string
		design string
		copies float64
		o      Options
		want   []string
	}{
		{"a small lattice is taken at once", "latch", 20, Options{}, []string{Lattice}},
		{"also for a precision", "latch", 100, Options{Precision: 0.05}, []string{Lattice}},
		{"a leakless latch too", "leakless", 50, Options{}, []string{Lattice}},
		{"a number of runs", "latch", 100, Options{Runs: 5}, []string{Runs}},
		{"a budget of events", "latch", 100, Options{Events: 1000}, []string{Runs}},
		{"a horizon", "latch", 100, Options{Until: 3}, []string{Runs}},
		{"as asked for", "latch", 20, Options{Route: Langevin}, []string{Langevin}},
		{"no lattice of four species: runs", "operator", 0, Options{Precision: 0.2}, []string{Runs}},
		{"no memory, flips in reach: runs", "latch", 15, Options{Memory: small}, []string{Runs}},
		{"no memory, rare flips: staged", "pair", 60, Options{Memory: small}, []string{Staged}},
		{"the same at a high copy number", "latch", 120, Options{Memory: small}, []string{Staged}},
		{"beyond staged runs: least action", "latch", 4000, Options{Memory: small}, []string{Action, Staged}},
	} {
		j := jobOf(t, c.design, c.copies, c.o)
		list, err := (&chooser{job: j}).first(context.Background())
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		for k, route := range c.want {
			if k >= len(list) || list[k].route != route {
				t.Errorf("%s: %+v, want %v", c.name, list, c.want)
				break
			}
		}
		t.Logf("%s: %s: %s", c.name, list[0].route, list[0].words())
	}
}

// A lattice that is dear comes before other routes where it is at most twice as dear and its memory
// has room to grow.
func TestDearLattice(t *testing.T) {
	const gib = 1 << 30
	other := []candidate{{route: Staged, seconds: 10}}
	for _, c := range []struct {
		seconds float64
		bytes   int64
		want    string
	}{{19, gib, Lattice}, {21, gib, Staged}, {19, 3 * gib, Staged}} {
		e := lattice.Estimate{Seconds: c.seconds, Bytes: c.bytes, Allowed: 4 * gib}
		list := (&chooser{lattice: &e}).place(other)
		if len(list) != 2 || list[0].route != c.want {
			t.Errorf("%v s and %d bytes of %d: %+v, want %s first", c.seconds, c.bytes, e.Allowed, list, c.want)
		}
	}
}

// Where the route that was chosen fails, the next one is taken, and the report says so: here the
// lattice, whose box grows beyond the memory after it was estimated to fit, is
// followed by exact runs.
func TestAutoGoesOn(t *testing.T) {
	j := jobOf(t, "latch", 15, Options{Precision: 0.4})
	e, err := j.problem().Estimate(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	j.options.Memory = e.Bytes + e.Bytes/100
	if err := j.takeRoutes(context.Background()); err != nil {
		t.Fatal(err)
	}
	if !strings.HasPrefix(j.report.Route, "runs: ") || len(j.report.Dwells) != 2 || j.report.Dwells[0].Route != Runs {
		t.Errorf("route %q, rows %+v", j.report.Route, j.report.Dwells)
	}
	if text := strings.Join(j.report.Warnings, "\n"); !strings.Contains(text, "lattice failed: ") || !strings.Contains(text, "going on with runs") {
		t.Errorf("warnings: %s", text)
	}
}

// A route asked for by name is not followed by another.
func TestAskedRouteDoesNotGoOn(t *testing.T) {
	j := jobOf(t, "latch", 15, Options{Route: Lattice, Memory: 1 << 20})
	if err := j.takeRoutes(context.Background()); err == nil {
		t.Errorf("route %q, rows %+v; want an error", j.report.Route, j.report.Dwells)
	}
}

// A long route is told of beforehand, a short one is not.
func TestNotice(t *testing.T) {
	for seconds, want := range map[float64]bool{0.1: false, 9: false, 12: true} {
		told := ""
		j := jobOf(t, "latch", 15, Options{Notice: func(text string) { told = text }})
		c := candidate{route: Lattice, reason: "to test", seconds: seconds}
		if err := j.attempt(context.Background(), &c); err != nil {
			t.Fatal(err)
		}
		if (told != "") != want || want && !strings.Contains(told, "about 12 s") {
			t.Errorf("%v s: told %q", seconds, told)
		}
	}
}

// Staged runs that get nowhere are a failure to auto, and what was reported before
// them is kept.
func TestStuckIsAFailure(t *testing.T) {
	j := jobOf(t, "latch", 15, Options{})
	begun := j.mark()
	j.addLog(stuckRow(0, leaving{to: 1, stuck: &staged.StuckError{Rate: 0.1}}))
	if !stuck(j.report.Dwells[0]) {
		t.Errorf("%+v is not stuck", j.report.Dwells[0])
	}
	j.warn("kept")
	j.report.Work.Events = 7
	j.reset(begun)
	if len(j.report.Dwells) != 0 || len(j.rates) != 0 || j.report.Work.Events != 7 || j.report.Warnings[len(j.report.Warnings)-1] != "kept" {
		t.Errorf("%+v", j.report)
	}
	if isOption(errNoAdvance) || !isOption(errors.Join(&OptionError{})) {
		t.Error("isOption takes one error for another")
	}
}
