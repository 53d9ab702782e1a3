package records

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"syscall"
)

// A file is one that is being written.
type file interface {
	io.Writer
	Sync() error
	Close() error
}

// A fileSystem is what writing a folder needs of the disk.
type fileSystem interface {
	// MakeDir makes the folder and those above it that are missing, and lists what it
	// made, outermost first.
	MakeDir(dir string) (made []string, err error)
	List(dir string) ([]string, error)
	Read(name string) ([]byte, error)
	Create(name string) (file, error) // fails if name exists
	Busy(name string) bool            // a living process is writing the file
	Rename(from, to string) error
	Remove(name string) error
	SyncDir(dir string) error
}

// disk is the real one.
type disk struct{}

func (disk) MakeDir(dir string) (made []string, err error) {
	for d := filepath.Clean(dir); ; d = filepath.Dir(d) {
		if _, err := os.Stat(d); !errors.Is(err, fs.ErrNotExist) || d == filepath.Dir(d) {
			break
		}
		made = append([]string{d}, made...)
	}
	return made, os.MkdirAll(dir, 0o777)
}

func (disk) List(dir string) ([]string, error) {
	entries, err := os.ReadDir(dir)
	names := make([]string, len(entries))
	for i, e := range entries {
		names[i] = e.Name()
	}
	return names, err
}

func (disk) Read(name string) ([]byte, error) { return os.ReadFile(name) }

func (disk) Create(name string) (file, error) {
	f, err := os.OpenFile(name, os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o666)
	if err != nil {
		return nil, err
	}
	lock(f)
	return f, nil
}

func (disk) Busy(name string) bool {
	f, err := os.Open(name)
	if err != nil {
		return false
	}
	defer func() { _ = f.Close() }() // opened for reading
	return locked(f)
}

func (disk) Rename(from, to string) error { return os.Rename(from, to) }

func (disk) Remove(name string) error { return os.Remove(name) }

// SyncDir makes renames in the folder last. Some systems cannot sync a folder and
// some refuse to; there it does nothing.
func (disk) SyncDir(dir string) error {
	if runtime.GOOS == "windows" {
		return nil
	}
	d, err := os.Open(dir)
	if err != nil {
		return err
	}
	err = d.Sync()
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, errors.ErrUnsupported) {
		err = nil
	}
	return errors.Join(err, d.Close())
}
