package ssa

import (
	"unsafe"

	"golang.org/x/sys/cpu"

	"holdfast/internal/stream"
)

// wideRush gives the rush in assembly for the rows, or nil where the machine cannot
// run it.
func (k *lookup) wideRush() rush {
	if !cpu.X86.HasAVX2 || !cpu.X86.HasBMI1 {
		return nil
	}
	if k.pair() {
		return func(k *lookup, lanes []lane, step, i int) (int, int) {
			shifts := k.pairShifts()
			return ended(rushPairWide(&k.entries[0], &k.cores[0], &shifts, &lanes[0], len(lanes), step, i))
		}
	}
	wide := rushEightWide
	switch n := len(k.rows); {
	case n == 1:
		wide = rushOneWide
	case n == 2:
		wide = rushTwoWide
	case n <= 4:
		wide = rushFourWide
	case n <= 6:
		wide = rushSixWide
	}
	return func(k *lookup, lanes []lane, step, i int) (int, int) {
		return ended(wide(&k.entries[0], &k.cores[0], &k.shifts, k.bursty, &lanes[0], len(lanes), step, i))
	}
}

// ended makes the step and lane that a rush ended at of their offsets in bytes.
func ended(step, i uintptr) (int, int) {
	return int(step / unsafe.Sizeof(0.0)), int(i / unsafe.Sizeof(lane{}))
}

// unitsAt is where the units are in a batch.
//
//lint:ignore U1000 it is used in assembly
const unitsAt = unsafe.Offsetof(stream.Batch{}.Unit)

// A wide rush does what the rush in Go of its width does, to the last bit, in fewer
// instructions. It takes steps from step (< blockSteps) and lane i (< n) on, and gives
// the offsets in bytes of the event it leaves.

//go:noescape
func rushPairWide(entries *entry, cores *uint64, shifts *[4]uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)

//go:noescape
func rushOneWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)

//go:noescape
func rushTwoWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)

//go:noescape
func rushFourWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)

//go:noescape
func rushSixWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)

//go:noescape
func rushEightWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)
