package records

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"github.com/apache/arrow-go/v18/arrow/memory"
)

var (
	errAbandoned = errors.New("the run was abandoned")
	errFinished  = errors.New("the records of this run are finished or abandoned")
)

// Names of temporary files.
const (
	tempPrefix = ".holdfast-"
	tempSuffix = ".partial"
)

// A Folder is the record of one run while it is being written.
type Folder struct {
	dir        string
	provenance Provenance
	fs         fileSystem
	mem        memory.Allocator
	made       []string // folders made for it, outermost first
	own        []string // names of the caller's files, which stay
	old        []string // files of the record that this one replaces
	writers    []*Writer
	done       bool
}

// Create opens the folder dir for the records of a run, making it if it is missing.
// It is refused, with nothing changed, if it holds anything but a record of the same
// design, seed and command (*OccupiedError, *DifferentError), or cannot be written to
// (*WriteError): so a run that could not be kept is not begun.
func Create(dir string, p Provenance) (*Folder, error) {
	return create(disk{}, memory.DefaultAllocator, dir, p)
}

// CreateBeside is Create for a folder that may hold files and folders of the caller's
// own under these names as well. They stay as they are.
func CreateBeside(dir string, p Provenance, own ...string) (*Folder, error) {
	return create(disk{}, memory.DefaultAllocator, dir, p, own...)
}

func create(fs fileSystem, mem memory.Allocator, dir string, p Provenance, own ...string) (*Folder, error) {
	if err := p.check(); err != nil {
		return nil, err
	}
	f := &Folder{dir: dir, provenance: p, fs: fs, mem: mem, own: own}
	made, err := fs.MakeDir(dir)
	f.made = made
	if err != nil {
		f.unmake()
		return nil, &WriteError{dir, "make", err}
	}
	if err := f.survey(); err != nil {
		f.unmake()
		return nil, err
	}
	if err := f.probe(); err != nil {
		f.unmake()
		return nil, err
	}
	return f, nil
}

// probe finds out whether files can be made in the folder.
func (f *Folder) probe() error {
	s, err := newSink(f.fs, f.dir, f.temp("probe"))
	if err != nil {
		return err
	}
	s.abandon()
	return s.err
}

// temp gives the temporary name of a file: hidden, and this process's own.
func (f *Folder) temp(name string) string {
	return filepath.Join(f.dir, fmt.Sprintf("%s%s-%d%s", tempPrefix, name, os.Getpid(), tempSuffix))
}

func (f *Folder) path(name string) string { return filepath.Join(f.dir, name) }

// Table starts a table of the run. Its name must be new in this folder.
func (f *Folder) Table(t *Table) (*Writer, error) {
	if f.done {
		return nil, errFinished
	}
	if err := t.check(); err != nil {
		return nil, err
	}
	for _, w := range f.writers {
		if w.table.Name == t.Name {
			return nil, fmt.Errorf("table %s was started before", t.Name)
		}
	}
	s, err := newSink(f.fs, f.path(fileName(t.Name)), f.temp(t.Name))
	if err != nil {
		return nil, err
	}
	w, err := newWriter(*t, f.provenance, s, f.mem)
	if err != nil {
		s.abandon()
		return nil, err
	}
	f.writers = append(f.writers, w)
	return w, nil
}

func fileName(table string) string { return table + ".arrow" }

// Finish closes the tables that are still open, puts all of them in place and, last,
// the manifest. On an error the folder holds nothing of this run.
func (f *Folder) Finish(o Outcome) error {
	if f.done {
		return errFinished
	}
	for _, w := range f.writers {
		if err := w.Close(); err != nil {
			f.Abandon()
			return err
		}
	}
	placed, err := f.place(o)
	if err != nil {
		for _, name := range placed {
			_ = f.fs.Remove(name) // the first error is the one to report
		}
		f.Abandon()
		return err
	}
	f.done = true
	return nil
}

// Abandon drops the run: its temporary files, and the folders that were made for it.
// A record that stood in the folder before stays. After Finish it does nothing, so
// that it can be deferred.
func (f *Folder) Abandon() {
	if f.done {
		return
	}
	f.done = true
	for _, w := range f.writers {
		w.abandon()
	}
	f.unmake()
}

// unmake removes the folders that were made for the run, if nothing is in them.
func (f *Folder) unmake() {
	for i := len(f.made) - 1; i >= 0; i-- {
		_ = f.fs.Remove(f.made[i]) // fails where something else has been put there
	}
}

// isTemp tells whether the file is left over from a run that was killed.
func isTemp(name string) bool {
	return strings.HasPrefix(name, tempPrefix) && strings.HasSuffix(name, tempSuffix)
}
