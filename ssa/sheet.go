package ssa

import (
	"math"
	"slices"
)

const (
	// maxSheets is the most tables that a place on them has room for.
	maxSheets = 8
	// sheetCells is the most cells of all tables together.
	sheetCells = 1 << 22
	// firstExtent is the number of counts of a species that a table begins with.
	firstExtent = 32
)

// A cell holds the running sums of the propensities of one group; the last is
// their total. A cell whose total is NaN has not been filled in.
type cell [groupWidth]float64

func (c *cell) total() float64 { return c[groupWidth-1] }

// sum fills in a cell from the group's propensities; a bad one makes it NaN.
func (c *cell) sum(reactions []int, props []propensity, counts []int64) {
	sum := 0.0
	for j := range c {
		if j < len(reactions) {
			a := props[reactions[j]].at(counts)
			if bad(a) {
				a = math.NaN()
			}
			sum += a
		}
		c[j] = sum
	}
}

// A sheet is the table of one group over the counts of its species.
type sheet struct {
	reactions, species []int
	first              int64
	extents, strides   []int64
}

// sheets are the tables of all groups, in one row of cells. Groups whose
// propensities read too many species have none: then their cells are worked out
// anew after every event that may have changed them.
type sheets struct {
	sheets []sheet
	cells  []cell
	steps  []int64             // the largest increase of each species by one firing
	shifts [][maxSheets]uint32 // what a firing adds to the place, by place of the reaction
}

// newSheets lays out the tables, or gives nil where there can be none.
func newSheets(s *system) *sheets {
	t := &sheets{steps: make([]int64, len(s.Start))}
	read := make([]bool, len(s.Start))
	for _, g := range s.groups {
		if g.species == nil {
			return nil
		}
		t.sheets = append(t.sheets, newSheet(g.reactions, g.species))
		for _, i := range g.species {
			read[i] = true
		}
	}
	for i := range read {
		if !read[i] {
			t.sheets = append(t.sheets, newSheet(nil, []int{i}))
		}
	}
	if len(t.sheets) > maxSheets {
		return nil
	}
	for r := range s.Network.Reactions {
		for _, c := range s.changes.of(r) {
			t.steps[c.species] = max(t.steps[c.species], c.by)
		}
	}
	if !t.hold(s, s.Start) {
		return nil
	}
	return t
}

func newSheet(reactions, species []int) sheet {
	n := sheet{reactions: reactions, species: species, extents: make([]int64, len(species)), strides: make([]int64, len(species))}
	for i := range n.extents {
		n.extents[i] = firstExtent
		if len(species) > 1 {
			n.extents[i] = 2
		}
	}
	return n
}

// hold makes the tables large enough for counts; it tells whether they can be.
// Places of before are of no use after it.
func (t *sheets) hold(s *system, counts []int64) bool {
	end := int64(0)
	for k := range t.sheets {
		n := &t.sheets[k]
		n.first = end
		size := int64(1)
		for i, species := range n.species {
			for n.extents[i] <= counts[species] {
				n.extents[i] *= 2
			}
			n.strides[i] = size
			size *= n.extents[i] + t.steps[species]
			if size > sheetCells {
				return false
			}
		}
		if end += size; end > sheetCells {
			return false
		}
	}
	t.cells = make([]cell, end)
	for i := range t.cells {
		t.cells[i][groupWidth-1] = math.NaN()
	}
	t.setShifts(s)
	return true
}

// setShifts works out what a firing, but for bursts, adds to a place.
func (t *sheets) setShifts(s *system) {
	t.shifts = make([][maxSheets]uint32, len(s.groups)*groupWidth)
	for g := range s.groups {
		for j, r := range s.groups[g].reactions {
			for _, c := range s.changes.of(r) {
				for k := range t.sheets {
					if i := slices.Index(t.sheets[k].species, int(c.species)); i >= 0 {
						t.shifts[g*groupWidth+j][k] += uint32(c.by * t.sheets[k].strides[i])
					}
				}
			}
		}
	}
}

// place gives the cells of counts, and whether the tables hold them.
func (t *sheets) place(counts []int64) (at [maxSheets]uint32, within bool) {
	within = true
	for k := range t.sheets {
		n := &t.sheets[k]
		index := n.first
		for i, species := range n.species {
			index += counts[species] * n.strides[i]
			within = within && counts[species] < n.extents[i]
		}
		at[k] = uint32(index)
	}
	return at, within
}

// read puts the counts of a place into counts.
func (t *sheets) read(at *[maxSheets]uint32, counts []int64) {
	for k := range t.sheets {
		n := &t.sheets[k]
		index := int64(at[k]) - n.first
		for i := len(n.species) - 1; i >= 0; i-- {
			counts[n.species[i]] = index / n.strides[i]
			index %= n.strides[i]
		}
	}
}
