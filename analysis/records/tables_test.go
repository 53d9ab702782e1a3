package records

import (
	"fmt"
	"io"
	"math"
	"path/filepath"
	"strings"
	"testing"
)

// stored writes with fill, finishes, and gives the table's only batch and its reader.
func stored(t *testing.T, p Provenance, name string, fill func(*Folder) error) (*Batch, *Reader) {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "run")
	f, err := Create(dir, p)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abandon()
	if err := fill(f); err != nil {
		t.Fatal(err)
	}
	if err := f.Finish(Outcome{}); err != nil {
		t.Fatal(err)
	}
	record, err := Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	r, err := record.Table(name)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = r.Close() })
	b, err := r.Next()
	if err != nil {
		t.Fatal(err)
	}
	if _, err := record.Table("absent"); err == nil {
		t.Error("a table that is not there can be opened")
	}
	return b, r
}

// show renders the named columns of a row, ∅ for null.
func show(b *Batch, row int, names ...string) string {
	out := make([]string, len(names))
	for i, n := range names {
		out[i] = showOne(b, n, row)
	}
	return strings.Join(out, " ")
}

func showOne(b *Batch, name string, row int) string {
	if b.Null(name, row) {
		return "∅"
	}
	if v, err := b.Ints(name); err == nil {
		return fmt.Sprint(v[row])
	}
	if v, err := b.Floats(name); err == nil {
		return fmt.Sprint(v[row])
	}
	if v, err := b.Flags(name); err == nil {
		return fmt.Sprint(v[row])
	}
	if v, err := b.Texts(name); err == nil {
		return v[row]
	}
	v, err := b.Labels(name)
	if err != nil {
		return err.Error()
	}
	return v[row]
}

func expect(t *testing.T, got, want string) {
	t.Helper()
	if got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
}

func TestStates(t *testing.T) {
	b, r := stored(t, marsh(), "states", func(f *Folder) error {
		return WriteStates(f, []string{"mrna", "protein"}, []State{
			{Name: "low", Type: "stable", Absorbing: true, Amounts: []float64{0.1, 0.2}, Molecules: []float64{10, 20}, Deviation: []float64{3, 7}, Eigenvalue: complex(-0.25, 0.5)},
			{Name: "saddle", Type: "saddle", Amounts: []float64{0.3, 0.4}, Molecules: []float64{30, 40}, Eigenvalue: complex(math.NaN(), math.NaN())},
		})
	})
	columns := []string{"state", "type", "absorbing", "species", "amount", "molecules", "sd_molecules", "eigenvalue_real", "eigenvalue_imaginary"}
	expect(t, show(b, 0, columns...), "low stable true mrna 0.1 10 3 -0.25 0.5")
	expect(t, show(b, 1, columns...), "low stable true protein 0.2 20 7 -0.25 0.5")
	expect(t, show(b, 3, columns...), "saddle saddle false protein 0.4 40 ∅ ∅ ∅")
	if b.Rows() != 4 {
		t.Errorf("%d rows", b.Rows())
	}
	checkColumns(t, r, columns, map[string]string{"molecules": "molecules", "eigenvalue_real": "1/min"})
}

func checkColumns(t *testing.T, r *Reader, names []string, units map[string]string) {
	t.Helper()
	if len(r.Columns()) != len(names) {
		t.Errorf("%d columns, want %d", len(r.Columns()), len(names))
	}
	for i, c := range r.Columns() {
		if i < len(names) && c.Name != names[i] {
			t.Errorf("column %d is %s, want %s", i, c.Name, names[i])
		}
		if !snake(c.Name) || c.Note == "" {
			t.Errorf("column %s: not lower_snake_case, or without a note", c.Name)
		}
		if want, ok := units[c.Name]; ok && c.Unit != want {
			t.Errorf("column %s is in %q, want %q", c.Name, c.Unit, want)
		}
	}
}

func TestDwells(t *testing.T) {
	rows := []Dwell{
		{From: 0, To: 1, Replicate: 4, Time: 90, Events: 1000},
		{From: 1, To: Censored, Ending: 1, Replicate: math.MaxInt64, Time: 9, Events: 5},
		{From: 1, To: Elsewhere, Route: 1, Ending: 2, Time: 4.5},
	}
	fill := func(f *Folder) error {
		d, err := NewDwells(f, []string{"low", "high"}, []string{"runs", "langevin"}, []string{"flipped", "horizon", "absorbed"})
		if err != nil {
			return err
		}
		for _, r := range rows {
			if err := d.Append(r); err != nil {
				return err
			}
		}
		return d.Close()
	}
	columns := []string{"from", "to", "route", "ending", "replicate", "time", "generations", "events", "flipped"}
	b, r := stored(t, marsh(), "dwells", fill)
	expect(t, show(b, 0, columns...), "low high runs flipped 4 90 2 1000 true")
	expect(t, show(b, 1, columns...), "high censored runs horizon 9223372036854775807 9 0.2 5 false")
	expect(t, show(b, 2, columns...), "high elsewhere langevin absorbed 0 4.5 0.1 0 true")
	checkColumns(t, r, columns, map[string]string{"time": "min", "generations": "generations"})
	meta := r.Metadata()
	for key, want := range map[string]string{
		"table": "dwells", "design": marsh().Design, "design_sha256": designDigest, "seed": "9223372036854775813",
		"version": "0.1.0", "command": marsh().Command, "time_unit": "min", "generation": "45", "copies": "100",
		"format_version": "1", "program": "holdfast", "title": "Marsh-sensor latch",
	} {
		if meta[key] != want {
			t.Errorf("metadata %s is %q, want %q", key, meta[key], want)
		}
	}
	// Without a generation there is neither the column nor the key.
	p := marsh()
	p.Generation = 0
	_, r = stored(t, p, "dwells", fill)
	if _, ok := r.Metadata()["generation"]; ok || len(r.Columns()) != len(columns)-1 {
		t.Errorf("without a generation: %v", r.Columns())
	}
}

func TestDwellMistakes(t *testing.T) {
	for _, d := range []Dwell{
		{From: 2},
		{From: -1},
		{To: 2},
		{To: -3},
		{Route: 1},
		{Ending: 1},
		{Ending: -1},
		{Replicate: math.MaxInt64 + 1},
		{Time: math.NaN()},
	} {
		f, err := Create(t.TempDir(), marsh())
		if err != nil {
			t.Fatal(err)
		}
		dwells, err := NewDwells(f, []string{"low", "high"}, []string{"runs"}, []string{"flipped"})
		if err != nil {
			t.Fatal(err)
		}
		if dwells.Append(d) == nil || f.Finish(Outcome{}) == nil {
			t.Errorf("%+v is taken", d)
		}
	}
	f, err := Create(t.TempDir(), marsh())
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abandon()
	if _, err := NewDwells(f, []string{"low", "censored"}, []string{"runs"}, []string{"flipped"}); err == nil {
		t.Error("a state may be called censored")
	}
	if err := WriteRates(f, []string{"any"}, nil); err == nil {
		t.Error("a state may be called any")
	}
}

func sampleRates() []Rate {
	hold := func(a, b float64) []HoldChance {
		return []HoldChance{{10, Range{a, a - 0.125, a + 0.125}, "constant rate"}, {0.5, Range{b, 0, 1}, "observed survival"}}
	}
	return []Rate{
		{
			From: 0, To: 1, Route: "runs", Interval: "exact", Mean: 90, Low: 80, High: 101, StandardError: 5, Flips: 300, Dwells: 300, Exposure: 27000,
			PerGeneration: Range{0.5, 0.25, 0.75}, Hold: hold(0.5, 0.25),
		},
		{
			From: 1, To: Any, Route: "runs", Interval: "no flip seen", Mean: math.Inf(1), Low: 50, High: math.Inf(1), StandardError: math.NaN(), Dwells: 3, Exposure: 200,
			PerGeneration: Range{0, 0, 0.5}, Hold: hold(0.75, 0.5),
		},
		{
			From: 1, To: Elsewhere, Route: "lattice", Interval: "error bound", Never: true, Mean: math.NaN(), Low: math.NaN(), High: math.NaN(), StandardError: math.NaN(),
			Flips: -1, Dwells: -1, Exposure: math.NaN(), PerGeneration: Absent(), Hold: hold(0.5, 0.5),
		},
	}
}

func TestRates(t *testing.T) {
	columns := []string{"from", "to", "route", "never", "mean", "low", "high", "standard_error", "interval", "flips", "dwells", "exposure"}
	generational := []string{
		"per_generation", "per_generation_low", "per_generation_high",
		"hold_10", "hold_10_low", "hold_10_high", "hold_10_source", "hold_0_5", "hold_0_5_low", "hold_0_5_high", "hold_0_5_source",
	}
	b, r := stored(t, marsh(), "rates", func(f *Folder) error { return WriteRates(f, []string{"low", "high"}, sampleRates()) })
	expect(t, show(b, 0, columns...), "low high runs false 90 80 101 5 exact 300 300 27000")
	expect(t, show(b, 1, columns...), "high any runs false ∅ 50 +Inf ∅ no flip seen 0 3 200")
	expect(t, show(b, 2, columns...), "high elsewhere lattice true ∅ ∅ ∅ ∅ error bound ∅ ∅ ∅")
	expect(t, show(b, 0, generational...), "0.5 0.25 0.75 0.5 0.375 0.625 constant rate 0.25 0 1 observed survival")
	expect(t, show(b, 2, generational...), "∅ ∅ ∅ 0.5 0.375 0.625 constant rate 0.5 0 1 observed survival")
	checkColumns(t, r, append(columns, generational...), map[string]string{"mean": "min", "exposure": "min", "per_generation": "1/generation", "hold_10": "1"})
	p := marsh()
	p.Generation = 0
	_, r = stored(t, p, "rates", func(f *Folder) error { return WriteRates(f, []string{"low", "high"}, sampleRates()) })
	checkColumns(t, r, columns, nil)
}

func TestRateMistakes(t *testing.T) {
	for _, change := range []func([]Rate){
		func(r []Rate) { r[0].From = 2 },
		func(r []Rate) { r[0].To = 2 },
		func(r []Rate) { r[0].To = Censored },
		func(r []Rate) { r[1].Hold = nil },
		func(r []Rate) { r[1].Hold[0].Generations = 11 },
	} {
		f, err := Create(t.TempDir(), marsh())
		if err != nil {
			t.Fatal(err)
		}
		rates := sampleRates()
		change(rates)
		if WriteRates(f, []string{"low", "high"}, rates) == nil {
			t.Errorf("%+v is taken", rates)
		}
		f.Abandon()
	}
}

func TestPaths(t *testing.T) {
	b, r := stored(t, marsh(), "paths", func(f *Folder) error {
		p, err := NewPaths(f, []string{"mrna", "time", "time_count"}, []string{"low", "high"})
		if err != nil {
			return err
		}
		if err := p.Append(3, 0, -1, []int64{1, 2, 3}); err != nil {
			return err
		}
		if err := p.Append(3, 45, 1, []int64{0, 1 << 40, 5}); err != nil {
			return err
		}
		return p.Close()
	})
	columns := []string{"run", "time", "generations", "state", "mrna", "time_count_count", "time_count"}
	expect(t, show(b, 0, columns...), "3 0 0 ∅ 1 2 3")
	expect(t, show(b, 1, columns...), "3 45 1 high 0 1099511627776 5")
	checkColumns(t, r, columns, map[string]string{"time": "min", "mrna": "molecules"})
	if _, err := r.Next(); err != io.EOF {
		t.Errorf("after the only batch: %v", err)
	}
}

func TestPathMistakes(t *testing.T) {
	f, err := Create(t.TempDir(), marsh())
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abandon()
	p, err := NewPaths(f, []string{"a", "b"}, nil)
	if err != nil {
		t.Fatal(err)
	}
	if err := p.Append(0, 0, -1, []int64{1}); err == nil || !strings.Contains(err.Error(), "1 counts for 2 species") {
		t.Errorf("one count for two species: %v", err)
	}
}

func TestBatchMistakes(t *testing.T) {
	b, _ := stored(t, marsh(), "states", func(f *Folder) error {
		return WriteStates(f, []string{"a"}, []State{{Name: "low", Type: "stable", Amounts: []float64{1}, Molecules: []float64{1}}})
	})
	if _, err := b.Ints("amount"); err == nil {
		t.Error("numbers are given as whole ones")
	}
	if _, err := b.Floats("absent"); err == nil || !b.Null("absent", 0) {
		t.Error("a column that is not there is given")
	}
	for _, err := range []error{second(b.Flags("state")), second(b.Labels("amount")), second(b.Texts("amount")), second(b.Floats("state"))} {
		if err == nil {
			t.Error("a column is given as another kind")
		}
	}
}

func second[T any](_ T, err error) error { return err }
