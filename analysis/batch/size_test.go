package batch_test

import (
	"bytes"
	"context"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"holdfast/analysis/batch"
	"holdfast/analysis/hold"
	"holdfast/analysis/sizing"
)

// sized is a batch that looks for the smallest copies at three points, one of which is
// no switch.
func sized(t testing.TB, dir string) batch.Job {
	t.Helper()
	draft, err := latch()
	if err != nil {
		t.Fatal(err)
	}
	j, err := jobOf(draft, dir, []batch.Axis{axis(t, "a=0.42,0.44,0.6")}, 0)
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	specs, err := sizing.ParseSpecs([]string{"high >= 70 min"}, n)
	if err != nil {
		t.Fatal(err)
	}
	j.Hold.Route, j.Hold.Precision = hold.Runs, 0.3
	j.Size = &batch.Size{Knob: sizing.Knob{Name: "copies", Low: 5, High: 30}, Specs: specs}
	return j
}

// Each point of a batch has the answer of a search of its own, with the point in its
// random numbers; a point that is no switch says so.
func TestSizesAtPoints(t *testing.T) {
	j := sized(t, filepath.Join(t.TempDir(), "out"))
	run(t, j)
	s, err := batch.Summarise(j.Folder)
	if err != nil {
		t.Fatal(err)
	}
	if !s.Sized || len(s.Rows) != 3 || s.Statuses[batch.Switch] != 2 || s.Statuses[batch.OneState] != 1 {
		t.Fatalf("%+v", s)
	}
	for i, row := range s.Rows[:2] {
		n, err := j.Points.Bind(j.Points.At(i))
		if err != nil {
			t.Fatal(err)
		}
		o := j.Hold
		o.Seed, o.Point = 3, uint64(row.Point)
		r, err := sizing.Run(context.Background(), n, sizing.Options{Knob: j.Size.Knob, Specs: j.Size.Specs, Hold: o})
		if err != nil {
			t.Fatal(err)
		}
		z, a := row.Size, r.Answer
		if z == nil || z.Outcome != r.Outcome || z.Setting != a.Setting || z.May != a.May || z.Surely != a.Surely || z.Evaluations != int64(len(r.Evaluations)) {
			t.Errorf("point %d: %+v, want %+v", row.Point, z, a)
		}
		if c := r.At(a.Setting).Binding(); z.Found != c.Found || z.State != c.State || z.Unit != "min" || !z.Sampled {
			t.Errorf("point %d: %+v, want %+v", row.Point, z, c)
		}
	}
}

// Shards give the same tables to the byte.
func TestSizesOfShards(t *testing.T) {
	dir := t.TempDir()
	whole := sized(t, filepath.Join(dir, "whole"))
	run(t, whole)
	joined := filepath.Join(dir, "joined")
	var dirs []string
	for i := range 2 {
		j := sized(t, filepath.Join(dir, "shard"+string(rune('1'+i))))
		j.Shard, j.Threads = batch.Shard{Index: i + 1, Count: 2}, 1
		run(t, j)
		dirs = append(dirs, j.Folder)
	}
	if _, err := batch.Join(context.Background(), dirs, joined); err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"sizes.arrow", "points.arrow", "manifest.json"} {
		a, err := os.ReadFile(filepath.Join(whole.Folder, name))
		if err != nil {
			t.Fatal(err)
		}
		b, err := os.ReadFile(filepath.Join(joined, name))
		if err != nil || !bytes.Equal(a, b) {
			t.Errorf("%s differs: %v", name, err)
		}
	}
	other := sized(t, whole.Folder)
	other.Size.Knob.High = 50
	var different *batch.DifferentError
	if _, err := batch.Run(context.Background(), other); !errors.As(err, &different) {
		t.Errorf("another size in the same folder: %v", err)
	}
}

func TestSizeOfWhatIsVaried(t *testing.T) {
	j := sized(t, filepath.Join(t.TempDir(), "out"))
	j.Size.Knob = sizing.Knob{Name: "a", Low: 0.3, High: 0.6}
	var knob *sizing.KnobError
	if _, err := batch.Run(context.Background(), j); !errors.As(err, &knob) {
		t.Errorf("%v", err)
	}
}

// What no point could ever meet is refused before the first, and no folder is made.
func TestSizeRefused(t *testing.T) {
	for _, c := range []struct {
		state string
		knob  sizing.Knob
		want  string
	}{
		{"hihg", sizing.Knob{}, `there is no state "hihg"`},
		{"saddle", sizing.Knob{}, `there is no state "saddle"`},
		{"level0", sizing.Knob{}, `there is no state "level0"`},
		{"high", sizing.Knob{Name: "aa", Low: 1, High: 2}, `did you mean "a"?`},
		{"high", sizing.Knob{Name: "copies", Low: 0.2, High: 0.8}, "no whole number"},
	} {
		j := sized(t, filepath.Join(t.TempDir(), "out"))
		j.Size.Knob, j.Size.Specs[0].State = c.knob, c.state
		_, err := batch.Run(context.Background(), j)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s, %+v: %v", c.state, c.knob, err)
		}
		if _, err := os.Stat(j.Folder); !errors.Is(err, fs.ErrNotExist) {
			t.Errorf("%s: the folder was made", c.state)
		}
	}
	j := sized(t, filepath.Join(t.TempDir(), "out"))
	j.Size.Specs[0].State = "middle" // other constants may have three states
	if r := run(t, j); r.Failed == 0 {
		t.Error("a state that may be there was refused, or found")
	}
}
