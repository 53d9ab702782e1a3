package ssa

import (
	"math"
	"slices"
)

const (
	// mergedEntries is the most combinations of counts, of those a pilot run came
	// to, that a group merged of others may have: its table should stay in the cache.
	mergedEntries = 1024
	// pilotEvents is the length of the pilot run.
	pilotEvents = 1000
)

// merge puts sets of reactions together, those of the fewest combinations of
// counts first, until few groups are left or none can be merged.
func (s *system) merge(sets []group) []group {
	reached := s.pilot()
	groups := slices.Clone(sets)
	for len(groups) > fewGroups {
		a, b := closest(groups, reached)
		if a < 0 {
			break
		}
		groups[a] = union(groups[a], groups[b])
		groups = slices.Delete(groups, b, b+1)
	}
	return groups
}

// closest gives the pair of groups that has the fewest combinations of counts
// when merged, a before b, or −1 where none may be.
func closest(groups []group, reached []int64) (a, b int) {
	a, b, best := -1, -1, math.Inf(1)
	for i := range groups {
		for j := i + 1; j < len(groups); j++ {
			u := union(groups[i], groups[j])
			if len(u.reactions) > groupWidth || len(u.species) > keySpecies {
				continue
			}
			if size := combinations(u.species, reached); size < best && size <= mergedEntries {
				a, b, best = i, j, size
			}
		}
	}
	return a, b
}

func union(a, b group) group {
	u := group{slices.Concat(a.reactions, b.reactions), slices.Concat(a.species, b.species)}
	slices.Sort(u.reactions)
	slices.Sort(u.species)
	u.species = slices.Compact(u.species)
	return u
}

func combinations(species []int, reached []int64) float64 {
	size := 1.0
	for _, i := range species {
		size *= float64(reached[i] + 1)
	}
	return size
}

// pilot gives the largest count of each species in a short run from the start,
// the same for every seed.
func (s *system) pilot() []int64 {
	p := s.Plan
	p.Seed, p.Point, p.Group, p.FirstReplicate = 0, 0, 0, 0
	p.Cores, p.From, p.Until, p.MaxEvents, p.Times = nil, -1, 0, pilotEvents, nil
	p.Runs = 1
	short := *s
	short.Plan, short.targets, short.groups, short.varies = p, nil, s.consecutive(), nil
	j := newJob(&short)
	j.kernel = func(w *worker) kernel { return newDirect(w) }
	w := newWorker(j, 1)
	w.begin(&w.lanes[0])
	reached, l := slices.Clone(s.Start), &w.lanes[0]
	for l.run >= 0 {
		on := w.kernel.(*direct).event(l)
		for i, n := range l.counts {
			reached[i] = max(reached[i], n)
		}
		if !on {
			break
		}
	}
	return reached
}
