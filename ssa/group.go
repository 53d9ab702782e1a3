package ssa

import (
	"slices"
)

const (
	// groupWidth is the most reactions in a group of the Dense method.
	groupWidth = 4
	// keySpecies is the most species that the propensities of a group with tables
	// depend on.
	keySpecies = 3
	// tabledGroups is the most groups that a network with tables may have.
	tabledGroups = 8
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
// The groups depend on the network only: they settle which reaction a random
// number chooses.
func (s *system) group() []group {
	keys := s.keys()
	var groups []group
	for r := range s.Network.Reactions {
		if !s.live(r) {
			continue
		}
		k := slices.IndexFunc(keys, func(key []int) bool { return subset(s.Network.Reads(r), key) })
		if k < 0 {
			return s.consecutive()
		}
		groups = join(groups, r, keys[k])
	}
	if len(groups) > tabledGroups {
		return s.consecutive()
	}
	return groups
}

// keys lists the sets of species read by reactions that are not within another
// one, in the order met. Sets of too many species are left out.
func (s *system) keys() [][]int {
	var sets [][]int
	for r := range s.Network.Reactions {
		reads := s.Network.Reads(r)
		if s.live(r) && len(reads) <= keySpecies && !slices.ContainsFunc(sets, func(k []int) bool { return slices.Equal(k, reads) }) {
			sets = append(sets, reads)
		}
	}
	var keys [][]int
	for _, k := range sets {
		within := func(other []int) bool { return len(other) > len(k) && subset(k, other) }
		if !slices.ContainsFunc(sets, within) {
			keys = append(keys, k)
		}
	}
	return keys
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
func (s *system) consecutive() []group {
	var groups []group
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
