package dwell

import (
	"math"
	"testing"
)

// Weeks in remission of the 21 patients on 6-mercaptopurine (Freireich and others,
// Blood 21 (1963) 699; the data as most textbooks of survival analysis print them,
// from memory). To Censored: still in remission when last seen.
func remissions() (obs []Observation) {
	for _, t := range []float64{6, 6, 6, 7, 10, 13, 16, 22, 23} {
		obs = append(obs, Observation{To: 1, Time: t})
	}
	for _, t := range []float64{6, 9, 10, 11, 17, 19, 20, 25, 32, 32, 34, 35} {
		obs = append(obs, Observation{To: Censored, Time: t})
	}
	return obs
}

// The estimates are the textbook's worked example; the limits on the scale of the
// logarithm of the cumulative hazard were computed by hand from Greenwood's sum.
func TestKaplanMeierRemissions(t *testing.T) {
	want := []Step{
		{6, 21, 3, 0.8571, 0.6197, 0.9516},
		{7, 17, 1, 0.8067, 0.5631, 0.9228},
		{10, 15, 1, 0.7529, 0.5032, 0.8894},
		{13, 12, 1, 0.6902, 0.4316, 0.8491},
		{16, 11, 1, 0.6275, 0.3675, 0.8049},
		{22, 7, 1, 0.5378, 0.2678, 0.7468},
		{23, 6, 1, 0.4482, 0.1881, 0.6801},
	}
	s := KaplanMeier(remissions(), Any, 0.95)
	if len(s.Steps) != len(want) {
		t.Fatalf("%d steps, want %d", len(s.Steps), len(want))
	}
	const half = 0.51e-4 // of the last printed digit
	for i, w := range want {
		g := s.Steps[i]
		if g.Time != w.Time || g.AtRisk != w.AtRisk || g.Flips != w.Flips ||
			math.Abs(g.Chance-w.Chance) > half || math.Abs(g.Low-w.Low) > half || math.Abs(g.High-w.High) > half {
			t.Errorf("step %d: %+v, want %+v", i, g, w)
		}
	}
}

func TestSurvivalAt(t *testing.T) {
	s := KaplanMeier(remissions(), Any, 0.95)
	for _, row := range []struct {
		t, chance float64
		ok        bool
	}{{0, 1, true}, {5.9, 1, true}, {6, 0.857143, true}, {22.5, 0.537815, true}, {35, 0.448179, true}, {35.1, 0, false}} {
		chance, low, high, ok := s.At(row.t)
		if ok != row.ok || ok && (math.Abs(chance-row.chance) > 1e-6 || low > chance || high < chance) {
			t.Errorf("At(%v) = %v [%v, %v] %v, want %v %v", row.t, chance, low, high, ok, row.chance, row.ok)
		}
	}
}

// Before the first flip n dwells have all held: the exact lower limit for the
// chance is (α/2)^(1/n), for 21 of 21 at 95 % 0.8389 (Clopper and Pearson,
// Biometrika 26 (1934) 404; computed by hand).
func TestSurvivalBeforeFirstFlip(t *testing.T) {
	s := KaplanMeier(remissions(), Any, 0.95)
	chance, low, high, ok := s.At(3)
	if !ok || chance != 1 || high != 1 || math.Abs(low-0.8389) > 0.51e-4 {
		t.Errorf("At(3) = %v [%v, %v] %v, want 1 [0.8389, 1]", chance, low, high, ok)
	}
}

// Without censoring the curve is the share of dwells that last longer, and 0 past
// the last one, with the upper limit of the step before.
func TestSurvivalComplete(t *testing.T) {
	obs := []Observation{{To: 1, Time: 4}, {To: 1, Time: 1}, {To: 2, Time: 3}, {To: 1, Time: 2}}
	s := KaplanMeier(obs, Any, 0.95)
	for i, want := range []float64{0.75, 0.5, 0.25, 0} {
		if got := s.Steps[i].Chance; math.Abs(got-want) > 1e-15 {
			t.Errorf("step %d: %v, want %v", i, got, want)
		}
	}
	chance, low, high, ok := s.At(100)
	if !ok || chance != 0 || low != 0 || high != s.Steps[2].High {
		t.Errorf("At(100) = %v [%v, %v] %v", chance, low, high, ok)
	}
	if one := KaplanMeier(obs, 2, 0.95); len(one.Steps) != 1 || one.Steps[0].Chance != 0.5 {
		t.Errorf("to state 2 alone: %+v, want one step to 1/2", one.Steps)
	}
}
