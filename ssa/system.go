package ssa

import (
	"cmp"
	"math"
	"slices"

	"holdfast/internal/variation"
	"holdfast/model"
)

// A system is a plan worked out: what the workers share and only read.
type system struct {
	Plan
	changes    lists[change] // of each reaction, by species
	bursts     lists[burst]
	dependents lists[int32] // reactions whose propensity a firing may change
	targets    []target
	groups     []group
	varies     *variation.Law // of the constants; nil: none does
	slots      int32          // bursts whose means vary
}

// lists are as many lists as there are reactions, end to end: a network of
// thousands of reactions should stay in the cache.
type lists[T any] struct {
	items []T
	ends  []int32
}

func (l *lists[T]) add(items []T) {
	l.items = append(l.items, items...)
	l.ends = append(l.ends, int32(len(l.items)))
}

// of gives the list of reaction r.
func (l *lists[T]) of(r int) []T {
	first := int32(0)
	if r > 0 {
		first = l.ends[r-1]
	}
	return l.items[first:l.ends[r]]
}

// A change is what one firing adds to a species' count.
type change struct {
	species int32
	by      int64
}

// A burst is a geometric product: the whole part of an exponential number times
// scale, P(k) = (1−q) qᵏ with q = mean/(1+mean) and scale = −1/ln q.
type burst struct {
	species int32
	scale   float64
	slot    int32 // of a mean that varies; else −1
}

// burstScale gives the scale of a burst of that mean.
func burstScale(mean float64) float64 { return 1 / math.Log1p(1/mean) }

func newSystem(p Plan) *system {
	s := &system{Plan: p, varies: variation.Of(p.Network, p.Interval)}
	readers := make([][]int32, len(p.Network.Species))
	for r := range p.Network.Reactions {
		if !s.live(r) {
			continue
		}
		for _, i := range p.Network.Reads(r) {
			readers[i] = append(readers[i], int32(r))
		}
	}
	for r := range p.Network.Reactions {
		s.addReaction(&p.Network.Reactions[r], readers)
	}
	s.targets = newTargets(p.Cores, p.From)
	s.groups = s.group()
	return s
}

// live tells whether reaction r may ever fire: its mass-action constant is not 0, or
// varies.
func (s *system) live(r int) bool {
	re := &s.Network.Reactions[r]
	return !re.MassAction || s.Network.MassActionFactor(r) > 0 || s.variesIn(re.FreeCoefficient)
}

// slot gives a burst its slot, −1 where its mean does not vary.
func (s *system) slot(mean *model.Node) int32 {
	if !s.variesIn(mean) {
		return -1
	}
	s.slots++
	return s.slots - 1
}

func (s *system) addReaction(re *model.Reaction, readers [][]int32) {
	var changes []change
	var bursts []burst
	var dependents []int32
	for _, t := range re.Net {
		changes = append(changes, change{int32(t.Species), int64(t.Count)})
		dependents = append(dependents, readers[t.Species]...)
	}
	for _, t := range re.Bursts {
		bursts = append(bursts, burst{int32(t.Species), burstScale(t.Burst), s.slot(t.Mean)})
		dependents = append(dependents, readers[t.Species]...)
	}
	slices.Sort(dependents)
	s.changes.add(changes)
	s.bursts.add(bursts)
	s.dependents.add(slices.Compact(dependents))
}

// A target is a core that ends a run. Its bounds are tested in the order that is
// most likely to miss.
type target struct {
	index  int
	core   *model.Core
	bounds []bound
}

type bound struct {
	species   int
	low, high int64
}

// newTargets lists the cores other than from. Species whose range in the core
// lies farthest from that of the core that runs start in come first.
func newTargets(cores []model.Core, from int) []target {
	var out []target
	for i := range cores {
		if i == from {
			continue
		}
		t := target{index: i, core: &cores[i]}
		for s := range cores[i].Low {
			t.bounds = append(t.bounds, bound{s, cores[i].Low[s], cores[i].High[s]})
		}
		if from >= 0 {
			slices.SortStableFunc(t.bounds, func(a, b bound) int { return cmp.Compare(b.gap(&cores[from]), a.gap(&cores[from])) })
		}
		out = append(out, t)
	}
	return out
}

// gap is the distance from the bound to the other core's range of the same
// species; negative where they overlap.
func (b bound) gap(other *model.Core) float64 {
	return max(float64(b.low)-float64(other.High[b.species]), float64(other.Low[b.species])-float64(b.high))
}

// entered gives the index of the first target that holds counts, or −1.
func (s *system) entered(counts []int64) int {
	for i := range s.targets {
		if s.targets[i].holds(counts) {
			return s.targets[i].index
		}
	}
	return -1
}

func (t *target) holds(counts []int64) bool {
	for _, b := range t.bounds {
		if n := counts[b.species]; n < b.low || n > b.high {
			return false
		}
	}
	return t.core.Contains(counts)
}

// maybe tells whether the bounds of some species hold.
func (t *target) maybe(species []int, counts []int64) bool {
	for _, i := range species {
		if counts[i] < t.core.Low[i] || counts[i] > t.core.High[i] {
			return false
		}
	}
	return true
}
