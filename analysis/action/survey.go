package action

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"holdfast/deterministic"
	"holdfast/model"
)

// Options steers a Survey; the fields are those of Problem.
type Options struct {
	Tolerance float64
	Elements  int
}

// Absorbed is the To of a pair that ends where species are gone for good and no
// stable state is.
const Absorbed = "absorbed"

// A Pair is an ordered pair of states.
type Pair struct {
	From, To string
	// S is the exponent of the mean time from From to To for each unit of copies, with
	// its error; +Inf where Never is set, NaN where it is not known, and Err says why.
	S, Error float64
	// Never tells that To is never reached from From.
	Never bool
	// Paths are those over the saddles that join the two, the cheapest first.
	Paths []*Path
	// Via lists the states that are passed where no saddle joins the two: S is then
	// the sum along the cheapest chain.
	Via []string
	Err error
}

// Routes are the ways between the stable states of a design.
type Routes struct {
	Joins []Join
	// Pairs has every ordered pair of stable resting states, by From, then To, and a
	// pair to Absorbed for each state that is left so.
	Pairs []Pair
	// Warnings are for the reader, one sentence each.
	Warnings []string
}

// Find gives the pair of that name, or nil.
func (r *Routes) Find(from, to string) *Pair {
	for k := range r.Pairs {
		if r.Pairs[k].From == from && r.Pairs[k].To == to {
			return &r.Pairs[k]
		}
	}
	return nil
}

// Survey finds the cheapest path between every ordered pair of the map's stable
// resting states. A saddle leads from A to B if the flow goes down from it to A on one
// side and to B on the other; where no saddle does, the pair's exponent is that of
// the cheapest chain of states (Freidlin and Wentzell, Random Perturbations of
// Dynamical Systems, 2nd ed., ch. 6). Declared cores that are no resting state have no
// pairs.
//
// Errors: *FixedNoiseError, and that of ctx. What goes wrong with one path stands in
// its pair.
func Survey(ctx context.Context, m *deterministic.Map, o Options) (*Routes, error) {
	if err := FixedNoise(m.Network); err != nil {
		return nil, err
	}
	list, err := joins(ctx, m)
	if err != nil {
		return nil, err
	}
	s := surveyor{m: m, options: o, routes: &Routes{Joins: list}, absorbers: m.Network.Absorbing()}
	s.pairs()
	for i := range list {
		if err := s.join(ctx, &list[i]); err != nil {
			return nil, err
		}
	}
	s.finish()
	return s.routes, nil
}

// A surveyor is a Survey under way.
type surveyor struct {
	m         *deterministic.Map
	options   Options
	routes    *Routes
	absorbers []model.Absorber
}

// pairs lists the pairs of stable states, those without a core among them.
func (s *surveyor) pairs() {
	for i := range s.m.States {
		for k := range s.m.States {
			a, b := &s.m.States[i], &s.m.States[k]
			if i != k && a.Kind.Stable() && b.Kind.Stable() {
				s.routes.Pairs = append(s.routes.Pairs, Pair{From: a.Name, To: b.Name, S: math.NaN()})
			}
		}
	}
}

// join finds the paths over one saddle.
func (s *surveyor) join(ctx context.Context, j *Join) error {
	for from := range j.Ends {
		to := 1 - from
		if j.Ends[from] == "" || j.Ends[from] == j.Ends[to] {
			continue
		}
		target, down := j.Ends[to], j.course[to]
		if s.gone(j.saddle) {
			target, down = Absorbed, nil
			if s.routes.Find(j.Ends[from], Absorbed) == nil {
				s.routes.Pairs = append(s.routes.Pairs, Pair{From: j.Ends[from], To: Absorbed, S: math.NaN()})
			}
		}
		if pair := s.routes.Find(j.Ends[from], target); pair != nil {
			if err := s.path(ctx, j, from, pair, down); err != nil {
				return err
			}
		}
	}
	return nil
}

// gone tells that species are gone for good in a state.
func (s *surveyor) gone(state int) bool {
	return slices.ContainsFunc(s.absorbers, func(a model.Absorber) bool { return empty(a, s.m.States[state].Amounts) })
}

// path finds the path of a pair over one saddle.
func (s *surveyor) path(ctx context.Context, j *Join, side int, pair *Pair, down [][]float64) error {
	back := slices.Clone(j.course[side])
	slices.Reverse(back)
	p, err := Solve(ctx, Problem{
		Network: s.m.Network, From: s.state(pair.From), Saddle: s.m.States[j.saddle], To: pair.To, Down: down,
		Guesses: [][][]float64{back}, Tolerance: s.options.Tolerance, Elements: s.options.Elements,
	})
	var never *NeverError
	switch {
	case ctx.Err() != nil:
		return ctx.Err()
	case errors.As(err, &never):
		pair.Never, pair.Err = true, err
	case err != nil:
		pair.Err = err
	default:
		pair.Paths = append(pair.Paths, p)
	}
	return nil
}

func (s *surveyor) state(name string) deterministic.State {
	return s.m.States[slices.IndexFunc(s.m.States, func(t deterministic.State) bool { return t.Name == name })]
}

// finish takes the cheapest path of each pair and chains what no saddle joins.
func (s *surveyor) finish() {
	for k := range s.routes.Pairs {
		p := &s.routes.Pairs[k]
		if len(p.Paths) == 0 {
			continue
		}
		slices.SortFunc(p.Paths, func(a, b *Path) int {
			if a.S < b.S {
				return -1
			}
			return 1
		})
		if p.Err != nil {
			s.routes.Warnings = append(s.routes.Warnings, fmt.Sprintf("from %s to %s another saddle could not be tried: %v", p.From, p.To, p.Err))
		}
		p.S, p.Error, p.Never, p.Err = p.Paths[0].S, p.Paths[0].Error, false, nil
	}
	s.routes.chain()
}
