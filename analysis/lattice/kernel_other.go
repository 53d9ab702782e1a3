//go:build !amd64

package lattice

func vectorUnits() bool { return false }

// Without vector units the plain kernels are used, and these are not called.

func panel(blocks, k int, a, b, c *float64, ldc int) {}

func rowSums(rows, columns int, a *float64, stride int, x, y *float64) {}

func columnSums(rows, columns int, a *float64, stride int, x, y *float64) {}
