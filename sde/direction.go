package sde

import (
	"slices"

	"holdfast/model"
)

// A group is the reactions whose firings change the state along one direction,
// each by a share of it.
type group struct {
	direction []float64 // molecules, one a species
	shares    []share
}

// A share says how a reaction's propensity a goes into a direction: a·net into its
// drift, a·spread into the variance of its noise per unit of time.
type share struct {
	reaction    int
	net, spread float64
}

// newGroups merges the noise of reactions that change the state along the same
// line. The noise of a reaction that fires at rate a and changes the state by J has
// the variance a E[JJᵀ]: the mean change makes one direction, and a geometric burst
// of mean m another one along its species, with the variance m(1+m).
func newGroups(net *model.Network) []group {
	var groups []group
	for r := range net.Reactions {
		re := &net.Reactions[r]
		if re.MassAction && net.MassActionFactor(r) == 0 {
			continue
		}
		mean := meanChange(re, len(net.Species))
		groups = merge(groups, mean, share{r, 1, 1})
		for _, b := range re.Bursts {
			unit := make([]float64, len(net.Species))
			unit[b.Species] = 1
			groups = merge(groups, unit, share{r, 0, b.Burst * (1 + b.Burst)})
		}
	}
	return groups
}

// meanChange gives the mean change of each species by one firing.
func meanChange(re *model.Reaction, species int) []float64 {
	v := make([]float64, species)
	for _, t := range re.Net {
		v[t.Species] += float64(t.Count)
	}
	for _, b := range re.Bursts {
		v[b.Species] += b.Burst
	}
	return v
}

// merge adds the share s of direction v to the group whose direction is parallel,
// or to a new one. A direction of no length adds nothing.
func merge(groups []group, v []float64, s share) []group {
	if !slices.ContainsFunc(v, func(c float64) bool { return c != 0 }) {
		return groups
	}
	for i := range groups {
		if c := ratio(v, groups[i].direction); c != 0 {
			groups[i].add(share{s.reaction, c * s.net, c * c * s.spread})
			return groups
		}
	}
	return append(groups, group{v, []share{s}})
}

// add adds a share; a reaction that has one already gets them together.
func (g *group) add(s share) {
	if last := &g.shares[len(g.shares)-1]; last.reaction == s.reaction {
		last.net += s.net
		last.spread += s.spread
		return
	}
	g.shares = append(g.shares, s)
}

// ratio gives the c of v = c·w, or 0 where the two are not parallel.
func ratio(v, w []float64) float64 {
	i := slices.IndexFunc(w, func(c float64) bool { return c != 0 })
	for k := range v {
		if v[k]*w[i] != v[i]*w[k] {
			return 0
		}
	}
	return v[i] / w[i]
}
