package records

import (
	"encoding/json"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/arrow/memory"
)

func TestReplaceSameRun(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	mem := memory.NewGoAllocator()
	if err := attempt(disk{}, mem, dir); err != nil {
		t.Fatal(err)
	}
	first := contents(t, dir)
	write(t, filepath.Join(dir, "notes.txt"), "mine")
	write(t, filepath.Join(dir, ".holdfast-dwells-1.partial"), "left by a killed run")
	if err := attempt(disk{}, mem, dir); err != nil {
		t.Fatal(err)
	}
	second := contents(t, dir)
	if second["notes.txt"] != "mine" || len(second) != len(first)+1 {
		t.Errorf("%d files, the user's note %q", len(second), second["notes.txt"])
	}
	for name, data := range first {
		if second[name] != data {
			t.Errorf("%s differs after the same run", name)
		}
	}
}

// A table that the new run does not have goes with the old record.
func TestReplaceFewerTables(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
		t.Fatal(err)
	}
	f, err := Create(dir, marsh())
	if err != nil {
		t.Fatal(err)
	}
	if err := f.Finish(Outcome{CutShort: true, Reason: "cancelled"}); err != nil {
		t.Fatal(err)
	}
	got := contents(t, dir)
	if len(got) != 1 || !strings.Contains(got[ManifestName], `"reason": "cancelled"`) {
		t.Errorf("left: %v", got)
	}
}

// A run killed between its tables and its manifest is taken up by the same command.
func TestReplaceWithoutManifest(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
		t.Fatal(err)
	}
	if err := os.Remove(filepath.Join(dir, ManifestName)); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(dir); !errors.Is(err, ErrUnfinished) {
		t.Errorf("opening it: %v", err)
	}
	other := marsh()
	other.Seed = 3
	var different *DifferentError
	if _, err := Create(dir, other); !errors.As(err, &different) || len(different.Differences) != 1 {
		t.Errorf("another seed: %v", err)
	}
	if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(dir); err != nil {
		t.Error(err)
	}
}

func TestRefuseAnotherRun(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
		t.Fatal(err)
	}
	before := contents(t, dir)
	for _, c := range []struct {
		change func(*Provenance)
		words  string
	}{
		{func(p *Provenance) { p.Seed = 8 }, "seed: 9223372036854775813 there, 8 here"},
		{func(p *Provenance) { p.Command += " --runs 5" }, "command: holdfast hold latch.toml --seed 7 there"},
		{func(p *Provenance) { p.Design = "other" }, "design SHA-256"},
	} {
		p := marsh()
		c.change(&p)
		var different *DifferentError
		if _, err := Create(dir, p); !errors.As(err, &different) || !strings.Contains(err.Error(), c.words) {
			t.Errorf("error %v lacks %q", err, c.words)
		}
	}
	if after := contents(t, dir); len(after) != len(before) {
		t.Errorf("a refusal changed the folder: %d files, then %d", len(before), len(after))
	}
}

func TestRefuseOccupied(t *testing.T) {
	for name, data := range map[string]string{
		"thesis.tex": "x", "table.arrow": "no Arrow at all", ManifestName: "{", ".hidden": "",
	} {
		dir := t.TempDir()
		write(t, filepath.Join(dir, name), data)
		var occupied *OccupiedError
		if _, err := Create(dir, marsh()); !errors.As(err, &occupied) || occupied.Name != name {
			t.Errorf("%s: %v", name, err)
		}
	}
	for _, data := range []string{`{"program":"other"}`, `{"program":"holdfast","format_version":99}`} {
		dir := t.TempDir()
		write(t, filepath.Join(dir, ManifestName), data)
		if _, err := Create(dir, marsh()); err == nil {
			t.Errorf("%s is taken as a record", data)
		}
		if _, err := Open(dir); err == nil {
			t.Errorf("%s is opened as a record", data)
		}
	}
}

// A folder that another run is writing to is refused, and that run goes on. A second
// opening of a file stands for the other process: locks belong to the opening.
func TestRefuseBusy(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	f, err := Create(dir, marsh())
	if err != nil {
		t.Fatal(err)
	}
	if _, err := f.Table(newEverything().Table); err != nil {
		t.Fatal(err)
	}
	if names := contents(t, dir); len(names) != 1 {
		t.Fatalf("%v", names)
	}
	if !f.fs.Busy(f.temp("everything")) {
		t.Skip("files cannot be locked here")
	}
	var occupied *OccupiedError
	if _, err := Create(dir, marsh()); !errors.As(err, &occupied) || !strings.Contains(err.Error(), "another run") {
		t.Errorf("the folder is taken twice: %v", err)
	}
	if err := f.Finish(Outcome{}); err != nil {
		t.Error(err)
	}
}

// A manifest cannot make the program remove a file elsewhere.
func TestManifestCannotReachOutside(t *testing.T) {
	base := t.TempDir()
	dir := filepath.Join(base, "run")
	if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
		t.Fatal(err)
	}
	write(t, filepath.Join(base, "precious"), "x")
	m := newManifest(marsh(), Outcome{})
	m.Tables = []TableEntry{{Name: "../precious", File: "../precious"}}
	data, err := m.encode()
	if err != nil {
		t.Fatal(err)
	}
	write(t, filepath.Join(dir, ManifestName), string(data))
	if _, err := Open(dir); err == nil {
		t.Error("it is opened")
	}
	if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
		t.Fatal(err)
	}
	if _, err := os.Stat(filepath.Join(base, "precious")); err != nil {
		t.Error(err)
	}
}

func TestDamageIsSeen(t *testing.T) {
	damage := map[string]func(string) error{
		"missing": os.Remove,
		"bytes":   func(p string) error { return os.Truncate(p, 1000) },
		"SHA-256": func(p string) error {
			data, err := os.ReadFile(p)
			if err != nil {
				return err
			}
			data[len(data)/2] ^= 1
			return os.WriteFile(p, data, 0o600)
		},
	}
	for words, harm := range damage {
		dir := filepath.Join(t.TempDir(), "run")
		if err := attempt(disk{}, memory.NewGoAllocator(), dir); err != nil {
			t.Fatal(err)
		}
		if _, err := Open(dir); err != nil {
			t.Fatal(err)
		}
		if err := harm(filepath.Join(dir, "dwells.arrow")); err != nil {
			t.Fatal(err)
		}
		var wrong *DamageError
		if _, err := Open(dir); !errors.As(err, &wrong) || !strings.Contains(err.Error(), words) {
			t.Errorf("error %v lacks %q", err, words)
		}
	}
}

func TestManifest(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	f, err := Create(dir, marsh())
	if err != nil {
		t.Fatal(err)
	}
	if err := f.Finish(Outcome{Endings: map[string]int64{"flipped": 3}, Events: 12, Warnings: []string{"few flips"}}); err != nil {
		t.Fatal(err)
	}
	r, err := Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	if r.Manifest.Provenance() != marsh() || r.Manifest.Events != 12 || r.Manifest.Endings["flipped"] != 3 || r.Manifest.CutShort {
		t.Errorf("%+v", r.Manifest)
	}
	var loose map[string]any
	if err := json.Unmarshal([]byte(contents(t, dir)[ManifestName]), &loose); err != nil {
		t.Fatal(err)
	}
	// SHA-256 of the design's text by sha256sum (GNU coreutils).
	if loose["design_sha256"] != designDigest || loose["program"] != "holdfast" {
		t.Errorf("%v", loose)
	}
}

func TestProvenanceMistakes(t *testing.T) {
	for _, p := range []Provenance{{Title: "\xff"}, {Command: "\xff"}, {Generation: -1}, {Copies: -1}} {
		if _, err := Create(filepath.Join(t.TempDir(), "run"), p); err == nil {
			t.Errorf("%+v is taken", p)
		}
	}
}

func TestCommand(t *testing.T) {
	for want, words := range map[string][]string{
		`holdfast hold a.toml`:             {"holdfast", "hold", "a.toml"},
		`x '' 'a b' 'it'\''s' '$HOME' '*'`: {"x", "", "a b", "it's", "$HOME", "*"},
	} {
		if got := Command(words...); got != want {
			t.Errorf("got %s, want %s", got, want)
		}
	}
}

func write(t *testing.T, name, data string) {
	t.Helper()
	if err := os.WriteFile(name, []byte(data), 0o600); err != nil {
		t.Fatal(err)
	}
}

const designDigest = "6075e4d31fc16da83bf946432127d31fea5fd62de8e99b6b4a214dea5f9f1db9"
