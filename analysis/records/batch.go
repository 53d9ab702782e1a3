package records

import (
	"fmt"
	"math"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
)

// A Batch is some rows of a table.
type Batch struct {
	record  arrow.RecordBatch
	columns []Column
}

// Rows gives the number of rows in the batch.
func (b *Batch) Rows() int { return int(b.record.NumRows()) }

func (b *Batch) column(name string, k Kind) (arrow.Array, error) {
	for i, c := range b.columns {
		if c.Name != name {
			continue
		}
		if c.Kind != k {
			return nil, fmt.Errorf("column %s holds a %v, not a %v", name, c.Kind, k)
		}
		return b.record.Column(i), nil
	}
	return nil, fmt.Errorf("there is no column %q", name)
}

// Null tells whether the named column has no value in the row; also where there is no
// such column.
func (b *Batch) Null(name string, row int) bool {
	for i, c := range b.columns {
		if c.Name == name {
			return b.record.Column(i).IsNull(row)
		}
	}
	return true
}

// Ints gives a column of whole numbers, 0 where null. The slice is valid until the next batch.
func (b *Batch) Ints(name string) ([]int64, error) {
	a, err := b.column(name, Int64)
	if err != nil {
		return nil, err
	}
	return a.(*array.Int64).Int64Values(), nil
}

// Floats gives a column of numbers, NaN where null.
func (b *Batch) Floats(name string) ([]float64, error) {
	a, err := b.column(name, Float64)
	if err != nil {
		return nil, err
	}
	out := make([]float64, a.Len())
	copy(out, a.(*array.Float64).Float64Values())
	for i := range out {
		if a.IsNull(i) {
			out[i] = math.NaN()
		}
	}
	return out, nil
}

// Flags gives a column of booleans, false where null.
func (b *Batch) Flags(name string) ([]bool, error) {
	a, err := b.column(name, Flag)
	if err != nil {
		return nil, err
	}
	out := make([]bool, a.Len())
	for i := range out {
		out[i] = a.IsValid(i) && a.(*array.Boolean).Value(i)
	}
	return out, nil
}

// Labels gives a column of names, "" where null.
func (b *Batch) Labels(name string) ([]string, error) {
	a, err := b.column(name, Label)
	if err != nil {
		return nil, err
	}
	d := a.(*array.Dictionary)
	names := d.Dictionary().(*array.String)
	out := make([]string, a.Len())
	for i := range out {
		if a.IsNull(i) {
			continue
		}
		k := d.GetValueIndex(i)
		if k < 0 || k >= names.Len() {
			return nil, fmt.Errorf("column %s, row %d: no label %d", name, i, k)
		}
		out[i] = names.Value(k)
	}
	return out, nil
}

// Texts gives a column of text, "" where null.
func (b *Batch) Texts(name string) ([]string, error) {
	a, err := b.column(name, Text)
	if err != nil {
		return nil, err
	}
	out := make([]string, a.Len())
	for i := range out {
		if a.IsValid(i) {
			out[i] = a.(*array.String).Value(i)
		}
	}
	return out, nil
}
