package sde

import (
	"errors"
	"fmt"
	"math"
)

// A System is a stochastic differential equation in the sense of Itô,
//
//	dX = f(X) dt + Σ_d v_d g_d(X) dW_d,
//
// with independent Wiener processes W_d. Its methods are called by several
// goroutines at once, and must neither keep nor change their arguments but the
// first.
type System interface {
	// Dimension is the number of coordinates.
	Dimension() int
	// Directions gives the vectors v_d, each as long as Dimension says. None may be
	// zero. Terms of the same direction are best merged: the law is the same, and
	// each takes a normal number a step.
	Directions() [][]float64
	// Bounds gives the walls that paths are reflected at, one a coordinate; −Inf and
	// +Inf, or nil for all, where there is none.
	Bounds() (low, high []float64)
	// Drift overwrites dx, one a coordinate, with f(x).
	Drift(dx, x []float64)
	// Noise overwrites g, one a direction, with g_d(x).
	Noise(g, x []float64)
}

// checkSystem says what is wrong with a system's shape.
func checkSystem(s System) error {
	n := s.Dimension()
	if n < 1 {
		return fmt.Errorf("system has the dimension %d; it must be at least 1", n)
	}
	low, high := s.Bounds()
	if err := checkBounds(n, low, high); err != nil {
		return err
	}
	directions := s.Directions()
	if len(directions) == 0 {
		return errors.New("system has no noise direction: no path would ever leave a resting state")
	}
	for d, v := range directions {
		if err := checkDirection(n, d, v); err != nil {
			return err
		}
	}
	return nil
}

func checkBounds(n int, low, high []float64) error {
	if (low != nil && len(low) != n) || (high != nil && len(high) != n) {
		return fmt.Errorf("system has %d low and %d high bounds for %d coordinates; each must be nil or one a coordinate", len(low), len(high), n)
	}
	for i := range n {
		if l, h := boundAt(low, i, math.Inf(-1)), boundAt(high, i, math.Inf(1)); !(l < h) {
			return fmt.Errorf("coordinate %d is bounded by %v and %v; the first must be below the second", i, l, h)
		}
	}
	return nil
}

// boundAt gives bounds[i], or none where there are no bounds.
func boundAt(bounds []float64, i int, none float64) float64 {
	if bounds == nil {
		return none
	}
	return bounds[i]
}

func checkDirection(n, d int, v []float64) error {
	if len(v) != n {
		return fmt.Errorf("noise direction %d is missing or incomplete: it has %d of %d coordinates", d, len(v), n)
	}
	length := 0.0
	for i, c := range v {
		if math.IsNaN(c) || math.IsInf(c, 0) {
			return fmt.Errorf("noise direction %d has %v in coordinate %d; it must be finite", d, c, i)
		}
		length = max(length, math.Abs(c))
	}
	if length == 0 {
		return fmt.Errorf("noise direction %d is zero in every coordinate", d)
	}
	return nil
}
