package records

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

func marsh() Provenance {
	return Provenance{
		Title: "Marsh-sensor latch", Design: "title = \"Marsh-sensor latch\" # invented\n", Seed: 1<<63 + 5,
		Version: "0.1.0", Command: "holdfast hold latch.toml --seed 7", TimeUnit: "min", Generation: 45, Copies: 100,
	}
}

// everything is a table with a column of each kind, plain and nullable.
type everything struct {
	*Table
	whole, wholeNull   IntColumn
	number, numberNull FloatColumn
	flag, flagNull     FlagColumn
	label, labelNull   LabelColumn
	text, textNull     TextColumn
}

func newEverything() *everything {
	t := &everything{Table: NewTable("everything")}
	names := []string{"low", "middle", "höch"}
	t.whole = t.AddInt("whole", "molecules", "")
	t.number = t.AddFloat("number", "min", "a time")
	t.flag = t.AddFlag("flag", "")
	t.label = t.AddLabel("label", names, "")
	t.text = t.AddText("text", "")
	t.wholeNull = t.AddInt("whole_null", "", "")
	t.Optional()
	t.numberNull = t.AddFloat("number_null", "", "")
	t.Optional()
	t.flagNull = t.AddFlag("flag_null", "")
	t.Optional()
	t.labelNull = t.AddLabel("label_null", names, "")
	t.Optional()
	t.textNull = t.AddText("text_null", "")
	t.Optional()
	return t
}

func (t *everything) write(w *Writer, rows int) {
	for i := range rows {
		w.Text(t.text, fmt.Sprint("row ", i))
		w.Int(t.whole, int64(i)-3)
		w.Float(t.number, 1/(1+float64(i)))
		w.Flag(t.flag, i%3 == 0)
		w.Label(t.label, i%3)
		w.Float(t.numberNull, math.NaN())
		w.Label(t.labelNull, i%4-1)
		if i%5 != 0 {
			w.Int(t.wholeNull, int64(i))
			w.Float(t.numberNull, float64(i))
			w.Flag(t.flagNull, i%2 == 0)
			w.Text(t.textNull, "ä")
		}
		_ = w.Next()
	}
}

func checkedFolder(t *testing.T, dir string) (*Folder, *memory.CheckedAllocator) {
	t.Helper()
	mem := memory.NewCheckedAllocator(memory.NewGoAllocator())
	f, err := create(disk{}, mem, dir, marsh())
	if err != nil {
		t.Fatal(err)
	}
	return f, mem
}

// Every value comes back as the Arrow library itself reads it, over several batches,
// and all memory is given back.
func TestRoundTrip(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	f, mem := checkedFolder(t, dir)
	defer mem.AssertSize(t, 0)
	table := newEverything()
	w, err := f.Table(table.Table)
	if err != nil {
		t.Fatal(err)
	}
	rows := 2*w.room + 77
	table.write(w, rows)
	if err := f.Finish(Outcome{}); err != nil {
		t.Fatal(err)
	}
	data, err := os.ReadFile(filepath.Join(dir, "everything.arrow"))
	if err != nil {
		t.Fatal(err)
	}
	// Arrow columnar format 1.x, IPC file format: the magic at both ends.
	if !bytes.HasPrefix(data, []byte("ARROW1\x00\x00")) || !bytes.HasSuffix(data, []byte("ARROW1")) {
		t.Error("no magic at the ends of the file")
	}
	r, err := ipc.NewFileReader(bytes.NewReader(data), ipc.WithAllocator(mem))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = r.Close() }()
	row := 0
	for {
		batch, err := r.Read()
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		for i := range int(batch.NumRows()) {
			if got, want := render(batch, i), expected(row); got != want {
				t.Fatalf("row %d: %s, want %s", row, got, want)
			}
			row++
		}
	}
	if row != rows || r.NumRecords() != 3 {
		t.Errorf("%d rows in %d batches, want %d in 3", row, r.NumRecords(), rows)
	}
}

func render(batch arrow.RecordBatch, i int) string {
	var out []string
	for c := range int(batch.NumCols()) {
		column := batch.Column(c)
		if d, ok := column.(*array.Dictionary); ok && !d.IsNull(i) {
			out = append(out, d.Dictionary().(*array.String).Value(d.GetValueIndex(i)))
			continue
		}
		out = append(out, column.ValueStr(i))
	}
	return strings.Join(out, "|")
}

func expected(i int) string {
	names := []string{"low", "middle", "höch"}
	out := []string{fmt.Sprint(i - 3), fmt.Sprint(1 / (1 + float64(i))), fmt.Sprint(i%3 == 0), names[i%3], fmt.Sprint("row ", i)}
	null := array.NullValueStr
	if i%5 == 0 {
		out = append(out, null, null, null)
	} else {
		out = append(out, fmt.Sprint(i), fmt.Sprint(float64(i)), fmt.Sprint(i%2 == 0))
	}
	if i%4 == 0 {
		out = append(out, null)
	} else {
		out = append(out, names[i%4-1])
	}
	if i%5 == 0 {
		return strings.Join(append(out, null), "|")
	}
	return strings.Join(append(out, "ä"), "|")
}

func TestSameBytes(t *testing.T) {
	var files [2]map[string]string
	for k := range files {
		dir := filepath.Join(t.TempDir(), fmt.Sprint("run", k))
		f, mem := checkedFolder(t, dir)
		table := newEverything()
		w, err := f.Table(table.Table)
		if err != nil {
			t.Fatal(err)
		}
		table.write(w, 3000)
		if err := f.Finish(Outcome{Endings: map[string]int64{"b": 2, "a": 1}, Warnings: []string{"<odd>"}}); err != nil {
			t.Fatal(err)
		}
		mem.AssertSize(t, 0)
		files[k] = contents(t, dir)
	}
	for name, data := range files[0] {
		if files[1][name] != data {
			t.Errorf("%s differs between two runs alike", name)
		}
	}
}

func contents(t *testing.T, dir string) map[string]string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	out := map[string]string{}
	for _, e := range entries {
		data, err := os.ReadFile(filepath.Join(dir, e.Name()))
		if err != nil {
			t.Fatal(err)
		}
		out[e.Name()] = string(data)
	}
	return out
}

func TestEmptyTable(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "run")
	f, mem := checkedFolder(t, dir)
	defer mem.AssertSize(t, 0)
	if _, err := f.Table(newEverything().Table); err != nil {
		t.Fatal(err)
	}
	if err := f.Finish(Outcome{}); err != nil {
		t.Fatal(err)
	}
	r, err := openTable(filepath.Join(dir, "everything.arrow"), mem)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = r.Close() }()
	batch, err := r.Next()
	if err != nil || batch.Rows() != 0 {
		t.Fatalf("%v, %v: want one empty batch", batch, err)
	}
	if _, err := r.Next(); err != io.EOF {
		t.Errorf("after it: %v, want EOF", err)
	}
}

// A row costs no allocation: only a batch does.
func TestNoAllocationPerRow(t *testing.T) {
	f, err := Create(filepath.Join(t.TempDir(), "run"), marsh())
	if err != nil {
		t.Fatal(err)
	}
	defer f.Abandon()
	d, err := NewDwells(f, []string{"low", "high"}, []string{"runs"}, []string{"flipped"})
	if err != nil {
		t.Fatal(err)
	}
	const rows = 200_000
	perRow := testing.AllocsPerRun(1, func() {
		for i := range rows {
			if err := d.Append(Dwell{To: 1, Replicate: uint64(i), Time: 1}); err != nil {
				t.Fatal(err)
			}
		}
	}) / rows
	if perRow > 0.01 { // about 100 a batch of 65,536
		t.Errorf("%v allocations a row", perRow)
	}
}

func TestWideTablesHaveSmallerBatches(t *testing.T) {
	for _, c := range []struct{ columns, rows int }{{1, 65536}, {8, 65536}, {9, 32768}, {32, 16384}, {1000, 1024}} {
		if got := roomFor(Table{Columns: make([]Column, c.columns)}); got != c.rows {
			t.Errorf("%d columns: %d rows a batch, want %d", c.columns, got, c.rows)
		}
	}
}

func TestRowMistakes(t *testing.T) {
	for _, c := range []struct {
		words string
		make  func(*everything, *Writer)
	}{
		{"text was not set", func(e *everything, w *Writer) {
			w.Int(e.whole, 1)
			w.Float(e.number, 1)
			w.Flag(e.flag, true)
			w.Label(e.label, 0)
		}},
		{"number is not a number", func(e *everything, w *Writer) { w.Float(e.number, math.NaN()) }},
		{"no label 3; there are 3", func(e *everything, w *Writer) { w.Label(e.label, 3) }},
		{"no label -1", func(e *everything, w *Writer) { w.Label(e.label, -1) }},
		{"no label 9", func(e *everything, w *Writer) { w.Label(e.labelNull, 9) }},
		{"not UTF-8", func(e *everything, w *Writer) { w.Text(e.text, "\xff") }},
		{"set twice", func(e *everything, w *Writer) { w.Text(e.text, "a"); w.Text(e.text, "b") }},
		{"handle 0", func(_ *everything, w *Writer) { w.Float(0, 1) }},
		{"handle 99", func(_ *everything, w *Writer) { w.Int(99, 1) }},
		{"handle -1", func(_ *everything, w *Writer) { w.Flag(-1, true) }},
	} {
		dir := filepath.Join(t.TempDir(), "run")
		f, mem := checkedFolder(t, dir)
		table := newEverything()
		w, err := f.Table(table.Table)
		if err != nil {
			t.Fatal(err)
		}
		table.write(w, 2)
		c.make(table, w)
		first := w.Next()
		if first == nil || !strings.Contains(first.Error(), c.words) || !strings.Contains(first.Error(), "row 2") {
			t.Errorf("error %v lacks %q or the row", first, c.words)
		}
		table.write(w, 1)
		if again, closed, end := w.Next(), w.Close(), f.Finish(Outcome{}); again != first || closed != first || end != first {
			t.Errorf("%q does not stay: then %v, %v, %v", first, again, closed, end)
		}
		if _, err := os.Stat(dir); !os.IsNotExist(err) {
			t.Errorf("%s: something was left behind: %v", c.words, contents(t, dir))
		}
		mem.AssertSize(t, 0)
	}
}

func TestTableMistakes(t *testing.T) {
	f, _ := checkedFolder(t, t.TempDir())
	defer f.Abandon()
	column := func(c ...Column) *Table { return &Table{Name: "a", Columns: c} }
	for _, c := range []struct {
		table *Table
		words string
	}{
		{&Table{Name: "Folds", Columns: []Column{{Name: "x"}}}, "lower_snake_case"},
		{&Table{Name: "../a", Columns: []Column{{Name: "x"}}}, "lower_snake_case"},
		{&Table{Name: "a"}, "no columns"},
		{column(Column{Name: "x"}, Column{Name: "x"}), "column 1"},
		{column(Column{}), "column 0"},
		{column(Column{Name: "x", Kind: 9}), "kind 9"},
		{column(Column{Name: "x", Kind: Label}), "0 labels"},
		{column(Column{Name: "x", Kind: Label, Labels: make([]string, 40000)}), "40000 labels"},
		{column(Column{Name: "x", Kind: Label, Labels: []string{"a", "a"}}), "twice"},
	} {
		if _, err := f.Table(c.table); err == nil || !strings.Contains(err.Error(), c.words) {
			t.Errorf("%+v: error %v lacks %q", c.table, err, c.words)
		}
	}
	if _, err := f.Table(newEverything().Table); err != nil {
		t.Error(err)
	}
	if _, err := f.Table(newEverything().Table); err == nil {
		t.Error("the same table can be started twice")
	}
}
