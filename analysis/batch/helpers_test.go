package batch_test

import (
	"context"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"sync"
	"testing"

	"holdfast/analysis/batch"
	"holdfast/analysis/hold"
	"holdfast/model"
)

// childFolder, set in the environment, makes this binary run the quick batch in that
// folder, to be killed.
const childFolder = "HOLDFAST_TEST_BATCH_FOLDER"

func TestMain(m *testing.M) {
	if dir := os.Getenv(childFolder); dir != "" {
		if err := runChild(dir); err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
		return
	}
	status := m.Run()
	if top != "" {
		_ = os.RemoveAll(top)
	}
	os.Exit(status)
}

func runChild(dir string) error {
	j, err := quick(dir)
	if err == nil {
		_, err = batch.Run(context.Background(), j)
	}
	return err
}

func latch() (*model.Draft, error) {
	return model.Load(filepath.Join("..", "..", "testdata", "designs", "latch.toml"))
}

// quick is a batch of 12 points of some milliseconds each: switches by the lattice,
// vanished ones, and ones that fail, since a law is 0/0 without molecules.
func quick(dir string) (batch.Job, error) {
	draft, err := latch()
	if err != nil {
		return batch.Job{}, err
	}
	var axes []batch.Axis
	for _, text := range []string{"copies=1,8,9", "a=0.42,0.6", "half=1,0"} {
		a, err := batch.ParseAxis(text)
		if err != nil {
			return batch.Job{}, err
		}
		axes = append(axes, a)
	}
	return jobOf(draft, dir, axes, 0)
}

func jobOf(draft *model.Draft, dir string, axes []batch.Axis, draws int) (batch.Job, error) {
	p, err := batch.NewPoints(draft, batch.Base{Seed: 3}, nil, axes, draws)
	o := hold.Options{Command: "holdfast batch latch.toml"}
	return batch.Job{Draft: draft, Points: p, Hold: o, Folder: dir, Threads: 2}, err
}

func quickJob(t testing.TB, dir string) batch.Job {
	t.Helper()
	j, err := quick(dir)
	if err != nil {
		t.Fatal(err)
	}
	return j
}

func axis(t testing.TB, text string) batch.Axis {
	t.Helper()
	a, err := batch.ParseAxis(text)
	if err != nil {
		t.Fatal(err)
	}
	return a
}

func run(t testing.TB, j batch.Job) *batch.Result {
	t.Helper()
	r, err := batch.Run(context.Background(), j)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// bytesOf gives the files of a folder by name.
func bytesOf(t testing.TB, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if e.IsDir() {
			out[e.Name()] = "folder"
			continue
		}
		data, err := os.ReadFile(filepath.Join(dir, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		out[e.Name()] = string(data)
	}
	return out
}

// equalFolders holds every file of two folders against each other.
func equalFolders(t testing.TB, got, want string) {
	t.Helper()
	a, b := bytesOf(t, got), bytesOf(t, want)
	for name := range b {
		if a[name] != b[name] {
			t.Errorf("%s differs between %s and %s", name, got, want)
		}
	}
	if len(a) != len(b) {
		t.Errorf("%d files in %s, %d in %s: %v", len(a), got, len(b), want, names(a))
	}
}

func names(files map[string]string) (out []string) {
	for name := range files {
		out = append(out, name)
	}
	return out
}

// whole gives the folder of the quick batch made in one go, once for all tests. It must
// not be changed.
func whole(t testing.TB) string {
	t.Helper()
	dir, err := made()
	if err != nil {
		t.Fatal(err)
	}
	return dir
}

// made makes it in top, which TestMain removes.
var (
	top  string
	made = sync.OnceValues(func() (dir string, err error) {
		if top, err = os.MkdirTemp("", "batch"); err != nil {
			return "", err
		}
		dir = filepath.Join(top, "whole")
		return dir, runChild(dir)
	})
)

func TestFiles(t *testing.T) {
	files := names(bytesOf(t, whole(t)))
	slices.Sort(files)
	if want := []string{"batch.json", "manifest.json", "points.arrow", "rates.arrow", "states.arrow"}; !slices.Equal(files, want) {
		t.Errorf("files %v, want %v", files, want)
	}
}
