// Package stream gives every run its own stream of random numbers, derived from
// a seed, a point of a batch and a replicate, so that a run's outcome does not
// depend on how runs are spread over threads, lanes or machines.
//
// It is the only importer of golang.org/x/exp/rand, whose source (PCG XSL RR
// 128/64; O'Neill, Harvey Mudd College technical report HMC-CS-2014-0905) it
// wraps; to change the generator, change this package.
package stream

import (
	"encoding/binary"
	"math/bits"

	//lint:ignore SA1019 this source was asked for; it is pinned, and imported here alone so that it can be replaced
	"golang.org/x/exp/rand"
)

// A Stream is one stream of random numbers. It is a value: a copy goes on from
// the same place, on its own. The zero value is valid but is nobody's stream.
// A Stream must not be used by two goroutines at once.
type Stream struct {
	src rand.PCGSource
}

// New gives the stream of a replicate of a point under a seed. The three numbers
// are mixed into 128 bits by two chains; with two of the numbers held, each chain
// is one-to-one in the third.
func New(seed, point, replicate uint64) Stream {
	high := chain(0x6a09e667f3bcc908, seed, point, replicate)
	low := chain(0xbb67ae8584caa73b, bits.RotateLeft64(replicate, 32), seed, point)
	var state [16]byte
	binary.BigEndian.PutUint64(state[:8], high)
	binary.BigEndian.PutUint64(state[8:], low)
	var s Stream
	_ = s.src.UnmarshalBinary(state[:]) // fails on short data only
	return s
}

// chain absorbs three numbers into a 64-bit hash that starts from start: the
// leading bits of the square roots of 2 and 3 in the two chains.
func chain(start, a, b, c uint64) uint64 {
	h := mix(start + a)
	h = mix(h + golden + b)
	return mix(h + golden + c)
}

// golden is 2⁶⁴ over the golden ratio, the step of Steele, Lea, Flood.
const golden = 0x9e3779b97f4a7c15

// mix is the finaliser of splitmix64 in Stafford's variant 13: a permutation of
// 64 bits in which each input bit turns each output bit with chance one half.
// Steele, Lea, Flood, OOPSLA 2014, 453.
func mix(x uint64) uint64 {
	x = (x ^ x>>30) * 0xbf58476d1ce4e5b9
	x = (x ^ x>>27) * 0x94d049bb133111eb
	return x ^ x>>31
}

// Uint64 gives the next 64 random bits.
func (s *Stream) Uint64() uint64 { return s.src.Uint64() }

// Fill overwrites dst with the numbers that as many calls of Uint64 would give.
func (s *Stream) Fill(dst []uint64) {
	for i := range dst {
		dst[i] = s.src.Uint64()
	}
}

// Float64 gives a number uniform on the multiples of 2⁻⁵³ in (0, 1), never 0 or 1.
func (s *Stream) Float64() float64 {
	for {
		if x := s.src.Uint64() >> 11; x != 0 {
			return float64(int64(x)) * 0x1p-53
		}
	}
}

// MarshalBinary gives the stream's place, 16 bytes. The error is always nil.
func (s *Stream) MarshalBinary() ([]byte, error) { return s.src.MarshalBinary() }

// UnmarshalBinary puts the stream at the place that MarshalBinary gave. Data
// shorter than 16 bytes are an error.
func (s *Stream) UnmarshalBinary(data []byte) error { return s.src.UnmarshalBinary(data) }
