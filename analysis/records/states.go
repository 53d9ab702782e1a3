package records

import (
	"fmt"
	"math"
	"slices"
)

// A State is one resting state, saddle or other fixed point, for WriteStates.
type State struct {
	Name, Type string
	Absorbing  bool // nothing leads out of it
	// Amounts and Molecules have one value a species, and so has Deviation, the
	// standard deviation in molecules by linear noise; nil where there is none.
	Amounts, Molecules, Deviation []float64
	// Eigenvalue is the one with the largest real part, in 1/unit; NaN where unknown.
	Eigenvalue complex128
}

// WriteStates writes the table states: one row for each state and species.
func WriteStates(f *Folder, species []string, states []State) error {
	t := newStateTable(f, species, states, false)
	w, err := f.Table(t.Table)
	if err != nil {
		return err
	}
	for i := range states {
		if err := t.append(w, 0, &states[i]); err != nil {
			break // Close gives it again
		}
	}
	return w.Close()
}

type stateTable struct {
	*Table
	pointed                                bool // the first column is the number of a point
	species                                int
	state, kind, name                      LabelColumn
	absorbing                              FlagColumn
	amount, molecules, deviation, re, imag FloatColumn
}

func newStateTable(f *Folder, species []string, states []State, pointed bool) *stateTable {
	rate := "1/" + f.provenance.TimeUnit
	t := &stateTable{Table: NewTable("states"), species: len(species), pointed: pointed}
	t.addPoint(pointed)
	t.state = t.AddLabel("state", distinct(states, func(s State) string { return s.Name }), "name of the state")
	t.kind = t.AddLabel("type", distinct(states, func(s State) string { return s.Type }), "stability by the rate equations")
	t.absorbing = t.AddFlag("absorbing", "nothing leads out of the state")
	t.name = t.AddLabel("species", species, "name of the species")
	t.amount = t.AddFloat("amount", "amount", "amount at the state")
	t.molecules = t.AddFloat("molecules", "molecules", "the same in molecules")
	t.deviation = t.AddFloat("sd_molecules", "molecules", "standard deviation about the state by linear noise")
	t.Optional()
	t.re = t.AddFloat("eigenvalue_real", rate, "real part of the eigenvalue with the largest one")
	t.Optional()
	t.imag = t.AddFloat("eigenvalue_imaginary", rate, "its imaginary part")
	t.Optional()
	return t
}

func (t *stateTable) append(w *Writer, point int64, s *State) error {
	if len(s.Amounts) != t.species || len(s.Molecules) != t.species || s.Deviation != nil && len(s.Deviation) != t.species {
		w.fail("state %s needs amounts and molecules of %d species", s.Name, t.species)
		return w.err
	}
	for j := range t.species {
		w.setPoint(t.pointed, point)
		w.Label(t.state, t.index(t.state, s.Name))
		w.Label(t.kind, t.index(t.kind, s.Type))
		w.Flag(t.absorbing, s.Absorbing)
		w.Label(t.name, j)
		w.Float(t.amount, s.Amounts[j])
		w.Float(t.molecules, s.Molecules[j])
		if s.Deviation != nil {
			w.Float(t.deviation, s.Deviation[j])
		}
		w.Float(t.re, real(s.Eigenvalue))
		w.Float(t.imag, imag(s.Eigenvalue))
		if err := w.Next(); err != nil {
			return err
		}
	}
	return nil
}

// index gives the index of a name among the labels of a column, −1 if it is none.
func (t *Table) index(c LabelColumn, name string) int {
	return slices.Index(t.Columns[c].Labels, name)
}

// distinct lists the names of the rows in order of appearance; "none" if there are no rows.
func distinct[T any](rows []T, name func(T) string) (names []string) {
	for _, r := range rows {
		if n := name(r); !slices.Contains(names, n) {
			names = append(names, n)
		}
	}
	if names == nil {
		return []string{"none"}
	}
	return names
}

// generations adds the column of a time in generations if the run has a generation.
type generations struct {
	column FloatColumn
	length float64
}

func (f *Folder) addGenerations(t *Table) generations {
	g := generations{length: f.provenance.Generation}
	if g.length > 0 {
		g.column = t.AddFloat("generations", "generations", "the time in generations")
	}
	return g
}

func (g generations) set(w *Writer, time float64) {
	if g.length > 0 {
		w.Float(g.column, time/g.length)
	}
}

// reserved refuses names of states that would be mistaken for others in the tables.
func reserved(states []string, words ...string) error {
	for _, w := range words {
		if slices.Contains(states, w) {
			return fmt.Errorf("a state cannot be called %q: the word has another meaning in the records", w)
		}
	}
	return nil
}

// orNull turns what is not finite into null.
func orNull(v float64) float64 {
	if math.IsInf(v, 0) {
		return math.NaN()
	}
	return v
}
