package records

import (
	"fmt"
	"math"
	"unicode/utf8"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

// Limits of one batch.
const (
	batchRows = 1 << 16
	leastRows = 1 << 10
	batchData = 4 << 20 // bytes of plain columns, and of text in one column
)

// A Writer appends rows to one table: a value for each column by its handle, in any
// order, then Next. Its first error stays, is given again by Next and Close, and
// everything after it does nothing. Writers of one folder may be used from different
// goroutines, one writer from one only.
type Writer struct {
	table   Table
	schema  *arrow.Schema
	mem     memory.Allocator
	sink    *sink
	file    *ipc.FileWriter
	columns []*buffer
	room    int // rows a batch
	row     int // rows in the batch so far
	rows    int64
	batches int
	closed  bool
	err     error
}

func newWriter(t Table, p Provenance, s *sink, mem memory.Allocator) (*Writer, error) {
	w := &Writer{table: t, schema: t.schema(p), mem: mem, sink: s, room: roomFor(t)}
	f, err := ipc.NewFileWriter(s, ipc.WithSchema(w.schema), ipc.WithAllocator(mem))
	if err != nil {
		return nil, &WriteError{s.name, "start", err}
	}
	w.file = f
	for _, c := range t.Columns {
		w.columns = append(w.columns, newBuffer(c, w.room, mem))
	}
	return w, nil
}

// roomFor gives the rows of a batch: 65,536, or less for wide rows, a power of two.
func roomFor(t Table) int {
	rows := batchRows
	for rows > leastRows && rows*8*len(t.Columns) > batchData {
		rows /= 2
	}
	return rows
}

func (w *Writer) column(i int, k Kind) *buffer {
	if w.err != nil {
		return nil
	}
	if w.closed || i < 0 || i >= len(w.columns) || w.columns[i].Kind != k {
		w.fail("no %v column has handle %d, or the table is closed", k, i)
		return nil
	}
	return w.columns[i]
}

func (w *Writer) fail(format string, args ...any) {
	if w.err == nil {
		w.err = fmt.Errorf("table %s, row %d: %s", w.table.Name, w.rows, fmt.Sprintf(format, args...))
	}
}

// Int sets a whole number in the current row.
func (w *Writer) Int(c IntColumn, v int64) {
	if b := w.column(int(c), Int64); b != nil {
		b.ints[w.row] = v
		b.mark(w.row)
	}
}

// Float sets a number in the current row. NaN in a nullable column is null, and an
// error in any other.
func (w *Writer) Float(c FloatColumn, v float64) {
	b := w.column(int(c), Float64)
	switch {
	case b == nil:
	case !math.IsNaN(v):
		b.floats[w.row] = v
		b.mark(w.row)
	case !b.Nullable:
		w.fail("%s is not a number", b.Name)
	}
}

// Flag sets a boolean in the current row.
func (w *Writer) Flag(c FlagColumn, v bool) {
	b := w.column(int(c), Flag)
	if b == nil {
		return
	}
	mask := byte(1) << (w.row % 8)
	b.bits[w.row/8] &^= mask
	if v {
		b.bits[w.row/8] |= mask
	}
	b.mark(w.row)
}

// Label sets a name in the current row by its index in the column's labels. A negative
// one in a nullable column is null; any other index out of range is an error.
func (w *Writer) Label(c LabelColumn, index int) {
	b := w.column(int(c), Label)
	switch {
	case b == nil:
	case index >= 0 && index < len(b.Labels):
		b.codes[w.row] = int16(index)
		b.mark(w.row)
	case index >= 0 || !b.Nullable:
		w.fail("%s has no label %d; there are %d", b.Name, index, len(b.Labels))
	}
}

// Text sets a text in the current row, once.
func (w *Writer) Text(c TextColumn, v string) {
	b := w.column(int(c), Text)
	switch {
	case b == nil:
	case !utf8.ValidString(v):
		w.fail("%s is not UTF-8 text", b.Name)
	case b.filled > w.row:
		w.fail("%s was set twice", b.Name)
	case len(b.text)+len(v) > math.MaxInt32:
		w.fail("%s is too long: %d bytes", b.Name, len(v))
	default:
		b.text = append(b.text, v...)
		b.offsets[w.row+1] = int32(len(b.text))
		b.mark(w.row)
	}
}

// Next ends the current row. Columns that were not set are null where they may be,
// and an error where not.
func (w *Writer) Next() error {
	full := w.row+1 == w.room
	for _, b := range w.columns {
		if b.filled <= w.row {
			if !b.Nullable {
				w.fail("%s was not set", b.Name)
			}
			b.null(w.row)
		}
		full = full || len(b.text) >= batchData
	}
	if w.closed {
		w.fail("the table is closed")
	}
	if w.err != nil {
		return w.err
	}
	w.row++
	w.rows++
	if full {
		w.flush()
	}
	return w.err
}

// flush writes the rows so far as a batch.
func (w *Writer) flush() {
	if w.err != nil {
		return
	}
	arrays := make([]arrow.Array, len(w.columns))
	for i, b := range w.columns {
		arrays[i] = b.array(w.row)
	}
	batch := array.NewRecordBatch(w.schema, arrays, int64(w.row))
	for _, a := range arrays {
		a.Release()
	}
	w.keep(w.file.Write(batch))
	batch.Release()
	for _, b := range w.columns {
		b.reset()
	}
	w.row = 0
	w.batches++
}

// keep holds the first error of the file; the library's own writer does not.
func (w *Writer) keep(err error) {
	w.sink.keep("write", err)
	if w.err == nil {
		w.err = w.sink.err
	}
}

// Rows gives the rows appended so far.
func (w *Writer) Rows() int64 { return w.rows }

// Close makes the file whole under its temporary name: Folder.Finish puts it in place.
// After an error the temporary file is gone. Closing twice gives the same result.
func (w *Writer) Close() error {
	if w.closed {
		return w.err
	}
	if w.row > 0 || w.batches == 0 { // an empty table has one empty batch, which carries its labels
		w.flush()
	}
	w.closed = true
	w.keep(w.file.Close())
	w.free()
	if w.err != nil {
		w.sink.abandon()
		return w.err
	}
	w.err = w.sink.finish()
	return w.err
}

// abandon drops the table.
func (w *Writer) abandon() {
	if !w.closed {
		w.closed = true
		w.sink.keep("write", errAbandoned)
		_ = w.file.Close() // releases the dictionaries; the sink takes nothing more
		w.free()
	}
	w.sink.abandon()
}

func (w *Writer) free() {
	for _, b := range w.columns {
		b.release()
	}
}
