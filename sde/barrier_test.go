package sde_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"holdfast/model"
	"holdfast/sde"
)

// barriers gives, for a one-species network, the barrier of its Langevin equation,
// ∫−2f/g²dx = ∫2(d−b)/(d+b)dx, from what the System says, and that of the exact chain,
// ∫ln(d/b)dx, from its propensities (both common practice; Hänggi, Grabert, Talkner, Thomas, Phys.
// Rev. A 29 (1984) 371, from memory). from and to are the resting point and the saddle.
func barriers(net *model.Network, from, to float64) (langevin, exact float64) {
	s := sde.Chemical(net)
	langevin = quad.Fixed(func(x float64) float64 {
		f, g := rates(s, x)
		return -2 * f / (g * g)
	}, from, to, 200, nil, 0)
	exact = quad.Fixed(func(x float64) float64 {
		f, g := rates(s, x)
		return math.Log((g*g - f) / (g*g + f)) // births (g²+f)/2, deaths (g²−f)/2
	}, from, to, 200, nil, 0)
	return langevin, exact
}

// zeros lists the zeros of the drift from 0 to 1000, found on a grid and by bisection.
func zeros(s sde.System) (out []float64) {
	for k := range 2000 {
		low, high := float64(k)/2, float64(k+1)/2
		f0, _ := rates(s, low)
		if f1, _ := rates(s, high); (f0 > 0) == (f1 > 0) {
			continue
		}
		for range 60 {
			middle := (low + high) / 2
			if f, _ := rates(s, middle); (f > 0) == (f0 > 0) {
				low = middle
			} else {
				high = middle
			}
		}
		out = append(out, low)
	}
	return out
}

// schlogl is the chain of two states whose macroscopic roots, with powers, are r and
// 220, 400: the one of the published numbers at r = 100.
func schlogl(t *testing.T, r float64) *model.Network {
	t.Helper()
	const k = 2.5e-4
	x := func(n int) []model.Term { return []model.Term{{Species: 0, Count: n}} }
	d := model.Draft{
		Copies: 1, Species: []model.Species{{Name: "a"}},
		Reactions: []model.DraftReaction{
			{Name: "three to two", MassAction: model.Number(k), Needs: x(2), Uses: x(1)},
			{Name: "two to three", MassAction: model.Number(k * (r + 220 + 400)), Needs: x(2), Makes: x(1)},
			{Name: "loss", MassAction: model.Number(k * (r*220 + r*400 + 220*400)), Uses: x(1)},
			{Name: "source", MassAction: model.Number(k * r * 220 * 400), Makes: x(1)},
		},
	}
	net, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return net
}

// The barrier from the low state of Schlögl to the saddle: far from the fold, where
// the low state is low, the Langevin equation has another one than the exact chain, and
// they meet as the low state goes up to the saddle. With w = (d−b)/(d+b) the
// integrands are 2w and ln((1+w)/(1−w)) = 2w + 2w³/3 + 2w⁵/5 + …: the Langevin
// barrier is always below, by at most w²/3/(1−w²) of it at the largest w, and w
// vanishes at the fold. The roots at r = 100 are 98.847 and 220.613 (computed).
func TestBarriersMeetAtTheFold(t *testing.T) {
	before := 1.0
	for _, r := range []float64{5, 20, 50, 100, 150, 200} {
		net := schlogl(t, r)
		s := sde.Chemical(net)
		roots := zeros(s)
		if r == 100 && (math.Abs(roots[0]-98.847) > 6e-4 || math.Abs(roots[1]-220.613) > 6e-4) {
			t.Errorf("roots %v, want 98.847 and 220.613", roots)
		}
		langevin, exact := barriers(net, roots[0], roots[1])
		worst := 0.0
		for k := range 1001 {
			f, g := rates(s, roots[0]+(roots[1]-roots[0])*float64(k)/1000)
			worst = max(worst, math.Abs(f/(g*g)))
		}
		off, most := 1-langevin/exact, worst*worst/3/(1-worst*worst)
		t.Logf("low state %.2f, saddle %.2f: Langevin barrier %.5f, exact %.5f, off by %.2g", roots[0], roots[1], langevin, exact, off)
		if !(off > 0) || off > most || off >= before {
			t.Errorf("low state %v: Langevin barrier %v, exact %v: off by %v, at most %v expected and less than %v", roots[0], langevin, exact, off, most, before)
		}
		if r == 5 && exact-langevin < math.Log(10) {
			t.Errorf("far from the fold the barriers are %v and %v: flips should be wrong by more than a factor of ten", langevin, exact)
		}
		before = off
	}
	if before > 1e-5 {
		t.Errorf("near the fold the barriers are still %v apart", before)
	}
}
