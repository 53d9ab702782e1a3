package sde_test

import "math"

// doubleWell is dX = (X − X³)dt + √(2D)dW.
type doubleWell struct{ d float64 }

func (doubleWell) Dimension() int                { return 1 }
func (doubleWell) Directions() [][]float64       { return [][]float64{{1}} }
func (doubleWell) Bounds() (low, high []float64) { return nil, nil }
func (doubleWell) Drift(dx, x []float64)         { dx[0] = x[0] - x[0]*x[0]*x[0] }
func (w doubleWell) Noise(g, _ []float64)        { g[0] = math.Sqrt(2 * w.d) }

// line is a system of one coordinate without bounds.
type line struct{ drift, noise func(float64) float64 }

func (line) Dimension() int                { return 1 }
func (line) Directions() [][]float64       { return [][]float64{{1}} }
func (line) Bounds() (low, high []float64) { return nil, nil }
func (l line) Drift(dx, x []float64)       { dx[0] = l.drift(x[0]) }
func (l line) Noise(g, x []float64)        { g[0] = l.noise(x[0]) }

func linear(c float64) func(float64) float64   { return func(x float64) float64 { return c * x } }
func constant(c float64) func(float64) float64 { return func(float64) float64 { return c } }
