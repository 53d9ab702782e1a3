package batch_test

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"syscall"
	"testing"

	"holdfast/analysis/batch"
)

// A disk that is full: a file system in memory, of so many kilobytes that the batch ends
// early, among its parts or among its tables. With more room the same command goes on, and
// ends with the same bytes.
func TestFullDisk(t *testing.T) {
	want := whole(t)
	for _, kilobytes := range []int{16, 48, 64, 80} {
		t.Run(fmt.Sprint(kilobytes), func(t *testing.T) { fullDisk(t, want, kilobytes) })
	}
}

func fullDisk(t *testing.T, want string, kilobytes int) {
	disk := t.TempDir()
	size := fmt.Sprintf("size=%dk", kilobytes)
	if err := syscall.Mount("holdfast", disk, "tmpfs", 0, size); err != nil {
		t.Skipf("a small file system cannot be mounted here (%v)", err)
	}
	defer func() { _ = syscall.Unmount(disk, syscall.MNT_DETACH) }()
	j := quickJob(t, filepath.Join(disk, "out"))
	r, err := batch.Run(t.Context(), j)
	if !errors.Is(err, syscall.ENOSPC) {
		t.Fatalf("%+v, %v: want no space left", r, err)
	}
	left, err := filepath.Glob(filepath.Join(j.Folder, "*", ".*"))
	if err != nil || len(left) > 0 {
		t.Errorf("left behind: %v, %v", left, err)
	}
	if err := syscall.Mount("", disk, "", syscall.MS_REMOUNT, "size=4m"); err != nil {
		t.Fatal(err)
	}
	first := -1
	j.Progress = func(p batch.Progress) {
		if first < 0 {
			first = p.Done
		}
	}
	run(t, j)
	if r != nil && first < r.Done {
		t.Errorf("%d points when begun again, %d kept before", first, r.Done)
	}
	equalFolders(t, j.Folder, want)
	if _, err := os.Stat(filepath.Join(j.Folder, "parts")); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("parts are still there: %v", err)
	}
	t.Logf("%d points were kept", max(first, 0))
}
