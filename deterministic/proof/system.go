package proof

import (
	"fmt"
	"slices"

	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// A flux is the rate of a reaction, or of a burst, with the whole-number change of
// each species that it makes.
type flux struct {
	rate   scaled
	change []int64
}

// A row is an equation of a system: a linear form in atoms that must be 0.
type row struct {
	atoms []int // indices into system.atoms
	coef  []iv
	c     iv
}

// A system is the rest condition of a network as square equations: independent
// rates of change and conserved totals, as many as there are species that are not
// held at 0. Further rows follow from these and only help to narrow boxes.
type system struct {
	graph
	species []int // the species that vary, by the place of their unknowns
	place   []int // the unknown of each species, or -1
	rows    []row
	atoms   []atom
	columns []column // one an atom: the rows that it stands in
	checks  []int    // nodes that must be 0
	bent    []bool   // by unknown: a rate depends on it otherwise than linearly
}

// A column lists the rows that an atom stands in.
type column struct {
	rows []int
	coef []iv
}

// newSystem builds the rest condition with the absent species held at 0. ok is
// false where the equations do not number the unknowns: there may be a continuum of
// resting states. The absent species must stay at 0; see leaving. Where
// high is a species, the further rows are right only where that is above 0: they hold
// the others divided by its powers.
func newSystem(n *model.Network, totals []model.Total, values []float64, absent []bool, high int) (s *system, ok bool, err error) {
	b := newBuilder(n.ConstantValues(), absent)
	fluxes, err := fluxesOf(b, n)
	if err != nil {
		return nil, false, err
	}
	s = &system{place: make([]int, len(n.Species))}
	for i := range n.Species {
		s.place[i] = none
		if absent == nil || !absent[i] {
			s.place[i] = len(s.species)
			s.species = append(s.species, i)
			b.species(i)
		}
	}
	fluxes = slices.DeleteFunc(fluxes, func(f flux) bool { return f.rate == fixed(interval.Point(0)) })
	sums, dependent, ok := b.totalsOf(n, totals, values)
	if !ok || len(dependent) != leftRank(fluxes, s.species) {
		return nil, false, nil
	}
	var main []scaled
	for _, i := range s.species {
		if !slices.Contains(dependent, i) {
			main = append(main, b.rateOf(fluxes, i))
		}
	}
	main = append(main, sums...)
	further := b.further(fluxes, s.species)
	if high != none {
		for _, r := range further {
			further = append(further, b.divided(r, high)...)
		}
	}
	s.finish(b, main, further)
	return s, true, s.defined(n)
}

// leaving gives an absent species that would not stay at 0 were all of them 0, or
// none.
func leaving(n *model.Network, absent []bool) (int, error) {
	b := newBuilder(n.ConstantValues(), absent)
	fluxes, err := fluxesOf(b, n)
	if err != nil {
		return none, err
	}
	for i := range n.Species {
		if absent[i] && b.rateOf(fluxes, i) != fixed(interval.Point(0)) {
			return i, nil
		}
	}
	return none, nil
}

// fluxesOf compiles the rates, in molecules; a common factor is left out.
func fluxesOf(b *builder, n *model.Network) ([]flux, error) {
	mixed := slices.ContainsFunc(n.Reactions, func(r model.Reaction) bool { return r.Scale != n.Reactions[0].Scale })
	var out []flux
	for i := range n.Reactions {
		r := &n.Reactions[i]
		rate := b.tree(r.Free)
		if mixed {
			rate = b.times(rate, interval.Point(r.Scale))
		}
		if !rate.c.Bounded() {
			return nil, fmt.Errorf("reaction %q: the law has a constant part that is not a finite number", r.Name)
		}
		f := flux{rate, make([]int64, len(n.Species))}
		for _, t := range r.Net {
			f.change[t.Species] = int64(t.Count)
		}
		for _, t := range r.Bursts {
			f.change[t.Species] = 0
		}
		out = append(out, f)
		out = append(out, burstsOf(b, r, rate, len(n.Species))...)
	}
	return out, nil
}

// burstsOf gives a flux for each burst, whose number is its mean; what else the
// reaction changes of the same species is counted with it.
func burstsOf(b *builder, r *model.Reaction, rate scaled, species int) []flux {
	var out []flux
	for _, t := range r.Bursts {
		mean := fixed(interval.Point(t.Burst))
		if t.Mean != nil {
			mean = b.tree(t.Mean)
		}
		for _, net := range r.Net {
			if net.Species == t.Species {
				mean.c = mean.c.Add(interval.Point(float64(net.Count)))
			}
		}
		f := flux{b.times(rate, mean.c), make([]int64, species)}
		f.change[t.Species] = 1
		out = append(out, f)
	}
	return out
}

// rateOf is the rate of change of species i.
func (b *builder) rateOf(fluxes []flux, i int) scaled {
	weights := make([]int64, len(fluxes))
	for r, f := range fluxes {
		weights[r] = f.change[i]
	}
	return b.weigh(fluxes, weights)
}

// weigh is the sum of the fluxes, each times its weight.
func (b *builder) weigh(fluxes []flux, weights []int64) scaled {
	var f form
	for r, w := range weights {
		if w != 0 {
			f.add(b, scaled{fluxes[r].rate.c.Mul(interval.Point(float64(w))), fluxes[r].rate.node})
		}
	}
	f.tidy(b)
	if len(f.nodes) == 0 {
		return fixed(f.c)
	}
	return scaled{interval.Point(1), b.sum(f)}
}
