package batch

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/internal/version"
)

// identityName is the name of the file that says what the batch of a folder is.
const identityName = "batch.json"

// A Setting is one thing that decides the results, in the words of the command line.
type Setting struct {
	Name  string `json:"name"`
	Value string `json:"value"`
}

// An identity says what a batch is. Two with the same digest have the same results.
type identity struct {
	Program      string    `json:"program"`
	Version      string    `json:"version"`
	Command      string    `json:"command"`
	Title        string    `json:"title"`
	TimeUnit     string    `json:"time_unit"`
	Generation   float64   `json:"generation"`
	Copies       float64   `json:"copies"`
	Seed         uint64    `json:"seed"`
	Points       int       `json:"points"`
	Names        []string  `json:"names"` // of what differs from point to point
	Draws        bool      `json:"draws"`
	Sized        bool      `json:"sized,omitempty"`
	Species      []string  `json:"species"`
	Settings     []Setting `json:"settings"`
	DesignSHA256 string    `json:"design_sha256"`
	Design       string    `json:"design"`
}

func newIdentity(j *Job) identity {
	draft, p, o := j.Draft, j.Points, j.Hold
	id := identity{
		Program: "holdfast", Version: version.Number, Command: o.Command, Title: draft.Title, TimeUnit: draft.TimeUnit,
		Generation: draft.Generation, Copies: draft.Copies, Seed: o.Seed, Points: p.Len(), Names: append([]string{}, p.Names...), Draws: p.draws > 0,
		DesignSHA256: draft.Digest, Design: draft.Text,
	}
	if p.base.Copies != 0 {
		id.Copies = p.base.Copies
	}
	for _, s := range draft.Species {
		id.Species = append(id.Species, s.Name)
	}
	id.Settings = append(append(p.settings(), j.Size.settings()...), holdSettings(o)...)
	id.Sized = j.Size != nil
	return id
}

// holdSettings are the options of the hold jobs that were given.
func holdSettings(o hold.Options) []Setting {
	out := []Setting{{"seed", strconv.FormatUint(o.Seed, 10)}}
	add := func(name, value string, given bool) {
		if given {
			out = append(out, Setting{name, value})
		}
	}
	add("route", o.Route, o.Route != "" && o.Route != hold.Auto)
	add("precision", number(o.Precision), o.Precision != 0)
	add("runs", strconv.FormatInt(o.Runs, 10), o.Runs != 0)
	add("events", strconv.FormatInt(o.Events, 10), o.Events != 0)
	add("until", number(o.Until), o.Until != 0)
	add("step", number(o.Step), o.Step != 0)
	add("along", o.Along, o.Along != "")
	add("interval", number(o.Interval), o.Interval != 0)
	add("memory", strconv.FormatInt(o.Memory, 10)+" bytes", o.Memory != 0)
	add("generations", strings.Trim(fmt.Sprint(o.Holds), "[]"), o.Holds != nil)
	return out
}

func number(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// provenance is what the tables carry.
func (id *identity) provenance() records.Provenance {
	return records.Provenance{
		Title: id.Title, Design: id.Design, Seed: id.Seed, Version: id.Version, Command: id.Command,
		TimeUnit: id.TimeUnit, Generation: id.Generation, Copies: id.Copies,
	}
}

// encode gives the file's bytes; digest their SHA-256 in hex.
func (id *identity) encode() []byte {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	e.SetIndent("", "  ")
	_ = e.Encode(id) // numbers are finite and texts are UTF-8, or the design was refused
	return b.Bytes()
}

func (id *identity) digest() string {
	sum := sha256.Sum256(id.encode())
	return hex.EncodeToString(sum[:])
}

// A DifferentError is a folder that holds another batch.
type DifferentError struct {
	Folder      string
	Differences []string // "vary copies: 20:400:12log there, 20:400:24log here"
}

// Error states the folder and each difference.
func (e *DifferentError) Error() string {
	return fmt.Sprintf("folder %s holds another batch:\n  %s\ngive the command that was begun there, or name another folder", e.Folder, strings.Join(e.Differences, "\n  "))
}

// A NoBatchError is a folder that is in use for something else, or holds no batch at all.
type NoBatchError struct{ Folder, Problem string }

// Error states the folder and the problem.
func (e *NoBatchError) Error() string { return fmt.Sprintf("folder %s %s", e.Folder, e.Problem) }

// readIdentity gives what the batch of the folder is; nil where there is none.
func readIdentity(dir string) (*identity, error) {
	data, err := os.ReadFile(filepath.Join(dir, identityName))
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil
	}
	if err != nil {
		return nil, &NoBatchError{dir, "cannot be used: " + err.Error()}
	}
	id := &identity{}
	if err := json.Unmarshal(data, id); err != nil || id.Program != "holdfast" {
		return nil, &NoBatchError{dir, identityName + " is there but cannot be read as that of a batch; name another folder"}
	}
	return id, nil
}

// differences says in plain words how another batch differs from this one.
func (id *identity) differences(there *identity) (out []string) {
	add := func(what, a, b string) {
		if a != b {
			out = append(out, fmt.Sprintf("%s: %s there, %s here", what, a, b))
		}
	}
	if there.DesignSHA256 != id.DesignSHA256 {
		out = append(out, "the design: "+firstDifference(there.Design, id.Design))
	}
	add("version of holdfast", there.Version, id.Version)
	for _, name := range settingNames(there.Settings, id.Settings) {
		add(name, settingOf(there.Settings, name), settingOf(id.Settings, name))
	}
	if out == nil && there.digest() != id.digest() {
		add("command", there.Command, id.Command)
	}
	if out == nil && there.digest() != id.digest() {
		out = append(out, identityName+" differs")
	}
	return out
}

// firstDifference tells the first line in which two texts differ.
func firstDifference(there, here string) string {
	a, b := strings.Split(there, "\n"), strings.Split(here, "\n")
	for i := 0; ; i++ {
		switch {
		case i == len(a) && i == len(b):
			return "the same lines"
		case i == len(a):
			return fmt.Sprintf("line %d is new: %s", i+1, strings.TrimSpace(b[i]))
		case i == len(b):
			return fmt.Sprintf("line %d is gone: %s", i+1, strings.TrimSpace(a[i]))
		case a[i] != b[i]:
			return fmt.Sprintf("line %d was %q and is %q", i+1, strings.TrimSpace(a[i]), strings.TrimSpace(b[i]))
		}
	}
}

// settingNames lists the names of both, in order.
func settingNames(a, b []Setting) (names []string) {
	seen := map[string]bool{}
	for _, s := range append(append([]Setting{}, a...), b...) {
		if !seen[s.Name] {
			seen[s.Name] = true
			names = append(names, s.Name)
		}
	}
	return names
}

func settingOf(list []Setting, name string) string {
	for _, s := range list {
		if s.Name == name {
			return s.Value
		}
	}
	return "not given"
}
