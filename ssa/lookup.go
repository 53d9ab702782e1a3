package ssa

import (
	"math"
	"slices"
)

// The entries before those of the rows; see lookup.
const (
	nowhere = iota
	nothing
	firstEntry
)

// maxRows is the most rows that a lane's position has room for.
const maxRows = tabledGroups

// A position holds the entries of up to eight rows that a lane is at, two to a
// word: that of row 2i in the lower half of word i, that of row 2i+1 in the upper,
// each times entryScale. A firing adds a word to each, whose halves may be negative.
type position [maxRows / 2]uint64

// entryScale makes an entry's number the offset of its cores in bytes, and a fourth of
// the offset of its sums, so that kernels in assembly need not work them out.
const entryScale = 8

// lookup is what the kernels of Dense with tables have in common: rows by
// counts, filled in where a lane comes to them, and laid out anew where one goes
// beyond.
type lookup struct {
	*worker
	rows []*row
	// entries are those of all rows. Entry nowhere is never filled in: it is where
	// lanes without a run stay. Entry nothing is that of rows that are not there.
	entries []entry
	// cores has a word for each entry, with a bit for each target whose bounds the
	// entry's counts lie within.
	cores  []uint64
	steps  []int64 // the largest increase of each species by one firing
	shifts [maxRows * groupWidth]position
	// reaction at each place, groupWidth to a row; −1: none
	reaction [maxRows * groupWidth]int

	bursty uint64 // bits of the places whose reactions have bursts

	spilled bool // a state is beyond any row: the lanes need another kernel
}

// newLookup lays out the rows, or gives nil where the network does not fit.
func newLookup(w *worker) *lookup {
	k := &lookup{worker: w, steps: make([]int64, len(w.Start))}
	read := make([]bool, len(w.Start))
	for _, g := range w.groups {
		if g.species == nil {
			return nil
		}
		k.rows = append(k.rows, newRow(g))
		for _, s := range g.species {
			read[s] = true
		}
	}
	for s := range read {
		if !read[s] {
			k.rows = append(k.rows, newRow(group{species: []int{s}}))
		}
	}
	if len(k.rows) > maxRows || len(k.rows) == 0 {
		return nil
	}
	k.setReactions()
	if !k.hold(w.Start) {
		return nil
	}
	return k
}

func (k *lookup) setReactions() {
	for p := range k.reaction {
		k.reaction[p] = -1
	}
	for i, row := range k.rows {
		for j, r := range row.reactions {
			k.reaction[i*groupWidth+j] = r
			for _, c := range k.changes.of(r) {
				k.steps[c.species] = max(k.steps[c.species], c.by)
			}
		}
	}
}

// hold makes all rows large enough for counts; it tells whether they can be.
// Positions of before are of no use after it.
func (k *lookup) hold(counts []int64) bool {
	end := int64(firstEntry)
	for _, r := range k.rows {
		for i, s := range r.species {
			r.counts[i] = min(r.counts[i], k.MaxCount+1)
			for r.counts[i] <= counts[s] && r.counts[i] <= k.MaxCount {
				r.counts[i] = min(2*r.counts[i], k.MaxCount+1)
			}
		}
		size, ok := r.lay(end, k.steps)
		if !ok {
			return false
		}
		end += size
	}
	k.entries = make([]entry, end)
	for i := range k.entries {
		k.entries[i] = unfilled()
	}
	k.cores = make([]uint64, end)
	k.entries[nothing], k.cores[nothing] = entry{}, math.MaxUint64
	k.setShifts()
	return true
}

func (k *lookup) setShifts() {
	for p, r := range k.reaction {
		if r < 0 {
			continue
		}
		k.shifts[p] = k.shift(r)
		if len(k.bursts.of(r)) > 0 {
			k.bursty |= 1 << p
		}
	}
}

// width is the number of rows that the rush is made for.
func (k *lookup) width() int {
	switch n := len(k.rows); {
	case n <= 1:
		return 1
	case n <= 4:
		return 4
	case n <= 6:
		return 6
	}
	return 8
}

// shift is what a firing of reaction r, but for bursts, adds to a position.
func (k *lookup) shift(r int) (shift position) {
	for _, c := range k.changes.of(r) {
		for i, row := range k.rows {
			if j := slices.Index(row.species, int(c.species)); j >= 0 {
				shift[i/2] += uint64(entryScale*c.by*row.strides[j]) << (32 * (i % 2))
			}
		}
	}
	return shift
}

// locate gives the position of counts that the rows hold.
func (k *lookup) locate(counts []int64) (at position, within bool) {
	within = true
	for i, row := range k.rows {
		index, ok := row.index(counts)
		at[i/2] += uint64(entryScale*index) << (32 * (i % 2))
		within = within && ok
	}
	for i := len(k.rows); i < maxRows; i++ {
		at[i/2] += entryScale * nothing << (32 * (i % 2))
	}
	return at, within
}

// half gives the entry of row i in a position.
func (at *position) half(i int) int64 { return int64(uint32(at[i/2]>>(32*(i%2))) / entryScale) }

func (k *lookup) leave(l *lane) {
	for i, row := range k.rows {
		row.read(l.at.half(i), l.counts)
	}
}

// enter puts a run that begins at its counts, which the rows always hold. Whether
// it goes on is settled where the loop meets it.
func (k *lookup) enter(l *lane) bool {
	l.at, _ = k.locate(l.counts)
	return true
}

// place puts a lane in its place by its counts and tells whether its run goes on.
func (k *lookup) place(l *lane) bool {
	if k.runaway(l.counts) {
		return k.settle(l, 0)
	}
	at, within := k.locate(l.counts)
	if !within {
		if k.grow(l); k.spilled {
			return true
		}
		at, _ = k.locate(l.counts)
	}
	l.at = at
	return k.settle(l, k.total(l))
}

// total fills in the entries that a lane is at and sums their totals.
func (k *lookup) total(l *lane) float64 {
	sum := 0.0
	for i, row := range k.rows {
		n := l.at.half(i)
		e := &k.entries[n]
		if math.IsNaN(e.total()) {
			*e, k.cores[n] = row.entry(k.props, l.counts), row.cores(k.targets, l.counts)
		}
		sum += e.total()
	}
	return sum
}

// choose gives the reaction at u; see direct.choose.
func (k *lookup) choose(l *lane, u float64) int {
	before, g := 0.0, 0
	for ; g < len(k.rows)-1; g++ {
		after := before + k.entries[l.at.half(g)].total()
		if u < after {
			break
		}
		before = after
	}
	e, j := &k.entries[l.at.half(g)], 0
	for j < groupWidth-1 && before+e[j] <= u {
		j++
	}
	return k.reaction[g*groupWidth+j]
}

// grow makes the rows hold the counts of a lane that is beyond them, and moves
// the other lanes to their places in the larger rows.
func (k *lookup) grow(beyond *lane) {
	for i := range k.lanes {
		if l := &k.lanes[i]; l.run >= 0 && l != beyond {
			k.leave(l)
		}
	}
	if !k.hold(beyond.counts) {
		k.spilled = true
		return
	}
	for i := range k.lanes {
		if l := &k.lanes[i]; l.run >= 0 {
			l.at, _ = k.locate(l.counts)
		}
	}
}

// spill hands all lanes, whose counts are up to date, to the kernel without
// tables, which takes the same decisions, bit for bit. The first done draws of the
// block have been used; the others are taken back.
func (k *lookup) spill(lanes []lane, step, i int) {
	direct := newDirect(k.worker)
	k.worker.kernel = direct
	for n := range lanes {
		l, steps := &lanes[n], step
		if l.run < 0 {
			continue
		}
		if n < i {
			steps++
		}
		l.rewind(steps)
		l.left -= int64(steps)
		if !direct.enter(l) {
			k.begin(l)
		}
	}
}
