package batch_test

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"holdfast/analysis/batch"
)

// A batch that is stopped keeps what is finished, and goes on.
func TestCancel(t *testing.T) {
	want := whole(t)
	dir := filepath.Join(t.TempDir(), "out")
	ctx, cancel := context.WithCancel(t.Context())
	j := quickJob(t, dir)
	j.Progress = func(p batch.Progress) {
		if p.Done > 2 {
			cancel()
		}
	}
	r, err := batch.Run(ctx, j)
	if !errors.Is(err, context.Canceled) || r.Done < 3 || r.Tables {
		t.Fatalf("%+v, %v", r, err)
	}
	var first *batch.Progress
	j.Progress = func(p batch.Progress) {
		if first == nil {
			first = &p
		}
	}
	run(t, j)
	if first.Done < r.Done {
		t.Errorf("%d points when begun again, %d when stopped", first.Done, r.Done)
	}
	equalFolders(t, dir, want)
}

// unfinished gives a folder with the parts of one shard of three, and the parts' names.
func unfinished(t *testing.T) (dir string, parts []string) {
	t.Helper()
	dir = filepath.Join(t.TempDir(), "out")
	j := quickJob(t, dir)
	j.Shard = batch.Shard{Index: 1, Count: 3}
	run(t, j)
	parts, err := filepath.Glob(filepath.Join(dir, "parts", "point-*.part"))
	if err != nil || len(parts) != 4 {
		t.Fatalf("parts %v, %v", parts, err)
	}
	return dir, parts
}

// A part with a flipped bit, one that was cut short, one with another point in it and one
// of nothing are found and made anew.
func TestDamagedParts(t *testing.T) {
	want := whole(t)
	dir, parts := unfinished(t)
	first := read(t, parts[0])
	for i, damage := range []func([]byte) []byte{
		func(b []byte) []byte { b[len(b)/2+200] ^= 4; return b },
		func(b []byte) []byte { return b[:len(b)-3] },
		func([]byte) []byte { return nil },
		func([]byte) []byte { return first },
	} {
		change(t, parts[i], damage)
	}
	r := run(t, quickJob(t, dir))
	if r.Damaged != 4 || len(r.Notes) != 1 || r.Notes[0] != "4 parts were damaged and were made anew" {
		t.Errorf("%d damaged parts, notes %q", r.Damaged, r.Notes)
	}
	equalFolders(t, dir, want)
}

func read(t *testing.T, name string) []byte {
	t.Helper()
	data, err := os.ReadFile(name)
	if err != nil {
		t.Fatal(err)
	}
	return data
}

func change(t *testing.T, name string, how func([]byte) []byte) {
	t.Helper()
	if err := os.WriteFile(name, how(read(t, name)), 0o666); err != nil {
		t.Fatal(err)
	}
}

// Tables that were damaged after the end are found and made anew.
func TestDamagedTable(t *testing.T) {
	want, dir := whole(t), filepath.Join(t.TempDir(), "out")
	if err := os.CopyFS(dir, os.DirFS(want)); err != nil {
		t.Fatal(err)
	}
	change(t, filepath.Join(dir, "rates.arrow"), func(b []byte) []byte { b[len(b)/2] ^= 1; return b })
	r := run(t, quickJob(t, dir))
	if r.Already || len(r.Notes) != 1 || !strings.Contains(r.Notes[0], "rates.arrow is damaged") {
		t.Errorf("%+v", r)
	}
	equalFolders(t, dir, want)
}

// While one process works in a folder another is refused; a shard is refused by the whole
// batch and by the same shard, and not by another one.
func TestLock(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out")
	try := func(s batch.Shard) error {
		j := quickJob(t, dir)
		j.Shard = s
		_, err := batch.Run(t.Context(), j)
		return err
	}
	during := func(s batch.Shard, look func()) {
		j := quickJob(t, dir)
		j.Shard = s
		looked := false
		j.Progress = func(batch.Progress) {
			if !looked {
				looked = true
				look()
			}
		}
		run(t, j)
	}
	var locked *batch.LockedError
	during(batch.Shard{Index: 1, Count: 3}, func() {
		if err := try(batch.Shard{Index: 1, Count: 3}); !errors.As(err, &locked) || !strings.Contains(err.Error(), "works on shard 1/3 in folder") {
			t.Errorf("the same shard: %v", err)
		}
		if err := try(batch.Shard{}); !errors.As(err, &locked) {
			t.Errorf("the whole batch beside a shard: %v", err)
		}
		if err := try(batch.Shard{Index: 2, Count: 3}); err != nil {
			t.Errorf("another shard: %v", err)
		}
	})
	during(batch.Shard{}, func() {
		for _, s := range []batch.Shard{{}, {Index: 3, Count: 3}} {
			if err := try(s); !errors.As(err, &locked) || !strings.Contains(err.Error(), "works on the batch in folder") {
				t.Errorf("shard %v beside the whole batch: %v", s, err)
			}
		}
		if _, err := batch.Join(t.Context(), []string{dir}, dir); err == nil {
			t.Error("joined while at work")
		}
	})
	equalFolders(t, dir, whole(t))
}

// A folder that is in use for something else, and a batch with other options, are refused
// and left as they are.
func TestOtherFolders(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "notes.txt"), []byte("mine"), 0o666); err != nil {
		t.Fatal(err)
	}
	var none *batch.NoBatchError
	if _, err := batch.Run(t.Context(), quickJob(t, dir)); !errors.As(err, &none) {
		t.Errorf("a folder with notes: %v", err)
	}
	if files := bytesOf(t, dir); len(files) != 1 {
		t.Errorf("left behind: %v", names(files))
	}
	dir, _ = unfinished(t)
	j := quickJob(t, dir)
	j.Hold.Precision = 0.5
	var other *batch.DifferentError
	if _, err := batch.Run(t.Context(), j); !errors.As(err, &other) || len(other.Differences) != 1 || other.Differences[0] != "precision: not given there, 0.5 here" {
		t.Errorf("another precision: %v", err)
	}
}

// Two folders with different answers for a point are named; so is the shard.
func TestConflict(t *testing.T) {
	one, parts := unfinished(t)
	two, _ := unfinished(t)
	batch.Forge(t, filepath.Join(two, "parts", filepath.Base(parts[0])))
	_, err := batch.Join(t.Context(), []string{one, two}, filepath.Join(t.TempDir(), "out"))
	var conflict *batch.ConflictError
	if !errors.As(err, &conflict) || conflict.Point != 1 || conflict.Shard != "1/3" || conflict.First != one || conflict.Second != two {
		t.Errorf("got %v", err)
	}
}
