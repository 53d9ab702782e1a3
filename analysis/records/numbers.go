package records

import (
	"fmt"
	"math"
	"os"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
)

// Numbers is a table of numbers from any program: a column of values for each name.
type Numbers struct {
	Names   []string
	Columns [][]float64
}

// ReadNumbers reads an Arrow IPC file of numbers alone, of any width, as other programs
// write them, up to so many rows. A column of anything else, a row without a value and
// a file of more rows are errors; they name the column and the row, from 1.
func ReadNumbers(path string, most int) (n *Numbers, err error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer func() { _ = f.Close() }() // opened for reading
	defer func() {
		if r := recover(); r != nil { // the library panics on some damaged files
			n, err = nil, fmt.Errorf("%s cannot be read as an Arrow file: %v", path, r)
		}
	}()
	r, err := ipc.NewFileReader(f)
	if err != nil {
		return nil, fmt.Errorf("%s cannot be read as an Arrow file: %w", path, err)
	}
	defer func() { _ = r.Close() }()
	n = &Numbers{}
	for _, field := range r.Schema().Fields() {
		n.Names = append(n.Names, field.Name)
	}
	n.Columns = make([][]float64, len(n.Names))
	for i := range r.NumRecords() {
		batch, err := r.RecordBatch(i)
		if err == nil {
			err = n.take(batch, most)
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %w", path, err)
		}
	}
	return n, nil
}

// take appends the rows of a batch.
func (n *Numbers) take(batch arrow.RecordBatch, most int) error {
	for i, name := range n.Names {
		column := batch.Column(i)
		before := len(n.Columns[i])
		if before+column.Len() > most {
			return fmt.Errorf("there are more than %d rows", most)
		}
		value := valueOf(column)
		if value == nil {
			return fmt.Errorf("column %s holds %v, not numbers", name, column.DataType())
		}
		for row := range column.Len() {
			if column.IsNull(row) {
				return fmt.Errorf("row %d, column %s: there is no value", before+row+1, name)
			}
			n.Columns[i] = append(n.Columns[i], value(row))
		}
	}
	return nil
}

// numeric is an array of numbers of one width.
type numeric[T int8 | int16 | int32 | int64 | uint8 | uint16 | uint32 | uint64 | float32 | float64] interface{ Value(int) T }

func floats[T int8 | int16 | int32 | int64 | uint8 | uint16 | uint32 | uint64 | float32 | float64](a numeric[T]) func(int) float64 {
	return func(row int) float64 { return float64(a.Value(row)) }
}

// valueOf gives the values of a column of numbers; nil for any other. Whole numbers
// beyond 2⁵³ are rounded.
func valueOf(a arrow.Array) func(int) float64 {
	switch a := a.(type) {
	case *array.Float64:
		return a.Value
	case *array.Float32:
		return func(row int) float64 { return widen(a.Value(row)) }
	case *array.Int64:
		return floats(a)
	case *array.Int32:
		return floats(a)
	case *array.Int16:
		return floats(a)
	case *array.Int8:
		return floats(a)
	case *array.Uint64:
		return floats(a)
	case *array.Uint32:
		return floats(a)
	case *array.Uint16:
		return floats(a)
	case *array.Uint8:
		return floats(a)
	}
	return nil
}

// widen gives the number that a single-precision one was written for, to seven digits:
// 0.45 and not 0.449999988.
func widen(v float32) float64 {
	w := float64(v)
	if w == 0 || math.IsInf(w, 0) || math.IsNaN(w) {
		return w
	}
	var near float64
	if _, err := fmt.Sscan(fmt.Sprintf("%.7g", w), &near); err == nil && float32(near) == v {
		return near
	}
	return w
}
