package lattice

import "golang.org/x/sys/cpu"

// panel adds the product of packed panels to c; see kernel_amd64.s.
//
//go:noescape
func panel(blocks, k int, a, b, c *float64, ldc int)

// rowSums adds a·x to y; see kernel_amd64.s.
//
//go:noescape
func rowSums(rows, columns int, a *float64, stride int, x, y *float64)

// columnSums adds x·a to y; see kernel_amd64.s.
//
//go:noescape
func columnSums(rows, columns int, a *float64, stride int, x, y *float64)

// vectorUnits tells whether the processor and the operating system offer four-wide
// arithmetic with fused multiply-add.
func vectorUnits() bool { return cpu.X86.HasAVX2 && cpu.X86.HasFMA }
