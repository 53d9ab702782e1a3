package proof_test

import (
	"math"
	"testing"

	"holdfast/model"
)

// doublePhosphorylation is a protein of 500 that a kinase phosphorylates twice and a
// phosphatase strips twice, both enzymes shared by their substrates; one total is
// conserved. Markevich, Hoek, Kholodenko, J. Cell Biol. 164 (2004) 353 (the model
// and its two stable states at a kinase of 50; constants from memory).
func doublePhosphorylation(t *testing.T, kinase float64) *model.Network {
	d := newDesign("m", "mp", "mpp")
	d.draft.Species[0].Start = 500
	part := func(s string, k float64) *model.Node { return over(d.x(s), num(k)) }
	up := plus(num(1), plus(part("m", 50), part("mp", 500)))
	down := plus(num(1), plus(part("mpp", 22), plus(part("mp", 18), part("m", 78))))
	d.rate("m", "mp", over(times(num(0.01*kinase), part("m", 50)), up))
	d.rate("mp", "mpp", over(times(num(15*kinase), part("mp", 500)), up))
	d.rate("mpp", "mp", over(times(num(8.4), part("mpp", 22)), down))
	d.rate("mp", "m", over(times(num(6), part("mp", 18)), down))
	return d.network(t)
}

// TestDoublePhosphorylation: two stable states and one between at a kinase of 50,
// one state far from it. At rest each step runs as fast forth as back, which is
// checked at the states listed.
func TestDoublePhosphorylation(t *testing.T) {
	for kinase, want := range map[float64]int{5: 1, 20: 1, 50: 3, 100: 1, 400: 1} {
		n := doublePhosphorylation(t, kinase)
		r := prove(t, n, nil, nil)
		if !r.Complete || !r.All || len(r.Roots) != want {
			t.Errorf("kinase %v: %v; want %d", kinase, r, want)
			continue
		}
		for _, root := range r.Roots {
			x := root.Point
			first, second := n.Flux(0, x)-n.Flux(3, x), n.Flux(1, x)-n.Flux(2, x)
			if sum := x[0] + x[1] + x[2]; math.Abs(sum-500) > 1e-9 || math.Abs(first)+math.Abs(second) > 1e-9 {
				t.Errorf("kinase %v: at %v the fluxes differ by %v and %v, the total is %v", kinase, x, first, second, sum)
			}
		}
	}
}
