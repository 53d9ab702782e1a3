package ssa

import "slices"

const (
	// groupWidth is the most reactions in a group of the Dense method.
	groupWidth = 4
	// keySpecies is the most species that the propensities of a group with tables
	// depend on.
	keySpecies = 3
	// tabledGroups is the most groups that a network with tables may have.
	tabledGroups = 8
	// fewGroups are so few that no fewer would be faster.
	fewGroups = 4
)

// A group is a few reactions whose propensities Dense sums on their own.
type group struct {
	reactions []int
	// species are those that the propensities depend on; nil in a network without
	// tables.
	species []int
}

// group puts the live reactions in groups. Where few groups are enough, those
// that read the same few species are together, so that their running sums can be
// looked up by the counts; otherwise they go together in the order they stand.
//
// The groups settle which reaction a random number chooses, so they depend on the
// plan's network and start only.
func (s *system) group() []group {
	sets := s.sets()
	if slices.ContainsFunc(sets, func(g group) bool { return len(g.species) > keySpecies }) {
		return s.consecutive()
	}
	groups := absorb(sets)
	if len(groups) > fewGroups && len(sets) < sparseFrom { // merging takes the cube of their number
		if fewer := s.merge(sets); len(fewer) < len(groups) {
			groups = fewer
		}
	}
	if len(groups) > tabledGroups {
		return s.consecutive()
	}
	return groups
}

// sets puts live reactions that read the same species together, in the order met.
func (s *system) sets() (sets []group) {
	for r := range s.Network.Reactions {
		if s.live(r) {
			sets = join(sets, r, s.Network.Reads(r))
		}
	}
	return sets
}

// absorb puts sets of reactions into groups whose species are not within those of
// another set.
func absorb(sets []group) (groups []group) {
	for _, set := range sets {
		key := set.species
		for _, other := range sets {
			if len(other.species) > len(key) && subset(key, other.species) {
				key = other.species
			}
		}
		for _, r := range set.reactions {
			groups = join(groups, r, key)
		}
	}
	return groups
}

// join adds reaction r to the first group of this key that has room, or to a new one.
func join(groups []group, r int, key []int) []group {
	for i := range groups {
		if slices.Equal(groups[i].species, key) && len(groups[i].reactions) < groupWidth {
			groups[i].reactions = append(groups[i].reactions, r)
			return groups
		}
	}
	return append(groups, group{[]int{r}, key})
}

// consecutive puts the live reactions into groups as they stand.
func (s *system) consecutive() (groups []group) {
	for r := range s.Network.Reactions {
		if s.live(r) {
			groups = join(groups, r, nil)
		}
	}
	return groups
}

func subset(a, b []int) bool {
	for _, x := range a {
		if !slices.Contains(b, x) {
			return false
		}
	}
	return true
}
