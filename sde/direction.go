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
	// Of a burst whose mean m varies, net and spread are at its median; scale is the
	// share's length, so that with m they are scale·m and scale²·m(1+2m).
	burst *model.Node
	scale float64
}

// newGroups merges the noise of reactions that change the state along the same
// line. The noise of a reaction that fires at rate a and changes the state by J has
// the variance a E[JJᵀ]: the mean change makes one direction, and a geometric burst
// of mean m another one along its species, with the variance m(1+m).
func newGroups(net *model.Network) []group {
	var groups []group
	for r := range net.Reactions {
		re := &net.Reactions[r]
		if re.MassAction && net.MassActionFactor(r) == 0 && !variesIn(net, re.FreeCoefficient) {
			continue
		}
		if mean := varyingBurst(net, re); mean != nil {
			m := re.Bursts[0].Burst
			groups = merge(groups, along(net, re.Bursts[0].Species), share{r, m, m * (1 + 2*m), mean, 1})
			continue
		}
		mean := meanChange(re, len(net.Species))
		groups = merge(groups, mean, share{reaction: r, net: 1, spread: 1})
		for _, b := range re.Bursts {
			groups = merge(groups, along(net, b.Species), share{reaction: r, spread: b.Burst * (1 + b.Burst)})
		}
	}
	return groups
}

// along gives the direction of one molecule of a species.
func along(net *model.Network, species int) []float64 {
	unit := make([]float64, len(net.Species))
	unit[species] = 1
	return unit
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
			groups[i].add(share{s.reaction, c * s.net, c * c * s.spread, s.burst, c * s.scale})
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
