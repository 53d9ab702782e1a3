package records

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
)

// A Record is the finished record of a run.
type Record struct {
	Dir      string
	Manifest Manifest
}

// ErrUnfinished is wrapped by the error for a folder without a manifest: no run has
// finished there.
var ErrUnfinished = errors.New("no finished record: " + ManifestName + " is not there")

// A DamageError is a table that is not what the manifest says.
type DamageError struct {
	File    string
	Problem string
}

// Error states the file and what is wrong.
func (e *DamageError) Error() string {
	return fmt.Sprintf("%s is damaged: %s; run the command of the manifest again", e.File, e.Problem)
}

// Open reads the manifest of the folder and holds every table against its size and
// SHA-256, which no Arrow reader does. A table that is missing or differs is a
// *DamageError.
func Open(dir string) (*Record, error) {
	data, err := os.ReadFile(filepath.Join(dir, ManifestName))
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fmt.Errorf("folder %s: %w", dir, ErrUnfinished)
	}
	if err != nil {
		return nil, err
	}
	m, err := decodeManifest(data)
	if err != nil {
		return nil, fmt.Errorf("folder %s: %w", dir, err)
	}
	r := &Record{Dir: dir, Manifest: m}
	for _, t := range m.Tables {
		if err := r.verify(t); err != nil {
			return nil, err
		}
	}
	return r, nil
}

func (r *Record) verify(t TableEntry) error {
	path := filepath.Join(r.Dir, fileName(t.Name))
	if t.File != fileName(t.Name) || !snake(t.Name) {
		return &DamageError{filepath.Join(r.Dir, ManifestName), fmt.Sprintf("table %q cannot have the file %q", t.Name, t.File)}
	}
	f, err := os.Open(path)
	if errors.Is(err, fs.ErrNotExist) {
		return &DamageError{path, "it is missing"}
	}
	if err != nil {
		return err
	}
	defer func() { _ = f.Close() }() // opened for reading
	sum := sha256.New()
	size, err := io.Copy(sum, f)
	switch {
	case err != nil:
		return fmt.Errorf("%s: %w", path, err)
	case size != t.Bytes:
		return &DamageError{path, fmt.Sprintf("it has %d bytes, not %d", size, t.Bytes)}
	case hex.EncodeToString(sum.Sum(nil)) != t.SHA256:
		return &DamageError{path, "its SHA-256 differs from the manifest's"}
	}
	return nil
}
