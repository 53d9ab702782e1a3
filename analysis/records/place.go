package records

import "slices"

// place renames the tables and writes the manifest; placed lists what stands under its
// final name, also after an error.
func (f *Folder) place(o Outcome) (placed []string, err error) {
	if err := f.retire(); err != nil {
		return nil, err
	}
	m := newManifest(f.provenance, o)
	for _, w := range f.writers {
		if err := f.rename(w.sink); err != nil {
			return placed, err
		}
		placed = append(placed, w.sink.name)
		m.Tables = append(m.Tables, TableEntry{
			Name: w.table.Name, File: fileName(w.table.Name), Rows: w.rows, Bytes: w.sink.bytes, SHA256: w.sink.digest(),
		})
	}
	if err := f.clear(placed); err != nil {
		return placed, err
	}
	if err := f.sync(); err != nil { // tables last before the manifest stands
		return placed, err
	}
	return f.placeManifest(m, placed)
}

func (f *Folder) placeManifest(m Manifest, placed []string) ([]string, error) {
	data, err := m.encode()
	if err != nil {
		return placed, &WriteError{f.path(ManifestName), "encode", err}
	}
	s, err := newSink(f.fs, f.path(ManifestName), f.temp("manifest"))
	if err != nil {
		return placed, err
	}
	_, _ = s.Write(data) // finish gives the error
	if err := s.finish(); err != nil {
		return placed, err
	}
	if err := f.rename(s); err != nil {
		s.abandon()
		return placed, err
	}
	return append(placed, s.name), f.sync()
}

func (f *Folder) rename(s *sink) error {
	if err := f.fs.Rename(s.temp, s.name); err != nil {
		return &WriteError{s.name, "rename", err}
	}
	s.temp = ""
	return nil
}

func (f *Folder) sync() error {
	if err := f.fs.SyncDir(f.dir); err != nil {
		return &WriteError{f.dir, "sync", err}
	}
	return nil
}

// retire takes the manifest of the record that is being replaced away, so that no
// manifest ever stands beside tables that it does not describe.
func (f *Folder) retire() error {
	if !slices.Contains(f.old, ManifestName) {
		return nil
	}
	if err := f.fs.Remove(f.path(ManifestName)); err != nil {
		return &WriteError{f.path(ManifestName), "replace", err}
	}
	return f.sync()
}

// clear removes the old record's tables that the new one does not have.
func (f *Folder) clear(placed []string) error {
	for _, name := range f.old {
		path := f.path(name)
		if name == ManifestName || slices.Contains(placed, path) {
			continue
		}
		if err := f.fs.Remove(path); err != nil {
			return &WriteError{path, "replace", err}
		}
	}
	return nil
}
