package ssa

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

// An entry is what a row knows of one combination of its species' counts. An
// entry whose total is NaN has not been filled in, or must not be: a count lies
// beyond the row, or a rate is bad.
type entry struct {
	// total is the sum of the group's propensities, and sums[j] that of the first
	// j+1 of them; the last of them is total.
	total float64
	sums  [groupWidth - 1]float64
	// cores has a bit for each target whose bounds these counts lie within. Targets
	// from the 64th on share a bit.
	cores uint64
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

// fill works out the entry at counts; one with a bad rate stays unfilled.
func (r *row) fill(e *entry, props []propensity, targets []target, counts []int64) {
	sum := 0.0
	for j, reaction := range r.reactions {
		a := props[reaction].at(counts)
		if bad(a) {
			return
		}
		sum += a
		if j < len(e.sums) {
			e.sums[j] = sum
		}
	}
	for j := len(r.reactions); j < len(e.sums); j++ {
		e.sums[j] = sum
	}
	e.cores = r.cores(targets, counts)
	if e.total = sum; sum < never {
		e.total, e.sums = 0, [groupWidth - 1]float64{}
	}
}

// cores gives the bits of the targets whose bounds hold in the row's species.
func (r *row) cores(targets []target, counts []int64) uint64 {
	bits := uint64(0)
	for k := range targets {
		if targets[k].maybe(r.species, counts) {
			bits |= 1 << min(k, 63)
		}
	}
	return bits
}
