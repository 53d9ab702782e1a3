package stream

import "golang.org/x/sys/cpu"

// fill makes draws; see fillPlain.
func fill(dst *Batch, high, low uint64) (edges uint64) {
	if cpu.X86.HasAVX2 {
		return fillWide(dst, &expZiggurat.strips, &leaps, high, low)
	}
	return fillPlain(dst, &expZiggurat.strips, &oneAndTwo, high, low)
}

// fillWide makes draws, four at a time, by two vectors of four states: those of the
// exponential numbers, and those of the units. It takes about 27 instructions a draw,
// where the compiler makes 75 of fillPlain.
//
//go:noescape
func fillWide(dst *Batch, strips *[256]Strip, c *[3]leap, high, low uint64) (edges uint64)

// fillNormals makes normal numbers; see normalsPlain.
func fillNormals(dst []float64, high, low uint64) (edges uint64) {
	if cpu.X86.HasAVX2 && len(dst) > 0 && len(dst)%4 == 0 && len(dst) <= Block {
		return normalsWide(&dst[0], len(dst), &normalZiggurat.strips, &inTurn, high, low)
	}
	return normalsPlain(dst, &normalZiggurat.strips, &oneAndTwo, high, low)
}

// normalsWide makes n normal numbers, a multiple of four up to Block, four at a time.
//
//go:noescape
func normalsWide(dst *float64, n int, strips *[256]Strip, c *[3]leap, high, low uint64) (edges uint64)

// A leap holds generators for the four states of a vector, in the form that vector
// arithmetic needs: it multiplies numbers of 32 bits.
type leap struct {
	multiplierLow, multiplierMiddle, multiplierHigh [4]uint64 // middle: the upper half of the low word
	turnedLow, turnedHigh                           [4]uint64 // words with their halves in turn
	incrementLow, incrementMiddle, incrementHigh    [4]uint64
}

// leaps are those from the state before a block to its first four exponential
// numbers, to its first four units, and from any four to the next; inTurn are those to
// its first four numbers, to the four after them, and on. They are never written.
var (
	leaps  = [3]leap{newLeap(1, 3, 5, 7), newLeap(2, 4, 6, 8), newLeap(8, 8, 8, 8)}
	inTurn = [3]leap{newLeap(1, 2, 3, 4), newLeap(5, 6, 7, 8), newLeap(8, 8, 8, 8)}
)

func newLeap(steps ...int) (l leap) {
	const half = 1<<32 - 1
	turn := func(x uint64) uint64 { return x>>32 | x<<32 }
	for i, n := range steps {
		c := generator.steps(n)
		l.multiplierLow[i], l.multiplierMiddle[i], l.multiplierHigh[i] = c.multiplierLow, c.multiplierLow>>32, c.multiplierHigh
		l.turnedLow[i], l.turnedHigh[i] = turn(c.multiplierLow), turn(c.multiplierHigh)
		l.incrementLow[i], l.incrementMiddle[i], l.incrementHigh[i] = c.incrementLow&half, c.incrementLow>>32, c.incrementHigh
	}
	return l
}
