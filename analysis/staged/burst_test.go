package staged_test

import (
	"testing"

	"holdfast/internal/zoo"
)

// A latch made in geometric bursts, which leap over rungs, against the master equation on its
// lattice, both ways. The statistic is Student's t of the repeats on the logarithm; a
// false alarm comes once in a million times each.
func TestBurstsAgainstTheLattice(t *testing.T) {
	m := survey(t, zoo.BurstLatch(40))
	exact := solve(t, m)
	for _, c := range [][2]int{{0, 1}, {1, 0}} {
		p := plan(m, c[0], c[1])
		p.Precision = 0.15
		r := estimate(t, p)
		truth := exact.Pair[c[0]][c[1]]
		t.Logf("%d → %d: %.4g min, lattice %.4g, %d repeats", c[0], c[1], 1/r.Rate, truth, len(r.Repeats))
		if z := apart(r, 1/truth); z > wide(len(r.Repeats)) || z < -wide(len(r.Repeats)) {
			t.Errorf("%d → %d: mean dwell %.5g min, lattice %.5g, %.1f standard errors apart", c[0], c[1], 1/r.Rate, truth, z)
		}
	}
}
