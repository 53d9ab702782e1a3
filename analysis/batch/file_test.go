package batch_test

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"

	"holdfast/analysis/batch"
)

func writeFile(t *testing.T, name, text string) batch.File {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	f, err := batch.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return *f
}

// arrowFile writes an Arrow file as another program may: compressed, in two batches, with
// whole numbers and single-precision ones.
func arrowFile(t *testing.T, a *float32) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "points.arrow")
	f, err := os.Create(path)
	if err != nil {
		t.Fatal(err)
	}
	schema := arrow.NewSchema([]arrow.Field{
		{Name: "copies", Type: arrow.PrimitiveTypes.Uint16},
		{Name: "a", Type: arrow.PrimitiveTypes.Float32, Nullable: true},
		{Name: "b", Type: arrow.PrimitiveTypes.Float64},
	}, nil)
	w, err := ipc.NewFileWriter(f, ipc.WithSchema(schema), ipc.WithLZ4())
	if err != nil {
		t.Fatal(err)
	}
	for i := range 2 {
		b := array.NewRecordBuilder(memory.DefaultAllocator, schema)
		b.Field(0).(*array.Uint16Builder).Append(uint16(10 * (i + 1)))
		if a == nil && i == 1 {
			b.Field(1).AppendNull()
		} else if a != nil {
			b.Field(1).(*array.Float32Builder).Append(*a)
		} else {
			b.Field(1).(*array.Float32Builder).Append(0.4)
		}
		b.Field(2).(*array.Float64Builder).Append(0.1)
		if err := w.Write(b.NewRecordBatch()); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	if err := f.Close(); err != nil {
		t.Fatal(err)
	}
	return path
}

func TestArrowPoints(t *testing.T) {
	a := float32(0.45)
	f, err := batch.ReadFile(arrowFile(t, &a))
	if err != nil {
		t.Fatal(err)
	}
	p := pointsOf(t, f, nil, 0)
	if p.Len() != 2 {
		t.Fatalf("%d points", p.Len())
	}
	if at := p.At(1); at.Copies != 20 || at.Values[1] != 0.45 || at.Values[2] != 0.1 {
		t.Errorf("point 2: %+v", at)
	}
}

func TestArrowPointsRefused(t *testing.T) {
	negative := float32(-1)
	damaged := filepath.Join(t.TempDir(), "damaged.arrow")
	if err := os.WriteFile(damaged, []byte("ARROW1 and no more"), 0o666); err != nil {
		t.Fatal(err)
	}
	states := filepath.Join(whole(t), "states.arrow")
	for path, want := range map[string]string{
		arrowFile(t, nil):       ": row 2, column a: there is no value",
		arrowFile(t, &negative): ", row 1: a = -1: a constant must be a finite number, not below 0",
		states:                  ": column state holds dictionary<values=utf8, indices=int16, ordered=false>, not numbers",
	} {
		if _, err := batch.ReadFile(path); err == nil || err.Error() != path+want {
			t.Errorf("got %v, want %s%s", err, path, want)
		}
	}
	if _, err := batch.ReadFile(damaged); err == nil {
		t.Error("a damaged file was read")
	}
}

// What is neither text nor an Arrow file is told by what it is not, without its bytes; old
// line ends have their own word.
func TestPointsOfOtherKinds(t *testing.T) {
	for name, c := range map[string]struct{ bytes, want string }{
		"parquet":     {"PAR1\x15\x04\x15 copies", " is neither a CSV file (plain text in UTF-8) nor an Arrow IPC file; save it as one of them"},
		"stream":      {"\xff\xff\xff\xff\x98\x01\x00\x00", " is neither a CSV file (plain text in UTF-8) nor an Arrow IPC file; save it as one of them"},
		"utf16.csv":   {"\xff\xfec\x00o\x00p\x00i\x00e\x00s\x00", " is neither a CSV file (plain text in UTF-8) nor an Arrow IPC file; save it as one of them"},
		"old.csv":     {"copies,a\r8,0.4\r", ": its lines end in carriage returns alone; save it with line feeds"},
		"unknown.csv": {"größe\n" + strings.Repeat("1\n", 600), ""},
		"cut.csv":     {strings.Repeat("a", 511) + "ö\n1\n", ""}, // the first 512 bytes end within a character
	} {
		path := filepath.Join(t.TempDir(), name)
		if err := os.WriteFile(path, []byte(c.bytes), 0o666); err != nil {
			t.Fatal(err)
		}
		_, err := batch.ReadFile(path)
		if got := fmt.Sprint(err); c.want == "" && err != nil || c.want != "" && got != path+c.want {
			t.Errorf("%s: got %v, want %q", name, err, c.want)
		}
	}
}
