package sde

import (
	"math"

	"holdfast/model"
)

// The loops over lanes. Each writes to at every lane, and reads as many lanes of its
// arguments, whose number is a multiple of padding. Products are rounded before they
// are added, on every machine. Those that are called Plain have a form for four lanes at a
// time, on machines that have that, which gives the same bytes.

func addPlain(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] + b[i]
	}
}

func subPlain(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] - b[i]
	}
}

func mulPlain(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] * b[i]
	}
}

func divPlain(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] / b[i]
	}
}

func sqrtPlain(to, a []float64) {
	a = a[:len(to)]
	for i := range to {
		to[i] = math.Sqrt(a[i])
	}
}

// guardPlain makes NaN of what is below 0.
func guardPlain(to, a []float64) {
	a = a[:len(to)]
	for i := range to {
		v := a[i]
		if !(v >= 0) {
			v = math.NaN()
		}
		to[i] = v
	}
}

// cutPlain is max(a, 0).
func cutPlain(to, a []float64) {
	a = a[:len(to)]
	for i := range to {
		to[i] = max(a[i], 0)
	}
}

// powLanes is a power with a fixed exponent that is not whole.
func powLanes(to, a []float64, exponent float64) {
	a = a[:len(to)]
	for i := range to {
		to[i] = math.Pow(a[i], exponent)
	}
}

// applyLanes is any operator or function.
func applyLanes(op model.Op, to, a, b, c []float64) {
	a, b, c = a[:len(to)], b[:len(to)], c[:len(to)]
	for i := range to {
		to[i] = model.Apply(op, a[i], b[i], c[i])
	}
}

// noisePlain is the change along a direction in a step h: drift·h + √(variance·h) z.
func noisePlain(to, drift, variance, z []float64, h float64) {
	drift, variance, z = drift[:len(to)], variance[:len(to)], z[:len(to)]
	for i := range to {
		to[i] = float64(drift[i]*h) + float64(math.Sqrt(variance[i]*h)*z[i])
	}
}

// pairPlain is noisePlain for the drift up − down and the variance up + down.
func pairPlain(to, up, down, z []float64, h float64) {
	up, down, z = up[:len(to)], down[:len(to)], z[:len(to)]
	for i := range to {
		u, d := up[i], down[i]
		to[i] = float64((u-d)*h) + float64(math.Sqrt((u+d)*h)*z[i])
	}
}

// movePlain adds by·v to x.
func movePlain(x, by []float64, v float64) {
	by = by[:len(x)]
	for i := range x {
		x[i] += float64(by[i] * v)
	}
}

// reflectPlain adds by·v to x, reflects at 0, and tells whether some lane is then
// above limit or no number.
func reflectPlain(x, by []float64, v, limit float64) (over bool) {
	by = by[:len(x)]
	for i := range x {
		n := math.Abs(x[i] + float64(by[i]*v))
		x[i] = n
		if !(n <= limit) {
			over = true
		}
	}
	return over
}

// overLanes tells whether some lane is beyond ±limit or no number.
func overLanes(x []float64, limit float64) (over bool) {
	for _, n := range x {
		if !(math.Abs(n) <= limit) {
			over = true
		}
	}
	return over
}

// belowLanes tells whether some lane is below 0.
func belowLanes(x []float64) (below bool) {
	for _, n := range x {
		if n < 0 {
			below = true
		}
	}
	return below
}

// withinPlain tells whether some lane is from low to high.
func withinPlain(x []float64, low, high float64) (within bool) {
	for _, n := range x {
		if n >= low && n <= high {
			within = true
		}
	}
	return within
}

// columnsPlain puts the four rows of as many numbers that from holds end to end into to
// as columns: those of a row follow each other at every room-th place.
func columnsPlain(to []float64, room int, from []float64) {
	n := len(from) / padding
	for i := range padding {
		for k, v := range from[i*n : (i+1)*n] {
			to[k*room+i] = v
		}
	}
}
