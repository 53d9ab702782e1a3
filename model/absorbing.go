package model

import (
	"slices"
)

// An Absorber is a set of states that is never left: those in which certain
// species are all gone.
type Absorber struct {
	// Empty lists the species, ascending, whose counts are 0.
	Empty []int
	// Frozen tells that nothing at all can happen any more. Otherwise reactions go
	// on among the other species, but none brings one of Empty back.
	Frozen bool
	// AtStart tells that the design's start is in the set.
	AtStart bool
}

// Absorbing finds the absorbing sets that are made by species running out, from
// the reactions alone. A reaction counts as stopped by a set of empty species if
// it uses one of them, if it is mass action and needs one, if its coefficient is
// 0, or if its law is 0 without them wherever it is finite, whatever the other
// species do (products, sums, powers and Hill functions are followed). It gives
//
//   - the frozen sets: minimal sets of species that, once all are empty, stop every
//     reaction;
//   - the traps: minimal sets of species such that every reaction that makes one of
//     them is stopped once all are empty (siphons; Angeli, De Leenheer, Sontag,
//     Math. Biosci. 210 (2007) 598), where other reactions go on.
//
// Sets that hold a conserved total of non-negative weights with a value above 0
// cannot run empty and are left out.
//
// Not found are: states that are absorbing at counts above 0, such as one molecule
// left of a reaction that needs two and nothing else that removes it; laws that are
// 0 by cancellation; sets beyond a bound on the search, which networks of about a
// hundred species or more may reach. Whether a set is reached from the start, and
// how soon, is not said.
func (n *Network) Absorbing() []Absorber {
	s := newSiphonSearch(n)
	frozen := s.frozen()
	var out []Absorber
	for _, z := range frozen {
		out = append(out, s.absorber(z, true))
	}
	for _, z := range s.traps() {
		if !slices.ContainsFunc(frozen, func(f []bool) bool { return slices.Equal(f, z) }) {
			out = append(out, s.absorber(z, false))
		}
	}
	return out
}
