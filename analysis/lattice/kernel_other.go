//go:build !amd64

package lattice

func vectorUnits() bool { return false }

func panel(blocks, k int, a, b, c *float64, ldc int) { plainPanel(blocks, k, a, b, c, ldc) }
