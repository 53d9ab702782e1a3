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

// Block is the number of draws that Fill makes.
const Block = 64

// A Batch is a block of draws, the numbers of each kind side by side.
type Batch struct{ Exp, Unit [Block]float64 }

// Draws are two streams that make Draws: draw k of a run is made of numbers 2k and
// 2k+1 of Main, whatever came before. Edge serves the one exponential in fifty that
// needs more.
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

// Fill overwrites dst with the draws that as many calls of Next would give.
//
// Most of an exact event's time would otherwise go into the source, whose state
// goes through memory at every number. So the loop steps the source's own
// recurrence on the two words of its state, in registers, eight numbers at a time
// where the machine can; a test holds it against the source. It calls nothing, and
// leaves the bits of the few exponentials that need more to the end.
func (s *Draws) Fill(dst *Batch) {
	high, low := s.Main.words()
	edges := fill(dst, high, low)
	s.Main.setWords(wholeBlock.advance(high, low))
	for ; edges != 0; edges &= edges - 1 {
		x := &dst.Exp[bits.TrailingZeros64(edges)]
		b := math.Float64bits(*x)
		*x = s.Edge.ExpEdge(b, float64(int64(b>>11))*expZiggurat.strips[b&255].Width)
	}
}

// wholeBlock is the generator whose step is all those of a block, and oneAndTwo are
// those of one step and of two. They are never written.
var (
	wholeBlock = generator.steps(2 * Block)
	oneAndTwo  = [2]congruential{generator, generator.steps(2)}
)

// fillPlain makes draws from a state on, and gives the bits of those whose
// exponential number needs more: they hold its bits. The constants come by reference,
// since in line they would take an instruction each.
func fillPlain(dst *Batch, strips *[256]Strip, c *[2]congruential, high, low uint64) (edges uint64) {
	_, _, _ = dst.Exp[0], strips[0], c[0] // no tests for nil in the loop
	for i := range Block {
		h, l := c[0].advance(high, low)
		high, low = c[1].advance(high, low)
		b := output(h, l)
		strip := &strips[b&255]
		dst.Exp[i] = float64(int64(b>>11)) * strip.Width
		if b>>11 >= strip.Inside {
			dst.Exp[i] = math.Float64frombits(b)
			edges |= 1 << i
		}
		dst.Unit[i] = unit(output(high, low))
	}
	return edges
}

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
