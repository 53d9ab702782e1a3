package lattice

import (
	"encoding/binary"
	"errors"
)

var (
	errTooMany = errors.New("more nodes than allowed")
	errTooDeep = errors.New("more than three dimensions")
)

// A finder tells a node's number by its place in the box: by a table where the
// box is small enough, by hashing where it is mostly empty.
type finder struct {
	low    []int64
	stride []int
	table  []int32
	hashed map[string]int32
	key    []byte
}

// newFinder uses a table if it has no more than limit entries.
func newFinder(b Box, phases int, limit float64) finder {
	f := finder{low: b.Low, stride: make([]int, len(b.Low))}
	if b.volume()*float64(phases) > limit {
		f.hashed = map[string]int32{}
		return f
	}
	step := phases
	for s := range b.Low {
		f.stride[s] = step
		step *= int(b.High[s]-b.Low[s]) + 1
	}
	f.table = make([]int32, step)
	return f
}

// find gives the node's number, or with ok false the number next, which is the
// node's from now on.
func (f *finder) find(counts []int64, phase int, next int32) (node int32, ok bool) {
	if f.table != nil {
		at := phase
		for s, k := range counts {
			at += int(k-f.low[s]) * f.stride[s]
		}
		if f.table[at] != 0 {
			return f.table[at] - 1, true
		}
		f.table[at] = next + 1
		return next, false
	}
	f.key = append(f.key[:0], byte(phase))
	for _, k := range counts {
		f.key = binary.AppendVarint(f.key, k)
	}
	if node, ok = f.hashed[string(f.key)]; ok {
		return node, true
	}
	f.hashed[string(f.key)] = next
	return next, false
}
