package batch

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"syscall"
)

// Names in the folder of a batch.
const (
	partsName  = "parts"
	lockName   = "folder.lock"
	tempPrefix = ".new-"
)

// A store is the folder of a batch at work, held by one process for one shard.
type store struct {
	dir, parts string
	id         identity
	digest     string
	shard      Shard
	locks      []*os.File
}

// A WriteError is a part, or what goes with it, that could not be kept. Points that
// were finished before are safe.
type WriteError struct {
	Name string
	Err  error
}

// Error states the file and the system's reason, and what to do.
func (e *WriteError) Error() string {
	return fmt.Sprintf("%s could not be written: %v; finished points are safe: make room and give the same command again", e.Name, e.Err)
}

// Unwrap gives the system's error.
func (e *WriteError) Unwrap() error { return e.Err }

// A LockedError is a folder, or a shard of it, that another process works in.
type LockedError struct{ Folder, What string }

// Error states the folder and what to do.
func (e *LockedError) Error() string {
	return fmt.Sprintf("another process works on %s in folder %s; wait for it, or end it", e.What, e.Folder)
}

// openStore takes the folder for the shard of the batch. A folder of another batch is a
// *DifferentError, one in use for something else a *NoBatchError, one that another
// process works in a *LockedError.
func openStore(dir string, id identity, shard Shard) (*store, error) {
	s := &store{dir: dir, parts: filepath.Join(dir, partsName), id: id, digest: id.digest(), shard: shard}
	if err := s.admit(); err != nil {
		return nil, err
	}
	if err := makeLasting(s.parts); err != nil {
		return nil, &NoBatchError{dir, "cannot be used: " + err.Error()}
	}
	err := s.lockAll()
	if err == nil {
		err = s.identify()
	}
	if err == nil {
		err = s.sweep()
	}
	if err != nil {
		s.close()
		return nil, err
	}
	return s, nil
}

// admit looks whether the folder may be used, before anything in it is touched.
func (s *store) admit() error {
	there, err := readIdentity(s.dir)
	if err != nil {
		return err
	}
	if there != nil {
		return s.compare(there)
	}
	entries, err := os.ReadDir(s.dir)
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	for _, e := range entries {
		if e.Name() != partsName && !strings.HasPrefix(e.Name(), tempPrefix) {
			return &NoBatchError{s.dir, "is in use: " + e.Name() + " is there, and no " + identityName + "; name a new or empty folder"}
		}
	}
	return nil
}

// makeLasting makes a folder and those above it, and syncs the folders that hold them: else a
// power cut may take a new folder away with all that was synced in it.
func makeLasting(dir string) error {
	var above []string
	for d := filepath.Clean(dir); ; d = filepath.Dir(d) {
		if _, err := os.Stat(d); !errors.Is(err, fs.ErrNotExist) || d == filepath.Dir(d) {
			break
		}
		above = append(above, filepath.Dir(d))
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	for _, d := range above {
		if err := syncDir(d); err != nil && !errors.Is(err, fs.ErrPermission) { // one may be allowed to pass a folder but not to read it
			return err
		}
	}
	return nil
}

func (s *store) compare(there *identity) error {
	if d := s.id.differences(there); len(d) > 0 {
		return &DifferentError{s.dir, d}
	}
	return nil
}

// lockAll takes the folder, alone for the whole batch and with other shards for a
// shard, and then the shard.
func (s *store) lockAll() error {
	err := s.lockFile(lockName, !s.shard.Whole(), "the batch")
	if err != nil || s.shard.Whole() {
		return err
	}
	return s.lockFile(shardFile(s.shard), false, "shard "+s.shard.String())
}

// shardFile is the name of the file that a shard locks, which also shows that it was
// begun.
func shardFile(s Shard) string { return fmt.Sprintf("shard-%d-of-%d.lock", s.Index, s.Count) }

// lockFile locks a file of the folder of parts. A process that finished the batch
// meanwhile has removed that folder; it is then made anew.
func (s *store) lockFile(name string, shared bool, what string) error {
	path := filepath.Join(s.parts, name)
	for {
		f, err := os.OpenFile(path, os.O_CREATE|os.O_RDWR, 0o666)
		if errors.Is(err, fs.ErrNotExist) {
			if err = os.MkdirAll(s.parts, 0o777); err == nil {
				continue
			}
		}
		if err != nil {
			return &WriteError{path, err}
		}
		s.locks = append(s.locks, f)
		got, err := lock(f, shared)
		if err != nil {
			return &WriteError{path, err}
		}
		if !got {
			return &LockedError{s.dir, what}
		}
		if sameFile(f, path) {
			return nil
		}
		s.locks = s.locks[:len(s.locks)-1]
		_ = f.Close() // it was opened to be locked
	}
}

func sameFile(f *os.File, path string) bool {
	one, errOne := f.Stat()
	two, errTwo := os.Stat(path)
	return errOne == nil && errTwo == nil && os.SameFile(one, two)
}

// identify writes what the batch is, or holds it against what is there now.
func (s *store) identify() error {
	there, err := readIdentity(s.dir)
	if err != nil {
		return err
	}
	if there != nil {
		return s.compare(there)
	}
	return s.write(s.dir, identityName, s.id.encode())
}

// sweep removes what this shard left under temporary names when it was killed.
func (s *store) sweep() error {
	for _, dir := range []string{s.dir, s.parts} {
		entries, err := os.ReadDir(dir)
		if err != nil {
			return err
		}
		for _, e := range entries {
			if s.shard.Whole() && strings.HasPrefix(e.Name(), tempPrefix) || strings.HasPrefix(e.Name(), s.tempPrefix()) {
				_ = os.Remove(filepath.Join(dir, e.Name())) // it is only in the way
			}
		}
	}
	return nil
}

// tempPrefix begins the temporary names of this shard.
func (s *store) tempPrefix() string {
	return tempPrefix + strings.ReplaceAll(s.shard.String(), "/", "-of-") + "-"
}

func (s *store) close() {
	for _, f := range s.locks {
		_ = f.Close() // gives the lock back; nothing was written
	}
	s.locks = nil
}

// write puts a file in place, whole and lasting: written under a temporary name, synced,
// renamed, the folder synced.
func (s *store) write(dir, name string, data []byte) error {
	if err := s.place(dir, name, data); err != nil {
		return err
	}
	return syncDir(dir)
}

// place is write without syncing the folder.
func (s *store) place(dir, name string, data []byte) error {
	path, temp := filepath.Join(dir, name), filepath.Join(dir, s.tempPrefix()+name)
	err := writeSynced(temp, data)
	if err == nil {
		err = os.Rename(temp, path)
	}
	if err != nil {
		_ = os.Remove(temp) // the first error is the one to report
		return &WriteError{path, err}
	}
	return nil
}

func writeSynced(name string, data []byte) error {
	f, err := os.Create(name)
	if err != nil {
		return err
	}
	_, err = f.Write(data)
	if err == nil {
		err = f.Sync()
	}
	return errors.Join(err, f.Close())
}

// syncDir makes renames in a folder last. Some systems cannot sync a folder.
func syncDir(dir string) error {
	if runtime.GOOS == "windows" {
		return nil
	}
	d, err := os.Open(dir)
	if err != nil {
		return &WriteError{dir, err}
	}
	err = d.Sync()
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, errors.ErrUnsupported) {
		err = nil
	}
	if err = errors.Join(err, d.Close()); err != nil {
		return &WriteError{dir, err}
	}
	return nil
}

// put keeps finished points: a part each, and then the folder is synced once.
func (s *store) put(answers []*answer) error {
	for _, a := range answers {
		data, err := encodePart(s.digest, a)
		if err != nil {
			return err
		}
		if err := s.place(s.parts, partName(a.Point.Number), data); err != nil {
			return err
		}
	}
	return syncDir(s.parts)
}

func partName(number int64) string { return fmt.Sprintf("point-%07d.part", number) }

// get reads a part; nil where there is none, errDamaged where it is not whole.
func (s *store) get(number int64) (*answer, error) { return getPart(s.parts, s.digest, number) }

func getPart(parts, digest string, number int64) (*answer, error) {
	data, err := os.ReadFile(filepath.Join(parts, partName(number)))
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil
	}
	if err != nil {
		return nil, err
	}
	a, err := decodePart(digest, data)
	if err == nil && a.Point.Number != number {
		err = errDamaged
	}
	return a, err
}

// removeParts takes the parts away once the tables are in place; the file that is locked
// goes last.
func (s *store) removeParts() error {
	entries, err := os.ReadDir(s.parts)
	if err != nil {
		return err
	}
	for _, e := range entries {
		if e.Name() != lockName {
			err = errors.Join(err, os.Remove(filepath.Join(s.parts, e.Name())))
		}
	}
	return errors.Join(err, os.Remove(filepath.Join(s.parts, lockName)), os.Remove(s.parts), syncDir(s.dir))
}
