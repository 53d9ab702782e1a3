package hold_test

import (
	"math"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
)

// Two genes, dimers and two overlapping operators, which no lattice of three
// dimensions holds: the rate at which one state is left by exact runs, against
// 1.2287e-4 per unit of time (computed from the full master equation, to 0.2 %;
// model family: Allen, Warren, ten Wolde, Phys. Rev. Lett. 94 (2005) 018104). The
// statistic is the logarithm of rates over its standard error 1/√flips, within ±4.9 (a
// false alarm in a million).
func TestDimerSwitchByExactRuns(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	rate := zoo.DimerSwitchFlipRate()
	r := run(t, zoo.DimerSwitch(), hold.Options{Seed: 4, Route: hold.Runs, Runs: 60})
	flips, exposure := 0.0, 0.0
	for _, d := range r.Dwells {
		flips, exposure = flips+float64(d.Flips), exposure+float64(d.Exposure)
	}
	if z := math.Log(flips/exposure/rate) * math.Sqrt(flips); flips < 100 || math.Abs(z) > 4.9 {
		t.Errorf("%v flips in %v: rate %.4g, want %.4g: z = %.1f", flips, exposure, flips/exposure, rate, z)
	}
	t.Logf("%v flips, rate %.4g", flips, flips/exposure)
}
