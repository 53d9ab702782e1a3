package stream

import (
	"math"
	"math/bits"
)

// FillNormal overwrites dst with the numbers that as many calls of Normal would give.
//
// It makes a normal number of each number of the source, in registers and several at a
// time as Draws.Fill does, and then goes through the one in eighty that needs more: that
// takes further numbers of the source, so that the normal numbers made of these are
// dropped, and those after them move up.
func (s *Stream) FillNormal(dst []float64) {
	const few = 4
	for len(dst) >= few {
		dst = dst[s.normals(dst[:min(len(dst), Block)/few*few]):]
	}
	for i := range dst {
		dst[i] = s.Normal()
	}
}

// normals makes normal numbers of as many numbers of the source as dst, a block at most,
// is long, and gives how many they are.
func (s *Stream) normals(dst []float64) (made int) {
	high, low := s.words()
	edges := fillNormals(dst, high, low)
	made, used := 0, 0 // normal numbers; numbers of the source
	for ; edges != 0; edges &= ^uint64(0) << used {
		edge := bits.TrailingZeros64(edges)
		b := math.Float64bits(dst[edge])
		if made < used {
			copy(dst[made:], dst[used:edge])
		}
		made += edge - used
		dst[made], used = s.normalAt(edge+1, b, high, low)
		made++
	}
	if used > len(dst) {
		return made
	}
	s.setWords(onward[len(dst)].advance(high, low))
	if made < used {
		copy(dst[made:], dst[used:])
	}
	return made + len(dst) - used
}

// normalAt gives the normal number that needs more than its bits b, the last of n numbers
// from a state on; and n with the numbers that it took, after which it leaves the stream.
func (s *Stream) normalAt(n int, b, high, low uint64) (x float64, used int) {
	high, low = onward[n].advance(high, low)
	s.setWords(high, low)
	x = signed(s.normalEdge(b, float64(int64(b>>11))*normalZiggurat.strips[b&255].Width), b)
	for endHigh, endLow := s.words(); high != endHigh || low != endLow; n++ {
		high, low = generator.advance(high, low)
	}
	return x, n
}

// onward holds the generators whose step is up to that of a block. It is never written.
var onward = newOnward()

func newOnward() (out [Block + 1]congruential) {
	out[0].multiplierLow = 1
	for n := 1; n < len(out); n++ {
		out[n] = generator.steps(n)
	}
	return out
}

// normalsPlain makes a normal number of each number of the source from a state on, and
// gives the bits of those that need more: they hold the source's. See fillPlain.
func normalsPlain(dst []float64, strips *[256]Strip, c *[2]congruential, high, low uint64) (edges uint64) {
	_, _ = strips[0], c[0] // no tests for nil in the loop
	for i := range dst {
		high, low = c[0].advance(high, low)
		b := output(high, low)
		strip := &strips[b&255]
		dst[i] = signed(float64(int64(b>>11))*strip.Width, b)
		if b>>11 >= strip.Inside {
			dst[i] = math.Float64frombits(b)
			edges |= 1 << i
		}
	}
	return edges
}
