package ssa

import "math"

const (
	// rowEntries is the most entries of a row of one species, and crossEntries of
	// one of several.
	rowEntries   = 1 << 18
	crossEntries = 1 << 16
	// firstCounts is the number of counts that a row of one species begins with, and
	// crossCounts that of each species of several.
	firstCounts = 64
	crossCounts = 2
)

// An entry is what a row knows of one combination of its species' counts: e[j] is
// the sum of the first j+1 propensities of the group, and from its last reaction on
// their total. An entry of NaNs has not been filled in, or must not be: a count lies
// beyond the row, or a rate is bad.
type entry [groupWidth]float64

// total is the sum of the group's propensities.
func (e *entry) total() float64 { return e[groupWidth-1] }

// unfilled is an entry of NaNs.
func unfilled() (e entry) {
	for j := range e {
		e[j] = math.NaN()
	}
	return e
}

// A row is the table of one group over the counts of its species: a stretch of the
// entries that all rows of a network share.
type row struct {
	group
	first int64 // entry of no molecules
	// counts[i] is the number of counts of species i that entries may be filled in
	// for, from 0 on; strides[i] is the distance between neighbouring counts. There
	// is room beyond counts[i] for the largest step of one firing, so that a lane
	// that steps beyond meets an entry that is not filled in.
	counts  []int64
	strides []int64
}

// newRow makes a row for a group, or for a species that no propensity reads.
func newRow(g group) *row {
	r := &row{group: g, counts: make([]int64, len(g.species)), strides: make([]int64, len(g.species))}
	for i := range r.counts {
		r.counts[i] = crossCounts
		if len(r.counts) == 1 {
			r.counts[i] = firstCounts
		}
	}
	return r
}

// lay lays the row out anew from entry first on, with steps the largest increase
// of each species by a firing, and gives the entries it takes. It tells whether the
// row is small enough.
func (r *row) lay(first int64, steps []int64) (size int64, ok bool) {
	size, limit := int64(1), int64(rowEntries)
	if len(r.species) > 1 {
		limit = crossEntries
	}
	for i, s := range r.species {
		r.strides[i] = size
		size *= r.counts[i] + steps[s]
		if size > limit {
			return 0, false
		}
	}
	r.first = first
	return size, true
}

// index gives the entry at counts, and whether it is within the row.
func (r *row) index(counts []int64) (index int64, within bool) {
	index, within = r.first, true
	for i, s := range r.species {
		index += counts[s] * r.strides[i]
		within = within && counts[s] < r.counts[i]
	}
	return index, within
}

// read puts the counts of entry index into counts.
func (r *row) read(index int64, counts []int64) {
	index -= r.first
	for i := len(r.species) - 1; i >= 0; i-- {
		counts[r.species[i]] = index / r.strides[i]
		index %= r.strides[i]
	}
}

// entry works out the entry at counts; that of a bad rate is unfilled.
func (r *row) entry(props []propensity, counts []int64) (e entry) {
	sum := 0.0
	for j := range e {
		if j < len(r.reactions) {
			a := props[r.reactions[j]].at(counts)
			if bad(a) {
				return unfilled()
			}
			sum += a
		}
		e[j] = sum
	}
	if sum < never {
		return entry{}
	}
	return e
}

// cores gives the bits of the targets whose bounds hold in the row's species. Targets
// from the 64th on share a bit.
func (r *row) cores(targets []target, counts []int64) uint64 {
	bits := uint64(0)
	for k := range targets {
		if targets[k].maybe(r.species, counts) {
			bits |= 1 << min(k, 63)
		}
	}
	return bits
}
