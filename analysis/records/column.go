package records

import (
	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

// A buffer holds one column of the batch that is being filled. Only the slice of its
// kind is used; all are kept from batch to batch.
type buffer struct {
	Column
	ints    []int64
	floats  []float64
	codes   []int16
	bits    []byte // flags
	offsets []int32
	text    []byte
	valid   []byte // bitmap; nil unless nullable
	nulls   int
	filled  int // rows that have a value or are null
	typ     arrow.DataType
	labels  *array.Data // the dictionary, the same in every batch
}

func newBuffer(c Column, rows int, mem memory.Allocator) *buffer {
	b := &buffer{Column: c, typ: c.Kind.arrowType()}
	switch c.Kind {
	case Int64:
		b.ints = make([]int64, rows)
	case Float64:
		b.floats = make([]float64, rows)
	case Flag:
		b.bits = make([]byte, (rows+7)/8)
	case Label:
		b.codes = make([]int16, rows)
		b.labels = dictionary(c.Labels, mem)
	case Text:
		b.offsets = make([]int32, rows+1)
	}
	if c.Nullable {
		b.valid = make([]byte, (rows+7)/8)
	}
	return b
}

func dictionary(labels []string, mem memory.Allocator) *array.Data {
	builder := array.NewStringBuilder(mem)
	defer builder.Release()
	builder.AppendValues(labels, nil)
	names := builder.NewStringArray()
	defer names.Release()
	data := names.Data().(*array.Data)
	data.Retain()
	return data
}

func (b *buffer) release() {
	if b.labels != nil {
		b.labels.Release()
		b.labels = nil
	}
}

// mark notes that row has a value.
func (b *buffer) mark(row int) {
	b.filled = row + 1
	if b.valid != nil {
		b.valid[row/8] |= 1 << (row % 8)
	}
}

// null leaves row without a value.
func (b *buffer) null(row int) {
	b.filled = row + 1
	b.nulls++
	switch b.Kind {
	case Int64:
		b.ints[row] = 0
	case Float64:
		b.floats[row] = 0
	case Label:
		b.codes[row] = 0
	case Text:
		b.offsets[row+1] = b.offsets[row]
	}
}

// reset empties the buffer for the next batch.
func (b *buffer) reset() {
	b.filled, b.nulls = 0, 0
	b.text = b.text[:0]
	clear(b.bits)
	clear(b.valid)
}

// array wraps the first rows without copying them.
func (b *buffer) array(rows int) arrow.Array {
	buffers := []*memory.Buffer{nil}
	if b.valid != nil {
		buffers[0] = memory.NewBufferBytes(b.valid[:(rows+7)/8])
	}
	switch b.Kind {
	case Int64:
		buffers = append(buffers, memory.NewBufferBytes(arrow.Int64Traits.CastToBytes(b.ints[:rows])))
	case Float64:
		buffers = append(buffers, memory.NewBufferBytes(arrow.Float64Traits.CastToBytes(b.floats[:rows])))
	case Flag:
		buffers = append(buffers, memory.NewBufferBytes(b.bits[:(rows+7)/8]))
	case Label:
		buffers = append(buffers, memory.NewBufferBytes(arrow.Int16Traits.CastToBytes(b.codes[:rows])))
		data := array.NewDataWithDictionary(b.typ, rows, buffers, b.nulls, 0, b.labels)
		defer data.Release()
		return array.NewDictionaryData(data)
	case Text:
		offsets := arrow.Int32Traits.CastToBytes(b.offsets[:rows+1])
		buffers = append(buffers, memory.NewBufferBytes(offsets), memory.NewBufferBytes(b.text))
	}
	data := array.NewData(b.typ, rows, buffers, nil, b.nulls, 0)
	defer data.Release()
	return array.MakeFromData(data)
}
