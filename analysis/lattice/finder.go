package lattice

import "errors"

var (
	errTooMany = errors.New("more nodes than allowed")
	errTooDeep = errors.New("more than three dimensions")
)

// A finder tells a node's number by its place in the box: by a table where the
// box is small enough, by hashing where it is mostly empty.
type finder struct {
	low    []int64
	stride []uint64
	table  []int32
	hashed map[uint64]int32
}

func newFinder(b Box, phases int) finder {
	const tableLimit = 1 << 27
	f := finder{low: b.Low, stride: make([]uint64, len(b.Low))}
	step := uint64(phases)
	for s := range b.Low {
		f.stride[s] = step
		step *= uint64(b.High[s]-b.Low[s]) + 1
	}
	if b.volume()*float64(phases) > tableLimit {
		f.hashed = map[uint64]int32{}
		return f
	}
	f.table = make([]int32, step)
	for i := range f.table {
		f.table[i] = -1
	}
	return f
}

func (f *finder) slot(counts []int64, phase int) uint64 {
	at := uint64(phase)
	for s, k := range counts {
		at += uint64(k-f.low[s]) * f.stride[s]
	}
	return at
}

func (f *finder) get(slot uint64) int32 {
	if f.table != nil {
		return f.table[slot]
	}
	if i, ok := f.hashed[slot]; ok {
		return i
	}
	return -1
}

func (f *finder) put(slot uint64, node int32) {
	if f.table != nil {
		f.table[slot] = node
		return
	}
	f.hashed[slot] = node
}
