package records

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/arrow/memory"
)

var errFull = errors.New("no space left on device")

// faulty is a disk whose nth call fails: once, or from then on in everything that takes
// space.
type faulty struct {
	disk
	left  int  // calls until the fault
	stays bool // the disk stays full
	short bool // a write takes half and says nothing
	op    string

	retired bool // the manifest was taken away
}

// fault counts a call and tells whether it fails.
func (f *faulty) fault(op string, takesSpace bool) bool {
	f.left--
	if f.left == 0 {
		f.op = op
	}
	return f.left == 0 || f.left < 0 && f.stays && takesSpace
}

func (f *faulty) MakeDir(dir string) ([]string, error) {
	if f.fault("make", true) {
		return nil, errFull
	}
	return f.disk.MakeDir(dir)
}

func (f *faulty) List(dir string) ([]string, error) {
	if f.fault("list", false) {
		return nil, errFull
	}
	return f.disk.List(dir)
}

func (f *faulty) Create(name string) (file, error) {
	if f.fault("create", true) {
		return nil, errFull
	}
	real, err := f.disk.Create(name)
	if err != nil {
		return nil, err
	}
	return &faultyFile{f, real}, nil
}

func (f *faulty) Rename(from, to string) error {
	if f.fault("rename", true) {
		return errFull
	}
	return f.disk.Rename(from, to)
}

func (f *faulty) Remove(name string) error {
	if f.fault("remove", false) {
		return errFull
	}
	f.retired = f.retired || filepath.Base(name) == ManifestName
	return f.disk.Remove(name)
}

func (f *faulty) SyncDir(dir string) error {
	if f.fault("sync folder", true) {
		return errFull
	}
	return f.disk.SyncDir(dir)
}

type faultyFile struct {
	*faulty
	file
}

func (f *faultyFile) Write(p []byte) (int, error) {
	if !f.fault("write", true) {
		return f.file.Write(p)
	}
	n, err := f.file.Write(p[:len(p)/2])
	if err != nil {
		return n, err
	}
	if f.short {
		return n, nil
	}
	return n, errFull
}

func (f *faultyFile) Sync() error {
	if f.fault("sync", true) {
		return errFull
	}
	return f.file.Sync()
}

func (f *faultyFile) Close() error {
	err := f.file.Close()
	if f.fault("close", true) {
		return errFull
	}
	return err
}

// attempt writes two tables, one of several buffers, and gives the first error.
func attempt(fs fileSystem, mem memory.Allocator, dir string) error {
	f, err := create(fs, mem, dir, marsh())
	if err != nil {
		return err
	}
	defer f.Abandon()
	if err := WriteStates(f, []string{"protein"}, []State{{Name: "low", Type: "stable", Amounts: []float64{1}, Molecules: []float64{100}}}); err != nil {
		return err
	}
	d, err := NewDwells(f, []string{"low", "high"}, []string{"runs"}, []string{"flipped"})
	if err != nil {
		return err
	}
	for i := range 20_000 {
		if err := d.Append(Dwell{To: 1, Replicate: uint64(i), Time: float64(i)}); err != nil {
			return err
		}
	}
	return f.Finish(Outcome{})
}

// Every call to the disk fails in turn. Each time there is one error that names a file,
// nothing under a final name, and nothing under a temporary one.
func TestEachFault(t *testing.T) {
	for _, kind := range []faulty{{}, {stays: true}, {short: true}} {
		ops := map[string]int{}
		for n := 1; ; n++ {
			fs := kind
			fs.left = n
			dir := filepath.Join(t.TempDir(), "new", "run")
			mem := memory.NewCheckedAllocator(memory.NewGoAllocator())
			err := attempt(&fs, mem, dir)
			mem.AssertSize(t, 0)
			if fs.op == "" { // fewer calls than n: the whole run is done
				if err != nil {
					t.Fatal(err)
				}
				break
			}
			ops[fs.op]++
			if fs.op == "remove" && err == nil {
				continue // taking the probe away was tried again
			}
			checkFault(t, err, dir, fmt.Sprintf("%+v, call %d, %s", kind, n, fs.op))
		}
		for _, op := range []string{"make", "list", "create", "write", "sync", "close", "rename", "sync folder"} {
			if ops[op] == 0 {
				t.Errorf("%s was never made to fail: %v", op, ops)
			}
		}
	}
}

func checkFault(t *testing.T, err error, dir, what string) {
	t.Helper()
	var wrong *WriteError
	if !errors.As(err, &wrong) || !(errors.Is(err, errFull) || errors.Is(err, io.ErrShortWrite)) || !strings.Contains(err.Error(), "run") {
		t.Errorf("%s: error %v", what, err)
	}
	if strings.Count(err.Error(), "no records were left behind") != 1 {
		t.Errorf("%s: not one clear error: %v", what, err)
	}
	if entries, e := os.ReadDir(dir); e == nil && len(entries) > 0 {
		t.Errorf("%s: left behind %v", what, entries)
	}
	if _, e := os.Stat(filepath.Dir(dir)); !os.IsNotExist(e) {
		t.Errorf("%s: the folders made for the run are still there", what)
	}
}

// A fault while an older record is being replaced leaves that record as it was until
// the new tables are whole, and from then on no manifest beside tables that it does not
// describe.
func TestFaultWhileReplacing(t *testing.T) {
	kept, lost := 0, 0
	for n := 1; ; n++ {
		dir := filepath.Join(t.TempDir(), "run")
		if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
			t.Fatal(err)
		}
		fs := faulty{left: n, stays: true}
		err := attempt(&fs, memory.NewGoAllocator(), dir)
		if fs.op == "" {
			break
		}
		_, opened := Open(dir)
		switch {
		case err == nil || !fs.retired:
			kept++
			if opened != nil {
				t.Errorf("call %d, %s: error %v, and the record: %v", n, fs.op, err, opened)
			}
		default:
			lost++
			if !errors.Is(opened, ErrUnfinished) {
				t.Errorf("call %d, %s: the record: %v", n, fs.op, opened)
			}
		}
	}
	if kept < 10 || lost < 5 {
		t.Errorf("%d faults before the change, %d during it: too few to tell", kept, lost)
	}
}

func TestUnwritable(t *testing.T) {
	base := t.TempDir()
	blocked := filepath.Join(base, "a file")
	if err := os.WriteFile(blocked, nil, 0o600); err != nil {
		t.Fatal(err)
	}
	for _, dir := range []string{blocked, filepath.Join(blocked, "run")} {
		_, err := Create(dir, marsh())
		var wrong *WriteError
		if !errors.As(err, &wrong) || !strings.Contains(err.Error(), "a file") {
			t.Errorf("%s: %v", dir, err)
		}
	}
	closed := filepath.Join(base, "closed")
	if err := os.Mkdir(closed, 0o500); err != nil {
		t.Fatal(err)
	}
	if probe := os.WriteFile(filepath.Join(closed, "x"), nil, 0o600); probe == nil {
		t.Skip("this user may write to a folder without permission; the rest was tested")
	}
	if _, err := Create(closed, marsh()); !errors.Is(err, os.ErrPermission) {
		t.Errorf("folder without permission: %v", err)
	}
}

// Standard tables refuse what they cannot hold, and leave nothing.
func TestAbandonedRunLeavesNothing(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	f, mem := checkedFolder(t, dir)
	table := newEverything()
	w, err := f.Table(table.Table)
	if err != nil {
		t.Fatal(err)
	}
	table.write(w, 70_000)
	f.Abandon()
	f.Abandon()
	mem.AssertSize(t, 0)
	if _, err := os.Stat(dir); !os.IsNotExist(err) {
		t.Error("the folder is still there")
	}
	if err := f.Finish(Outcome{}); !errors.Is(err, errFinished) {
		t.Errorf("finishing it: %v", err)
	}
	if _, err := f.Table(NewTable("a")); !errors.Is(err, errFinished) {
		t.Errorf("a table of it: %v", err)
	}
	w.Int(table.whole, 1)
	if w.Next() == nil {
		t.Error("a row of it is taken")
	}
}
