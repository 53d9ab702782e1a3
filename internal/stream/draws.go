package stream

import (
	"encoding/binary"
	"math"
	"math/bits"
)

// A Draw is what one event of an exact run needs.
type Draw struct {
	Exp  float64 // exponential, mean 1
	Unit float64 // uniform on the multiples of 2⁻⁵² in [0, 1)
}

// Draws are two streams that make Draws: draw k of a run is made of numbers 2k and
// 2k+1 of Main, whatever came before. Edge serves the one exponential in a hundred
// that needs more.
type Draws struct{ Main, Edge Stream }

// Next gives the next draw.
func (s *Draws) Next() Draw {
	b := s.Main.Uint64()
	strip := &expZiggurat.strips[b&255]
	d := Draw{float64(int64(b>>11)) * strip.Width, unit(s.Main.Uint64())}
	if b>>11 >= strip.Inside {
		d.Exp = s.Edge.ExpEdge(b, d.Exp)
	}
	return d
}

// unit makes a number in [0, 1) of bits.
func unit(b uint64) float64 { return math.Float64frombits(b>>12|1023<<52) - 1 }

// Block is the number of draws that Fill makes.
const Block = 64

// Fill overwrites dst with the draws that as many calls of Next would give.
//
// Most of an exact event's time would otherwise go into the source, whose state
// goes through memory at every number. So the loop steps the source's own
// recurrence on the two words of its state, in registers; a test holds it against
// the source. It calls nothing, and leaves the bits of the few exponentials that
// need more to the end.
func (s *Draws) Fill(dst *[Block]Draw) {
	high, low := s.Main.words()
	high, low, edges := fill(dst, &expZiggurat.strips, &oneAndTwo, high, low)
	s.Main.setWords(high, low)
	for ; edges != 0; edges &= edges - 1 {
		d := &dst[bits.TrailingZeros64(edges)]
		b := math.Float64bits(d.Exp)
		d.Exp = s.Edge.ExpEdge(b, float64(int64(b>>11))*expZiggurat.strips[b&255].Width)
	}
}

// fill makes draws and the bits of those whose exponential number needs more. The
// constants come by reference, since in line they would take an instruction each.
func fill(dst *[Block]Draw, strips *[256]Strip, c *[2]congruential, high, low uint64) (nextHigh, nextLow, edges uint64) {
	_, _, _ = dst[0], strips[0], c[0] // no tests for nil in the loop
	for i := range dst {
		h, l := c[0].advance(high, low)
		high, low = c[1].advance(high, low)
		b := output(h, l)
		strip := &strips[b&255]
		dst[i].Exp = float64(int64(b>>11)) * strip.Width
		if b>>11 >= strip.Inside {
			dst[i].Exp = math.Float64frombits(b)
			edges |= 1 << i
		}
		dst[i].Unit = unit(output(high, low))
	}
	return high, low, edges
}

// A congruential is a linear congruential generator of 128 bits, high and low
// words apart.
type congruential struct{ multiplierHigh, multiplierLow, incrementHigh, incrementLow uint64 }

// The generator of PCG XSL RR 128/64, O'Neill, Harvey Mudd College technical report
// HMC-CS-2014-0905, section 6; and the one whose step is two of its steps.
const (
	multiplier = 2549297995355413924<<64 | 4865540595714422341
	increment  = 6364136223846793005<<64 | 1442695040888963407

	twoMultiplier = multiplier * multiplier % (1 << 128)
	twoIncrement  = increment * (multiplier + 1) % (1 << 128)

	word = 1<<64 - 1
)

// oneAndTwo are the generators of one step and of two. They are never written.
var oneAndTwo = [2]congruential{
	{multiplier >> 64, multiplier & word, increment >> 64, increment & word},
	{twoMultiplier >> 64, twoMultiplier & word, twoIncrement >> 64, twoIncrement & word},
}

// advance gives the next state.
func (c *congruential) advance(high, low uint64) (nextHigh, nextLow uint64) {
	h, l := bits.Mul64(low, c.multiplierLow)
	h += high*c.multiplierLow + low*c.multiplierHigh
	l, carry := bits.Add64(l, c.incrementLow, 0)
	h, _ = bits.Add64(h, c.incrementHigh, carry)
	return h, l
}

// output gives the number of a state.
func output(high, low uint64) uint64 { return bits.RotateLeft64(high^low, -int(high>>58)) }

// words gives the state of the source.
func (s *Stream) words() (high, low uint64) {
	data, _ := s.src.MarshalBinary() // never fails
	return binary.BigEndian.Uint64(data[:8]), binary.BigEndian.Uint64(data[8:16])
}

func (s *Stream) setWords(high, low uint64) {
	var data [16]byte
	binary.BigEndian.PutUint64(data[:8], high)
	binary.BigEndian.PutUint64(data[8:], low)
	_ = s.src.UnmarshalBinary(data[:]) // fails on short data only
}
