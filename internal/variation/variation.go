// Package variation gives the values that the constants of a network take in one
// cell: log-normal from cell to cell, and, where they have a memory, in time.
//
// The logarithm of such a constant is an Ornstein–Uhlenbeck process about that of
// its median. It is held for an interval Δ at a time; from one interval to the next the
// process makes its exact transition, η′ = ρη + √(1−ρ²)ξ with ρ = e^(−Δ/memory) and ξ
// normal (Gillespie, Phys. Rev. E 54 (1996) 2084). A cell begins at a random moment of
// an interval, so that no later moment is special: the value has its exact law at
// every moment, and two values at a lag t have a covariance that is linear in t from
// each whole multiple of Δ, where it is exact, to the next, as if each value stood for
// the middle of its interval. There is no error of the first order in Δ: the integral
// of the covariance is too large by the share (Δ/memory)²/12, for a small spread. See
// DefaultInterval.
package variation

import (
	"math"

	"holdfast/internal/stream"
	"holdfast/model"
)

// A Law says how the constants of a network vary. It is only read, and may be shared.
type Law struct {
	// Interval is the time, in the network's unit, for which constants that vary in
	// time are held; 0: none varies in time.
	Interval  float64
	constants []constant
	values    []float64
}

type constant struct {
	index         int
	value, spread float64
	moves         bool    // varies in time
	keep, renew   float64 // ρ and √(1−ρ²)
}

// intervals is the number of default intervals in a memory.
const intervals = 20

// DefaultInterval gives the time for which constants of the network that vary in time
// are held if nothing else is said: a twentieth of the shortest memory, divided by the
// square of the spread where that is above 1; 0 where none varies in time.
//
// With s for the spread, the covariance of e^(sη) at the lag t is e^(s²)(e^(s²ρ)−1)
// with ρ = e^(−t/memory), a sum of exponentials of weight s²ᵏ/k! and rate k/memory. The
// integral of each, on which a slow network's answer depends, is too large by
// (kΔ/memory)²/12; that of them all by less than one part in 2,000.
func DefaultInterval(net *model.Network) float64 {
	shortest := math.Inf(1)
	for _, i := range net.Varying() {
		if c := &net.Constants[i]; c.Memory > 0 {
			shortest = min(shortest, c.Memory/intervals/max(1, c.Spread*c.Spread))
		}
	}
	if math.IsInf(shortest, 1) {
		return 0
	}
	return shortest
}

// Of gives the law of a network's constants, held for interval, or, if that is 0, for
// DefaultInterval; nil where none varies.
func Of(net *model.Network, interval float64) *Law {
	if len(net.Varying()) == 0 {
		return nil
	}
	l := &Law{values: net.ConstantValues()}
	if l.Interval = DefaultInterval(net); l.Interval > 0 && interval > 0 {
		l.Interval = interval
	}
	for _, i := range net.Varying() {
		c := &net.Constants[i]
		v := constant{index: i, value: c.Value, spread: c.Spread, moves: c.Memory > 0}
		if v.moves {
			v.keep, v.renew = math.Exp(-l.Interval/c.Memory), math.Sqrt(-math.Expm1(-2*l.Interval/c.Memory))
		}
		l.constants = append(l.constants, v)
	}
	return l
}

// key tells the streams of constants from those of runs: the leading bits of the
// square root of 5.
const key = 0x3c6ef372fe94f82b

// Stream gives the random numbers of the constants of a run, whose own come from
// stream.New of the same three numbers.
func Stream(seed, point, replicate uint64) stream.Stream {
	return stream.New(seed^key, point, replicate)
}

// A Cell is the constants of one cell under way. It must not be used by two
// goroutines at once.
type Cell struct {
	// Values are those of all the network's constants now, by index. They must not be
	// changed.
	Values []float64
	// First is the share of its first interval that is still to come when the cell
	// begins, from 0 to 1.
	First float64

	law       *Law
	random    stream.Stream
	deviation []float64 // of the logarithm, in spreads, by place in law.constants
}

// NewCell gives room for the constants of a cell, whose values are the medians
// until Begin is called.
func (l *Law) NewCell() *Cell {
	return &Cell{Values: append([]float64(nil), l.values...), law: l, deviation: make([]float64, len(l.constants))}
}

// Begin draws the constants of a new cell, and its place in their first interval, with
// random numbers from there on.
func (c *Cell) Begin(random stream.Stream) {
	c.random = random
	c.First = c.random.Float64()
	for k := range c.law.constants {
		c.deviation[k] = c.random.Normal()
		c.set(k)
	}
}

// Step brings the constants that vary in time to the next interval.
func (c *Cell) Step() {
	for k := range c.law.constants {
		if v := &c.law.constants[k]; v.moves {
			c.deviation[k] = v.keep*c.deviation[k] + v.renew*c.random.Normal()
			c.set(k)
		}
	}
}

func (c *Cell) set(k int) {
	v := &c.law.constants[k]
	c.Values[v.index] = v.value * math.Exp(v.spread*c.deviation[k])
}
