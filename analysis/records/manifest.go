package records

import (
	"bytes"
	"encoding/json"
	"fmt"
)

// ManifestName is the name of the manifest in its folder.
const ManifestName = "manifest.json"

// An Outcome says how a run went. All of it stands in the manifest.
type Outcome struct {
	// Endings count the dwells by how they ended.
	Endings map[string]int64 `json:"endings,omitempty"`
	// Events are the reaction events fired.
	Events int64 `json:"events"`
	// Steps are the steps of Langevin paths.
	Steps int64 `json:"steps,omitempty"`
	// Warnings are plain sentences for the reader.
	Warnings []string `json:"warnings"`
	// CutShort tells that the run was stopped before it had done what was asked; what
	// is recorded is whole nonetheless. Reason says why.
	CutShort bool   `json:"cut_short"`
	Reason   string `json:"reason,omitempty"`
}

// A TableEntry is one table in the manifest.
type TableEntry struct {
	Name   string `json:"name"`
	File   string `json:"file"`
	Rows   int64  `json:"rows"`
	Bytes  int64  `json:"bytes"`
	SHA256 string `json:"sha256"`
}

// A Manifest is what manifest.json holds.
type Manifest struct {
	Program       string  `json:"program"`
	FormatVersion int     `json:"format_version"`
	Version       string  `json:"version"`
	Command       string  `json:"command"`
	Seed          uint64  `json:"seed"`
	Title         string  `json:"title"`
	TimeUnit      string  `json:"time_unit"`
	Generation    float64 `json:"generation,omitempty"`
	Copies        float64 `json:"copies"`
	DesignSHA256  string  `json:"design_sha256"`
	Design        string  `json:"design"`
	Outcome
	Tables []TableEntry `json:"tables"`
}

func newManifest(p Provenance, o Outcome) Manifest {
	if o.Warnings == nil {
		o.Warnings = []string{}
	}
	return Manifest{
		Program: program, FormatVersion: FormatVersion, Version: p.Version, Command: p.Command, Seed: p.Seed,
		Title: p.Title, TimeUnit: p.TimeUnit, Generation: p.Generation, Copies: p.Copies,
		DesignSHA256: p.Digest(), Design: p.Design, Outcome: o, Tables: []TableEntry{},
	}
}

// Provenance gives what the run was made from.
func (m *Manifest) Provenance() Provenance {
	return Provenance{
		Title: m.Title, Design: m.Design, Seed: m.Seed, Version: m.Version, Command: m.Command,
		TimeUnit: m.TimeUnit, Generation: m.Generation, Copies: m.Copies,
	}
}

func (m *Manifest) encode() ([]byte, error) {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	err := e.Encode(m)
	return b.Bytes(), err
}

func decodeManifest(data []byte) (Manifest, error) {
	var m Manifest
	if err := json.Unmarshal(data, &m); err != nil {
		return m, fmt.Errorf("%s cannot be read: %w", ManifestName, err)
	}
	if m.Program != program {
		return m, fmt.Errorf("%s is not a record of %s", ManifestName, program)
	}
	if m.FormatVersion > FormatVersion {
		return m, fmt.Errorf("%s has format version %d; this program reads up to %d", ManifestName, m.FormatVersion, FormatVersion)
	}
	return m, nil
}
