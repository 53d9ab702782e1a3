package records

import (
	"errors"
	"os"
	"path/filepath"
	"syscall"
	"testing"
)

// A disk that is really full: a file system in memory of 256 KiB.
func TestFullDisk(t *testing.T) {
	disk := t.TempDir()
	if err := syscall.Mount("holdfast", disk, "tmpfs", 0, "size=256k"); err != nil {
		t.Skipf("a small file system cannot be mounted here (%v); faults are tested with a made one", err)
	}
	defer func() { _ = syscall.Unmount(disk, syscall.MNT_DETACH) }()
	dir := filepath.Join(disk, "new", "run")
	f, err := Create(dir, marsh())
	if err != nil {
		t.Fatal(err)
	}
	d, err := NewDwells(f, []string{"low", "high"}, []string{"runs"}, []string{"flipped"})
	if err != nil {
		t.Fatal(err)
	}
	for i := range 100_000 { // 3 MB
		if err = d.Append(Dwell{To: 1, Replicate: uint64(i), Time: 1}); err != nil {
			break
		}
	}
	if !errors.Is(err, syscall.ENOSPC) {
		t.Errorf("error %v, want no space left", err)
	}
	if end := f.Finish(Outcome{}); end != err {
		t.Errorf("finishing gives %v, not the first error %v", end, err)
	}
	if entries, err := os.ReadDir(disk); err != nil || len(entries) > 0 {
		t.Errorf("left behind: %v, %v", entries, err)
	}
}
