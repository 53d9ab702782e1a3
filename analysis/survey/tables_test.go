package survey

import (
	"errors"
	"io"
	"math"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/internal/zoo"
)

// columns reads whole columns of numbers of a recorded table.
func columns(t *testing.T, dir, table string, names ...string) [][]float64 {
	t.Helper()
	record, err := records.Open(dir)
	if err != nil {
		t.Fatal(err)
	}
	r, err := record.Table(table)
	if err != nil {
		t.Fatal(err)
	}
	defer r.Close()
	for _, c := range r.Columns() {
		if c.Note == "" {
			t.Errorf("%s: column %s has no note", table, c.Name)
		}
	}
	out := make([][]float64, len(names))
	for {
		b, err := r.Next()
		if errors.Is(err, io.EOF) {
			return out
		}
		if err != nil {
			t.Fatal(err)
		}
		for i, name := range names {
			v, err := b.Floats(name)
			if err != nil {
				t.Fatal(err)
			}
			out[i] = append(out[i], v...)
		}
	}
}

// same tells whether a column holds the report's values; null stands for what is not
// finite.
func same(t *testing.T, name string, got []float64, want []hold.Value) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%s: %d rows, want %d", name, len(got), len(want))
	}
	for i, v := range got {
		if w := finite(want[i]); v != w && !(math.IsNaN(v) && math.IsNaN(w)) {
			t.Fatalf("%s: row %d is %v, want %v", name, i, v, w)
		}
	}
}

// The tables of one knob hold the report, point for point, more of them near a fold
// than are printed, with the knob monotone between special points.
func TestTablesOfOneKnob(t *testing.T) {
	dir := t.TempDir()
	o := Options{Knobs: []Knob{{"a", 0.2, 0.8}}, Folder: dir, Command: "holdfast map latch"}
	r, err := Run(t.Context(), zoo.Latch(100), o)
	if err != nil {
		t.Fatal(err)
	}
	got := columns(t, dir, "branches", "knob", "amount_protein", "sd_protein", "slow_rate", "correlation_time", "eigenvalue_real")
	want := make([][]hold.Value, len(got))
	protein := 1
	for _, b := range r.Diagram.Branches {
		if len(b.Points) < 100 {
			t.Errorf("%d points", len(b.Points))
		}
		for i, p := range b.Points {
			for k, v := range []hold.Value{p.Knob, p.Amounts[protein], p.Deviation[protein], p.SlowRate, p.CorrelationTime, hold.Value(p.Eigenvalues[0][0])} {
				want[k] = append(want[k], v)
			}
			if i > 0 && i+1 < len(b.Points) && p.Mark == "" && !((p.Knob-b.Points[i-1].Knob)*(b.Points[i+1].Knob-p.Knob) > 0) {
				t.Errorf("point %d at %v lies between %v and %v", i, p.Knob, b.Points[i-1].Knob, b.Points[i+1].Knob)
			}
		}
	}
	for k, name := range []string{"knob", "amount_protein", "sd_protein", "slow_rate", "correlation_time", "eigenvalue_real"} {
		same(t, name, got[k], want[k])
	}
	folds := columns(t, dir, "folds", "knob", "rate_coefficient")
	for i, s := range r.Diagram.Specials {
		if folds[0][i] != float64(s.Knob) || folds[1][i] != float64(s.RateCoefficient) {
			t.Errorf("fold %d: %v", i, folds)
		}
	}
	curve := columns(t, dir, "separatrix", "amount_mrna")
	if len(curve[0]) != len(r.Separatrices[0].Points) {
		t.Errorf("separatrix of %d rows", len(curve[0]))
	}
	if rows := columns(t, dir, "states", "amount")[0]; len(rows) != 6 {
		t.Errorf("states of %d rows", len(rows))
	}
}

// The table of two knobs holds the curve with its cusp.
func TestTableOfTwoKnobs(t *testing.T) {
	dir := t.TempDir()
	o := Options{Knobs: []Knob{{"r", 0.2, 0.8}, {"s", 0.001, 0.2}}, Folder: dir, Command: "holdfast map leaky"}
	r, err := Run(t.Context(), zoo.LeakyActivator(0.5, 0.03, 100), o)
	if err != nil {
		t.Fatal(err)
	}
	var first, second []hold.Value
	for _, c := range r.FoldDiagram.Curves {
		for _, p := range c.Points {
			first, second = append(first, p.First), append(second, p.Second)
		}
	}
	got := columns(t, dir, "fold_curve", "first_knob", "second_knob")
	same(t, "first_knob", got[0], first)
	same(t, "second_knob", got[1], second)
	if record, err := records.Open(dir); err != nil || len(record.Manifest.Tables) != 2 {
		t.Errorf("%v: tables %v", err, record.Manifest.Tables)
	}
}

// A folder that is another's is refused, and the report is there nonetheless.
func TestFolderRefused(t *testing.T) {
	dir := t.TempDir()
	for i, want := range []bool{true, false} {
		o := Options{Folder: dir, Command: []string{"holdfast map one", "holdfast map other"}[i]}
		r, err := Run(t.Context(), zoo.Latch(100), o)
		if r == nil || (err == nil) != want {
			t.Errorf("folder taken: %v; error %v", want, err)
		}
	}
}
