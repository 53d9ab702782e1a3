package records

import (
	"fmt"
	"io"
	"os"
	"path/filepath"

	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

// A Reader reads one table, a batch at a time. It must be closed.
type Reader struct {
	file    *os.File
	reader  *ipc.FileReader
	columns []Column
	next    int
}

// Table opens a table of the record by its name.
func (r *Record) Table(name string) (*Reader, error) {
	for _, t := range r.Manifest.Tables {
		if t.Name == name {
			return openTable(filepath.Join(r.Dir, t.File), memory.DefaultAllocator)
		}
	}
	return nil, fmt.Errorf("folder %s has no table %q", r.Dir, name)
}

func openTable(path string, mem memory.Allocator) (*Reader, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	r := &Reader{file: f}
	r.reader, err = ipc.NewFileReader(f, ipc.WithAllocator(mem))
	if err != nil {
		_ = f.Close() // opened for reading
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	for _, field := range r.reader.Schema().Fields() {
		c, err := columnOf(field)
		if err != nil {
			_ = r.Close() // opened for reading
			return nil, fmt.Errorf("%s: %w", path, err)
		}
		r.columns = append(r.columns, c)
	}
	return r, nil
}

// Columns describes the columns, in order; the labels are in the batches.
func (r *Reader) Columns() []Column { return r.columns }

// Metadata gives the provenance in the schema, by key.
func (r *Reader) Metadata() map[string]string {
	return r.reader.Schema().Metadata().ToMap()
}

// Next gives the next batch, valid until the next call, and io.EOF after the last one.
func (r *Reader) Next() (*Batch, error) {
	if r.next >= r.reader.NumRecords() {
		return nil, io.EOF
	}
	record, err := r.reader.RecordBatch(r.next)
	if err != nil {
		return nil, fmt.Errorf("%s, batch %d: %w", r.file.Name(), r.next, err)
	}
	r.next++
	return &Batch{record: record, columns: r.columns}, nil
}

// Close frees the table.
func (r *Reader) Close() error {
	err := r.reader.Close()
	if e := r.file.Close(); err == nil {
		err = e
	}
	return err
}
