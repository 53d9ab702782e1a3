package records

import (
	"bytes"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"github.com/apache/arrow-go/v18/arrow/ipc"
)

// An OccupiedError is a folder that holds something that is no record.
type OccupiedError struct {
	Dir, Name string // the folder, and a file in it
	Problem   string
}

// Error states the folder, the file and what to do.
func (e *OccupiedError) Error() string {
	return fmt.Sprintf("folder %s is in use: %s %s; name a new or empty folder", e.Dir, e.Name, e.Problem)
}

// A DifferentError is a folder that holds the record of something else.
type DifferentError struct {
	Dir         string
	Differences []string // "seed: 1 there, 2 here"
}

// Error states the folder and each difference.
func (e *DifferentError) Error() string {
	return fmt.Sprintf("folder %s holds the record of another run (%s); name another folder", e.Dir, strings.Join(e.Differences, "; "))
}

// survey looks at what is in the folder: it notes the record to be replaced, removes
// what a killed run left under temporary names, and refuses anything else.
func (f *Folder) survey() error {
	names, err := f.fs.List(f.dir)
	if err != nil {
		return &WriteError{f.dir, "list", err}
	}
	var left []string
	names = slices.DeleteFunc(names, func(name string) bool {
		if isTemp(name) {
			left = append(left, name)
		}
		return isTemp(name) || slices.Contains(f.own, name)
	})
	if slices.Contains(names, ManifestName) {
		err = f.surveyManifest(names)
	} else {
		err = f.surveyTables(names)
	}
	if err != nil {
		return err
	}
	for _, name := range left {
		if f.fs.Busy(f.path(name)) {
			return &OccupiedError{f.dir, name, "is being written by another run"}
		}
	}
	for _, name := range left {
		if err := f.fs.Remove(f.path(name)); err != nil {
			return &WriteError{f.path(name), "remove", err}
		}
	}
	return nil
}

// surveyManifest holds the run against the record that the folder has. Files that the
// manifest does not list are the user's and stay.
func (f *Folder) surveyManifest(names []string) error {
	data, err := f.fs.Read(f.path(ManifestName))
	if err != nil {
		return &WriteError{f.path(ManifestName), "read", err}
	}
	m, err := decodeManifest(data)
	if err != nil {
		return &OccupiedError{f.dir, ManifestName, "is there but " + err.Error()}
	}
	if d := f.differences(m.DesignSHA256, strconv.FormatUint(m.Seed, 10), m.Command); len(d) > 0 {
		return &DifferentError{f.dir, d}
	}
	f.old = []string{ManifestName}
	for _, t := range m.Tables {
		if t.File == fileName(t.Name) && slices.Contains(names, t.File) {
			f.old = append(f.old, t.File)
		}
	}
	return nil
}

// surveyTables takes tables without a manifest as its own if their metadata says so: a
// run was killed between putting its tables and its manifest in place.
func (f *Folder) surveyTables(names []string) error {
	for _, name := range names {
		if !strings.HasSuffix(name, ".arrow") {
			return &OccupiedError{f.dir, name, "is there, and no " + ManifestName}
		}
		data, err := f.fs.Read(f.path(name))
		if err != nil {
			return &WriteError{f.path(name), "read", err}
		}
		digest, seed, command, err := identity(data)
		if err != nil {
			return &OccupiedError{f.dir, name, "is no record: " + err.Error()}
		}
		if d := f.differences(digest, seed, command); len(d) > 0 {
			return &DifferentError{f.dir, d}
		}
		f.old = append(f.old, name)
	}
	return nil
}

func identity(data []byte) (digest, seed, command string, err error) {
	r, err := ipc.NewFileReader(bytes.NewReader(data))
	if err != nil {
		return "", "", "", err
	}
	meta := r.Schema().Metadata()
	digest, _ = meta.GetValue(keyDigest)
	seed, _ = meta.GetValue(keySeed)
	command, _ = meta.GetValue(keyCommand)
	return digest, seed, command, r.Close()
}

func (f *Folder) differences(digest, seed, command string) (out []string) {
	p := f.provenance
	for _, d := range []struct{ what, there, here string }{
		{"design SHA-256", digest, p.Digest()},
		{"seed", seed, strconv.FormatUint(p.Seed, 10)},
		{"command", command, p.Command},
	} {
		if d.there != d.here {
			out = append(out, fmt.Sprintf("%s: %s there, %s here", d.what, d.there, d.here))
		}
	}
	return out
}
