package sde

import (
	"math"

	"holdfast/model"
)

// The loops over lanes. Each writes to at every lane, and reads as many lanes of
// its arguments. Products are rounded before they are added, on every machine.

func addLanes(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] + b[i]
	}
}

func subLanes(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] - b[i]
	}
}

func mulLanes(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] * b[i]
	}
}

func divLanes(to, a, b []float64) {
	a, b = a[:len(to)], b[:len(to)]
	for i := range to {
		to[i] = a[i] / b[i]
	}
}

func sqrtLanes(to, a []float64) {
	a = a[:len(to)]
	for i := range to {
		to[i] = math.Sqrt(a[i])
	}
}

// guardLanes makes NaN of what is below 0.
func guardLanes(to, a []float64) {
	a = a[:len(to)]
	for i := range to {
		v := a[i]
		if !(v >= 0) {
			v = math.NaN()
		}
		to[i] = v
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

// noiseLanes is the change along a direction in a step h: drift·h + √(variance·h) z.
func noiseLanes(to, drift, variance, z []float64, h float64) {
	drift, variance, z = drift[:len(to)], variance[:len(to)], z[:len(to)]
	for i := range to {
		to[i] = float64(drift[i]*h) + float64(math.Sqrt(variance[i]*h)*z[i])
	}
}

// pairLanes is noiseLanes for the drift up − down and the variance up + down.
func pairLanes(to, up, down, z []float64, h float64) {
	up, down, z = up[:len(to)], down[:len(to)], z[:len(to)]
	for i := range to {
		u, d := up[i], down[i]
		to[i] = float64((u-d)*h) + float64(math.Sqrt((u+d)*h)*z[i])
	}
}

// moveLanes adds by·v to x.
func moveLanes(x, by []float64, v float64) {
	by = by[:len(x)]
	for i := range x {
		x[i] += float64(by[i] * v)
	}
}

// reflectLanes adds by·v to x, reflects at 0, and tells whether some lane is then
// above limit or no number.
func reflectLanes(x, by []float64, v, limit float64) (over bool) {
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

// withinLanes tells whether some lane is from low to high.
func withinLanes(x []float64, low, high float64) (within bool) {
	for _, n := range x {
		if n >= low && n <= high {
			within = true
		}
	}
	return within
}
