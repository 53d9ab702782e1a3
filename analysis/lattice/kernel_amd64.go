package lattice

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

//go:noescape
func identify(leaf, part uint32) (a, b, c, d uint32)

//go:noescape
func enabledState() uint32

// vectorUnits tells whether the processor and the operating system offer
// four-wide arithmetic with fused multiply-add. Intel 64 and IA-32 Architectures
// Software Developer's Manual, volume 2A, CPUID: leaf 1 ECX bits 12 (FMA) and 27
// (OSXSAVE), leaf 7 EBX bit 5 (AVX2), XCR0 bits 1 and 2.
func vectorUnits() bool {
	const fma, osxsave, avx2, saved = 1 << 12, 1 << 27, 1 << 5, 6
	last, _, _, _ := identify(0, 0)
	if last < 7 {
		return false
	}
	_, _, c, _ := identify(1, 0)
	if c&fma == 0 || c&osxsave == 0 || enabledState()&saved != saved {
		return false
	}
	_, b, _, _ := identify(7, 0)
	return b&avx2 != 0
}
