package records

import (
	"fmt"

	"github.com/apache/arrow-go/v18/arrow"
)

// Keys of the metadata of fields.
const (
	keyUnit = "unit"
	keyNote = "note"
)

func labelType() *arrow.DictionaryType {
	return &arrow.DictionaryType{IndexType: arrow.PrimitiveTypes.Int16, ValueType: arrow.BinaryTypes.String}
}

func (k Kind) arrowType() arrow.DataType {
	switch k {
	case Int64:
		return arrow.PrimitiveTypes.Int64
	case Float64:
		return arrow.PrimitiveTypes.Float64
	case Flag:
		return arrow.FixedWidthTypes.Boolean
	case Label:
		return labelType()
	}
	return arrow.BinaryTypes.String
}

func (c *Column) field() arrow.Field {
	meta := map[string]string{}
	if c.Unit != "" {
		meta[keyUnit] = c.Unit
	}
	if c.Note != "" {
		meta[keyNote] = c.Note
	}
	return arrow.Field{Name: c.Name, Type: c.Kind.arrowType(), Nullable: c.Nullable, Metadata: arrow.MetadataFrom(meta)}
}

// schema gives the table's schema with the provenance in its metadata. Keys are sorted.
func (t *Table) schema(p Provenance) *arrow.Schema {
	fields := make([]arrow.Field, len(t.Columns))
	for i := range t.Columns {
		fields[i] = t.Columns[i].field()
	}
	meta := p.metadata()
	meta[keyTable] = t.Name
	m := arrow.MetadataFrom(meta)
	return arrow.NewSchema(fields, &m)
}

// columnOf is the inverse of field, without the labels.
func columnOf(f arrow.Field) (Column, error) {
	c := Column{Name: f.Name, Nullable: f.Nullable}
	c.Unit, _ = f.Metadata.GetValue(keyUnit)
	c.Note, _ = f.Metadata.GetValue(keyNote)
	for k := Int64; k <= Text; k++ {
		if arrow.TypeEqual(f.Type, k.arrowType()) {
			c.Kind = k
			return c, nil
		}
	}
	return c, fmt.Errorf("column %s has type %v, which records do not use", f.Name, f.Type)
}
