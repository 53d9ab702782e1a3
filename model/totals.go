package model

import (
	"cmp"
	"math/big"
	"slices"
)

// A Total is a weighted sum of molecule counts that no reaction changes.
type Total struct {
	// Weights has one whole number a species, without a common divisor.
	Weights []int64
	// Value is the sum at the start, in molecules.
	Value int64
}

// Conserved gives the conserved totals: a basis of the left null space of the
// stoichiometric matrix, in exact arithmetic. The directions of change are each
// reaction's whole-number change and, on its own, each burst product, whose
// number varies from firing to firing.
//
// Where sums with non-negative weights span the space, those with the fewest
// species are given, found by the elimination of Farkas (Schuster and Höfer, J.
// Chem. Soc. Faraday Trans. 87 (1991) 2561); the rest are as the elimination of
// Gauss leaves them. A total whose weights exceed 2⁵³ is left out. For a network
// of thousands of reactions the search for non-negative weights is cut short.
func (n *Network) Conserved() []Total {
	directions := n.directions()
	species := len(n.Species)
	space := nullSpace(directions, species)
	if len(space) == 0 {
		return nil
	}
	chosen := chooseBasis(append(nonNegative(directions, species), space...), len(space))
	start := n.StartCounts()
	var out []Total
	for _, v := range chosen {
		if t, ok := v.total(start); ok {
			out = append(out, t)
		}
	}
	return out
}

// directions lists the changes that single firings make, without repeats.
func (n *Network) directions() []sparse {
	var out []sparse
	for _, r := range n.Reactions {
		var d sparse
		for _, t := range r.Net {
			d = append(d, entry{t.Species, big.NewInt(int64(t.Count))})
		}
		out = append(out, d)
		for _, t := range r.Bursts {
			out = append(out, sparse{{t.Species, big.NewInt(1)}})
		}
	}
	out = slices.DeleteFunc(out, func(d sparse) bool { return len(d) == 0 })
	for _, d := range out {
		d.reduce()
	}
	slices.SortFunc(out, sparse.compare)
	return slices.CompactFunc(out, func(a, b sparse) bool { return a.compare(b) == 0 })
}

// chooseBasis takes independent vectors in order of the number of species, then
// of the weights, until there are enough.
func chooseBasis(vectors []sparse, enough int) []sparse {
	slices.SortStableFunc(vectors, func(a, b sparse) int {
		return cmp.Or(a.signs()-b.signs(), len(a)-len(b), a.compare(b))
	})
	var e echelon
	var out []sparse
	for _, v := range vectors {
		if len(out) < enough && e.add(v) {
			out = append(out, v)
		}
	}
	slices.SortFunc(out, func(a, b sparse) int { return a[0].index - b[0].index })
	return out
}

// mostRays bounds the search for non-negative vectors.
const mostRays = 300

// nonNegative gives the non-negative whole vectors of fewest species that are
// orthogonal to every direction: Farkas' elimination, one direction at a time. A
// vector whose species include all of another's is left out. It gives nothing
// where the vectors become too many.
func nonNegative(directions []sparse, species int) []sparse {
	if species > mostRays {
		return nil
	}
	rays := make([]sparse, species)
	for i := range rays {
		rays[i] = sparse{{i, big.NewInt(1)}}
	}
	for _, d := range directions {
		if rays = crossOut(rays, d); len(rays) > mostRays {
			return nil
		}
	}
	return rays
}

// crossOut keeps the rays orthogonal to d and joins each that has a positive
// product with each that has a negative one.
func crossOut(rays []sparse, d sparse) []sparse {
	var kept, up, down []sparse
	for _, r := range rays {
		switch r.dot(d).Sign() {
		case 0:
			kept = append(kept, r)
		case 1:
			up = append(up, r)
		default:
			down = append(down, r)
		}
	}
	for _, u := range up {
		for _, v := range down {
			joined := combine(u, new(big.Int).Neg(v.dot(d)), v, u.dot(d))
			joined.reduce()
			if kept = addMinimal(kept, joined); len(kept) > mostRays {
				return kept
			}
		}
	}
	return kept
}

// addMinimal adds a vector unless its species include all of another's, and
// leaves out those whose species include all of its own.
func addMinimal(rays []sparse, v sparse) []sparse {
	if slices.ContainsFunc(rays, v.covers) {
		return rays
	}
	return append(slices.DeleteFunc(rays, func(r sparse) bool { return r.covers(v) }), v)
}
