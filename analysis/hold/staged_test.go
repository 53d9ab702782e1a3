package hold_test

import (
	"math"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
)

// Two genes, dimers and two overlapping operators by staged runs, along the straight
// line since an operator of one copy has no least action: the rate at which one state is
// left, against 1.2287e-4 per unit of time (computed from the full master equation, to
// 0.2 %; model family: Allen, Warren, ten Wolde, Phys. Rev. Lett. 94 (2005) 018104).
// The statistic is the logarithm of the rate over its standard error, Student's t
// with nine degrees of freedom or more, within ±10.7 (a false alarm in a million or less).
func TestDimerSwitchByStagedRuns(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the run without the race detector")
	}
	r := run(t, zoo.DimerSwitch(), hold.Options{Seed: 1, Route: hold.Staged, Precision: 0.3})
	for _, d := range r.Dwells {
		z := math.Log(1/float64(d.Mean)/zoo.DimerSwitchFlipRate()) * float64(d.Mean/d.StandardError)
		if !(math.Abs(z) < 10.7) {
			t.Errorf("%s → %s: rate %.4g, z = %.1f", d.From, d.To, 1/float64(d.Mean), z)
		}
		t.Logf("%s → %s: rate %.4g [%.4g, %.4g], z = %.1f", d.From, d.To, 1/float64(d.Mean), 1/float64(d.High), 1/float64(d.Low), z)
	}
	for _, s := range r.Staged {
		t.Logf("%+v", s)
	}
}
