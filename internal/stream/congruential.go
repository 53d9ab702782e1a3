package stream

import "math/bits"

// A congruential is a linear congruential generator of 128 bits, high and low
// words apart.
type congruential struct{ multiplierHigh, multiplierLow, incrementHigh, incrementLow uint64 }

// The generator of PCG XSL RR 128/64, O'Neill, Harvey Mudd College technical report
// HMC-CS-2014-0905, section 6.
const (
	multiplier = 2549297995355413924<<64 | 4865540595714422341
	increment  = 6364136223846793005<<64 | 1442695040888963407

	word = 1<<64 - 1
)

// generator is that generator. It is never written.
var generator = congruential{multiplier >> 64, multiplier & word, increment >> 64, increment & word}

// advance gives the next state.
func (c *congruential) advance(high, low uint64) (nextHigh, nextLow uint64) {
	h, l := bits.Mul64(low, c.multiplierLow)
	h += high*c.multiplierLow + low*c.multiplierHigh
	l, carry := bits.Add64(l, c.incrementLow, 0)
	h, _ = bits.Add64(h, c.incrementHigh, carry)
	return h, l
}

// steps gives the generator one step of which is n steps of c, n ≥ 1: an affine map
// applied n times is one. Brown, Trans. Am. Nucl. Soc. 71 (1994) 202.
func (c *congruential) steps(n int) congruential {
	out := *c
	for range n - 1 {
		product := congruential{multiplierHigh: c.multiplierHigh, multiplierLow: c.multiplierLow}
		out.multiplierHigh, out.multiplierLow = product.advance(out.multiplierHigh, out.multiplierLow)
		out.incrementHigh, out.incrementLow = c.advance(out.incrementHigh, out.incrementLow)
	}
	return out
}

// output gives the number of a state.
func output(high, low uint64) uint64 { return bits.RotateLeft64(high^low, -int(high>>58)) }
