package proof

import (
	"fmt"
	"slices"

	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// totalsOf gives the conserved totals, less their values, over the species that
// vary, and for each a species whose rate follows from those of the others. ok is
// false where they are not independent, or one cannot have its value.
func (b *builder) totalsOf(n *model.Network, totals []model.Total, values []float64) (sums []scaled, dependent []int, ok bool) {
	m := newRational(len(totals), len(n.Species))
	for k, t := range totals {
		f := form{c: interval.Point(values[k]).Neg()}
		for i, w := range t.Weights {
			if w == 0 || b.held(i) {
				continue
			}
			m[k][i].SetInt64(w)
			unit := interval.Point(n.Unit(i)).Mul(interval.Point(float64(w)))
			f.add(b, b.times(b.species(i), unit))
		}
		switch {
		case len(f.nodes) > 0:
			sums = append(sums, scaled{interval.Point(1), b.sum(f)})
		case f.c != interval.Point(0):
			return nil, nil, false
		}
	}
	dependent = m.reduce(ascending(len(n.Species)))
	return sums, dependent, len(sums) == len(dependent)
}

func (b *builder) held(i int) bool { return b.absent != nil && b.absent[i] }

// further gives rows that follow from the rates of change: those of all species,
// and combinations in which fluxes cancel.
func (b *builder) further(fluxes []flux, species []int) []scaled {
	var out []scaled
	for _, i := range species {
		out = append(out, b.rateOf(fluxes, i))
	}
	for _, weights := range elementary(fluxes, species) {
		out = append(out, b.weigh(fluxes, weights))
	}
	return out
}

// finish numbers the atoms of the main rows and sets the checks.
func (s *system) finish(b *builder, main, further []scaled) {
	for _, r := range append(slices.Clone(main), further...) {
		if id := b.solid(r); !slices.Contains(s.checks, id) {
			s.checks = append(s.checks, id)
		}
	}
	number := s.prune(b.graph, s.checks, b.dropped)
	for i, id := range s.checks {
		s.checks[i] = number[id]
	}
	at := map[int]int{}
	for _, r := range main {
		s.rows = append(s.rows, s.row(r, number, at))
	}
	s.index()
}

// row takes a main row apart into atoms.
func (s *system) row(r scaled, number []int, at map[int]int) row {
	if r.isConstant() {
		return row{c: r.c}
	}
	n := s.nodes[number[r.node]]
	out := row{coef: n.coef, c: n.c}
	for _, id := range n.args {
		if _, ok := at[id]; !ok {
			at[id] = len(s.atoms)
			s.atoms = append(s.atoms, s.atom(id))
		}
		out.atoms = append(out.atoms, at[id])
	}
	return out
}

// index fills the columns, and tells which unknowns stand in a bent atom.
func (s *system) index() {
	s.columns = make([]column, len(s.atoms))
	for i, r := range s.rows {
		for k, a := range r.atoms {
			s.columns[a].rows = append(s.columns[a].rows, i)
			s.columns[a].coef = append(s.columns[a].coef, r.coef[k])
		}
	}
	s.bent = make([]bool, len(s.species))
	for _, a := range s.atoms {
		for j, i := range a.species {
			a.species[j] = s.place[i]
			if s.nodes[a.node].kind != variable {
				s.bent[s.place[i]] = true
			}
		}
	}
	for i := range s.nodes {
		if n := &s.nodes[i]; n.kind == variable {
			n.n = s.place[n.n]
		}
	}
}

// defined is an error where a constant of the equations is not a finite number.
func (s *system) defined(n *model.Network) error {
	for i := range s.nodes {
		nd := &s.nodes[i]
		if !nd.c.Bounded() || slices.ContainsFunc(nd.coef, func(c iv) bool { return !c.Bounded() }) {
			return fmt.Errorf("%s: a rate law has a constant part that is not a finite number", n.Title)
		}
	}
	return nil
}

// prune takes from g the nodes that the given ones are made of, and gives the new
// number of each old one.
func (s *system) prune(g graph, keep, also []int) (number []int) {
	number = make([]int, len(g.nodes))
	reached := g.reach(slices.DeleteFunc(slices.Concat(keep, also), func(i int) bool { return i < 0 }))
	slices.Sort(reached)
	for _, id := range reached {
		n := g.nodes[id]
		n.args = slices.Clone(n.args)
		for j, a := range n.args {
			n.args[j] = number[a]
		}
		number[id] = len(s.nodes)
		s.nodes = append(s.nodes, n)
	}
	return number
}
