package sizing_test

import (
	"bytes"
	"context"
	"encoding/json"
	"path/filepath"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/analysis/sizing"
	"holdfast/model"
)

// demo gives a demo design at a copy number.
func demo(t testing.TB, name string, copies float64) *model.Network {
	t.Helper()
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", name+".toml"))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func specs(t testing.TB, n *model.Network, texts ...string) []sizing.Spec {
	t.Helper()
	out, err := sizing.ParseSpecs(texts, n)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func size(t testing.TB, n *model.Network, o sizing.Options, texts ...string) *sizing.Report {
	t.Helper()
	o.Specs = specs(t, n, texts...)
	r, err := sizing.Run(context.Background(), n, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// The smallest latch whose high state holds 6 generations, against direct solutions of
// the master equation at that size and at one less.
func TestSmallestLatch(t *testing.T) {
	n := demo(t, "latch", 20)
	r := size(t, n, sizing.Options{}, "high >= 6 generations")
	at := float64(r.Answer.Setting)
	if got := latticeMean(t, n, at, "high"); got < 6*45 {
		t.Errorf("%v copies: %v min, want 270 or more", at, got)
	}
	if got := latticeMean(t, n, at-1, "high"); got >= 6*45 || float64(r.Answer.Short) != at-1 {
		t.Errorf("%v copies: %v min, want less than 270", at-1, got)
	}
	if e := r.At(r.Answer.Setting); e.Checks[0].Route != hold.Lattice || e.Verdict != sizing.Meets {
		t.Errorf("%+v", e)
	}
}

// The same answer, to the last digit, whatever the number of threads.
func TestThreadsChangeNothing(t *testing.T) {
	n := demo(t, "latch", 10)
	var want []byte
	for _, threads := range []int{1, 2, 5} {
		o := sizing.Options{Hold: hold.Options{Seed: 4, Route: hold.Runs, Precision: 0.3, Threads: threads}, Knob: sizing.Knob{Name: "copies", Low: 5, High: 30}}
		got, err := json.Marshal(size(t, n, o, "high >= 80 min"))
		if err != nil {
			t.Fatal(err)
		}
		if want == nil {
			want = got
		}
		if !bytes.Equal(got, want) {
			t.Errorf("%d threads:\n%s\nwant\n%s", threads, got, want)
		}
	}
}

// The table sizing has a row for each evaluation and check.
func TestRecords(t *testing.T) {
	n := demo(t, "latch", 10)
	folder := filepath.Join(t.TempDir(), "out")
	r := size(t, n, sizing.Options{Folder: folder, Command: "x", Knob: sizing.Knob{Name: "a", Low: 0.3, High: 0.6}}, "every >= 60 min", "high holds 10 min with chance 0.5")
	f, err := records.Open(folder)
	if err != nil {
		t.Fatal(err)
	}
	rows := int64(0)
	for i := range r.Evaluations {
		rows += int64(len(r.Evaluations[i].Checks))
	}
	found := false
	for _, table := range f.Manifest.Tables {
		if table.Name == "sizing" {
			found = table.Rows == rows
		}
	}
	if !found {
		t.Errorf("tables %+v, want sizing with %d rows", f.Manifest.Tables, rows)
	}
}
