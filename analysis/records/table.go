package records

import (
	"fmt"
	"math"
)

// Kind is what a column holds.
type Kind uint8

// The kinds of columns.
const (
	Int64   Kind = iota // whole numbers
	Float64             // numbers
	Flag                // booleans
	Label               // names from a fixed list
	Text                // any UTF-8 text
)

// String names the kind.
func (k Kind) String() string {
	if int(k) < 5 {
		return [...]string{"whole number", "number", "flag", "label", "text"}[k]
	}
	return "unknown kind"
}

// A Column describes one column of a table.
type Column struct {
	Name string
	Kind Kind
	// Unit of the values, "" for none: "min", "1/min", "molecules", "1" for a share.
	Unit string
	// Note says in a few words what the column holds.
	Note string
	// Labels are the names of a Label column, by index.
	Labels []string
	// Nullable columns may be left out of a row. In a nullable Float64 column NaN is
	// stored as null, in a nullable Label column any negative index.
	Nullable bool
}

// A Table is the layout of one file of records. The zero value with a name is a table
// without columns; the Add methods append one and return its handle for Writer.
type Table struct {
	Name    string // lower_snake_case; the file is Name.arrow
	Columns []Column
}

// Handles of columns, by kind.
type (
	// IntColumn is the handle of an Int64 column.
	IntColumn int
	// FloatColumn is the handle of a Float64 column.
	FloatColumn int
	// FlagColumn is the handle of a Flag column.
	FlagColumn int
	// LabelColumn is the handle of a Label column.
	LabelColumn int
	// TextColumn is the handle of a Text column.
	TextColumn int
)

// NewTable gives a table without columns.
func NewTable(name string) *Table { return &Table{Name: name} }

func (t *Table) add(c Column) int {
	t.Columns = append(t.Columns, c)
	return len(t.Columns) - 1
}

// AddInt appends a column of whole numbers.
func (t *Table) AddInt(name, unit, note string) IntColumn {
	return IntColumn(t.add(Column{Name: name, Kind: Int64, Unit: unit, Note: note}))
}

// AddFloat appends a column of numbers.
func (t *Table) AddFloat(name, unit, note string) FloatColumn {
	return FloatColumn(t.add(Column{Name: name, Kind: Float64, Unit: unit, Note: note}))
}

// AddFlag appends a column of booleans.
func (t *Table) AddFlag(name, note string) FlagColumn {
	return FlagColumn(t.add(Column{Name: name, Kind: Flag, Note: note}))
}

// AddLabel appends a column of names from the list.
func (t *Table) AddLabel(name string, labels []string, note string) LabelColumn {
	return LabelColumn(t.add(Column{Name: name, Kind: Label, Labels: labels, Note: note}))
}

// AddText appends a column of text.
func (t *Table) AddText(name, note string) TextColumn {
	return TextColumn(t.add(Column{Name: name, Kind: Text, Note: note}))
}

// Optional makes the column added last nullable.
func (t *Table) Optional() { t.Columns[len(t.Columns)-1].Nullable = true }

// check says what is wrong with the table's layout.
func (t *Table) check() error {
	if !snake(t.Name) {
		return fmt.Errorf("table %q: a name is lower_snake_case", t.Name)
	}
	if len(t.Columns) == 0 {
		return fmt.Errorf("table %s has no columns", t.Name)
	}
	seen := map[string]bool{}
	for i, c := range t.Columns {
		if c.Name == "" || seen[c.Name] {
			return fmt.Errorf("table %s: column %d needs a name of its own, not %q", t.Name, i, c.Name)
		}
		seen[c.Name] = true
		if err := c.check(); err != nil {
			return fmt.Errorf("table %s, column %s: %w", t.Name, c.Name, err)
		}
	}
	return nil
}

func (c *Column) check() error {
	if c.Kind > Text {
		return fmt.Errorf("kind %d is unknown", c.Kind)
	}
	if c.Kind != Label {
		return nil
	}
	if len(c.Labels) == 0 || len(c.Labels) > math.MaxInt16 {
		return fmt.Errorf("%d labels: there can be 1 to %d", len(c.Labels), math.MaxInt16)
	}
	seen := map[string]bool{}
	for _, l := range c.Labels {
		if seen[l] {
			return fmt.Errorf("label %q stands twice", l)
		}
		seen[l] = true
	}
	return nil
}

func snake(s string) bool {
	for i, r := range s {
		letter := r >= 'a' && r <= 'z'
		if !letter && (i == 0 || r != '_' && (r < '0' || r > '9')) {
			return false
		}
	}
	return s != ""
}
