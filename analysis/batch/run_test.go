package batch_test

import (
	"fmt"
	"maps"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"holdfast/analysis/batch"
	"holdfast/analysis/hold"
)

// Threads, shards, folders and the order of the shards change no byte.
func TestSchedules(t *testing.T) {
	want := whole(t)
	for _, threads := range []int{1, 7} {
		dir := filepath.Join(t.TempDir(), "out")
		j := quickJob(t, dir)
		j.Threads = threads
		run(t, j)
		equalFolders(t, dir, want)
	}
	for _, shards := range []int{1, 3, 7} {
		top := t.TempDir()
		var dirs []string
		for i := shards; i >= 1; i-- {
			dir := filepath.Join(top, "shared")
			if shards == 3 {
				dir = filepath.Join(top, fmt.Sprint("own", i))
			}
			j := quickJob(t, dir)
			j.Shard = batch.Shard{Index: i, Count: shards}
			if r := run(t, j); r.Tables || r.Done != r.Points {
				t.Errorf("shard %v: %+v", j.Shard, r)
			}
			dirs = append(dirs, dir)
		}
		out := filepath.Join(top, "joined")
		if shards == 7 {
			out = dirs[0] // in place
		}
		if _, err := batch.Join(t.Context(), dirs, out); err != nil {
			t.Fatal(err)
		}
		equalFolders(t, out, want)
		if _, err := batch.Join(t.Context(), dirs, out); err != nil { // again: nothing is left to do
			t.Fatal(err)
		}
		equalFolders(t, out, want)
	}
}

// What came of each point of the quick batch, by its number.
func TestStatuses(t *testing.T) {
	dir := whole(t)
	s, err := batch.Summarise(dir)
	if err != nil {
		t.Fatal(err)
	}
	got := map[string][]int64{}
	for _, r := range s.Rows {
		if l := got[r.Status]; len(l) == 0 || l[len(l)-1] != r.Point {
			got[r.Status] = append(l, r.Point)
		}
	}
	want := map[string][]int64{
		batch.Switch: {1, 5, 9}, batch.OneState: {3, 7, 11}, batch.Failed: {2, 4, 6, 8, 10, 12},
	}
	if !maps.EqualFunc(got, want, slices.Equal[[]int64]) {
		t.Errorf("points by status: %v, want %v", got, want)
	}
	if s.Points != 12 || s.Statuses[batch.Failed] != 6 || !slices.Equal(s.Failed, want[batch.Failed]) || !strings.Contains(s.Message, "rate NaN") {
		t.Errorf("summary %+v", s)
	}
}

// Each point has the map and the hold times that a job by itself gives, with the
// number of the point in its random numbers.
func TestPointsAreHoldJobs(t *testing.T) {
	draft, err := latch()
	if err != nil {
		t.Fatal(err)
	}
	j, err := jobOf(draft, filepath.Join(t.TempDir(), "out"), []batch.Axis{axis(t, "copies=8:10:2"), axis(t, "b=0.9,1")}, 0)
	if err != nil {
		t.Fatal(err)
	}
	j.Hold.Route, j.Hold.Runs = hold.Runs, 20
	run(t, j)
	s, err := batch.Summarise(j.Folder)
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Rows) != 8 {
		t.Fatalf("%d rows, want 8", len(s.Rows))
	}
	for i, r := range s.Rows {
		n, err := draft.Bind(r.Copies, map[string]float64{"b": r.Values[0]})
		if err != nil {
			t.Fatal(err)
		}
		o := hold.Options{Seed: 3, Point: uint64(r.Point), Route: hold.Runs, Runs: 20}
		alone, err := hold.Run(t.Context(), n, o)
		if err != nil {
			t.Fatal(err)
		}
		if d := alone.Dwells[i%2]; d.Mean != r.Dwell.Mean || d.High != r.Dwell.High || d.From != r.Dwell.From {
			t.Errorf("row %d: %+v, alone %+v", i, r.Dwell, d)
		}
	}
	if s.Rows[0].Dwell.Mean == s.Rows[2].Dwell.Mean {
		t.Error("two points have the same random numbers")
	}
}
