package action

import (
	"fmt"
	"math"
	"slices"

	"holdfast/deterministic"
	"holdfast/model"
)

// A Problem states which path Solve is to find.
type Problem struct {
	Network *model.Network
	// From is the stable resting state that is left; Saddle is the resting state that
	// the path climbs to, one with a direction in which the flow leads away.
	From, Saddle deterministic.State
	// To names the state that the saddle leads down to, and Down are amounts along the
	// flow to it, from the saddle; they may be left out.
	To   string
	Down [][]float64
	// Guesses are lines of amounts from From to Saddle to start from, besides the
	// straight one: Survey gives the flow from the saddle to From, backwards. The
	// cheapest path found from any is taken.
	Guesses [][][]float64
	// Tolerance is the relative error of S asked for; 0 stands for 1e-8. Elements is
	// the most elements, of four stretches each, that the path is cut in; 0 stands
	// for 128.
	Tolerance float64
	Elements  int
}

const (
	defaultTolerance = 1e-8
	defaultElements  = 128
	// fewest and coarsest are the elements that the search starts from, and the fewest
	// that the path is given in.
	coarsest, fewest = 8, 32
)

func (p *Problem) check() error {
	if p.Tolerance < 0 || p.Elements < 0 || math.IsNaN(p.Tolerance) {
		return fmt.Errorf("tolerance = %v, elements = %d: neither may be below 0", p.Tolerance, p.Elements)
	}
	if p.Tolerance == 0 {
		p.Tolerance = defaultTolerance
	}
	if p.Elements == 0 {
		p.Elements = defaultElements
	}
	if !p.From.Kind.Stable() {
		return &EndError{p.From.Name, "a path of least action starts from a stable resting state, and this is " + p.From.Kind.String()}
	}
	if p.Saddle.UnstableDirections < 1 {
		return &EndError{p.Saddle.Name, "a path of least action climbs to a saddle, and this is " + p.Saddle.Kind.String()}
	}
	if err := FixedNoise(p.Network); err != nil {
		return err
	}
	return p.checkGone()
}

// FixedNoise gives a *FixedNoiseError if a reaction of the network changes a species
// of fixed count, and nil otherwise.
func FixedNoise(n *model.Network) error {
	for r := range n.Reactions {
		reaction := &n.Reactions[r]
		if silent(reaction) {
			continue
		}
		for _, terms := range [][]model.Term{reaction.Net, reaction.Bursts} {
			for _, t := range terms {
				if n.Species[t.Species].Fixed {
					return &FixedNoiseError{n.Species[t.Species].Name, reaction.Name}
				}
			}
		}
	}
	return nil
}

// checkGone refuses a path that brings back species which are gone for good.
func (p *Problem) checkGone() error {
	for _, a := range p.Network.Absorbing() {
		if !empty(a, p.From.Amounts) || empty(a, p.Saddle.Amounts) {
			continue
		}
		var names []string
		for _, i := range a.Empty {
			if p.Saddle.Amounts[i] > 0 {
				names = append(names, p.Network.Species[i].Name)
			}
		}
		return &NeverError{p.From.Name, p.Saddle.Name, names}
	}
	return nil
}

// empty tells that all species of an absorbing set are gone.
func empty(a model.Absorber, amounts []float64) bool {
	for _, i := range a.Empty {
		if amounts[i] != 0 {
			return false
		}
	}
	return true
}

// dead marks the reactions that cannot fire on a path between states in which the
// species of an absorbing set are gone.
func (p *Problem) dead() []bool {
	out := make([]bool, len(p.Network.Reactions))
	for _, a := range p.Network.Absorbing() {
		if !empty(a, p.From.Amounts) || !empty(a, p.Saddle.Amounts) {
			continue
		}
		for r := range out {
			out[r] = out[r] || p.stopped(r, a.Empty)
		}
	}
	return out
}

// stopped tells whether reaction r changes one of the species that are gone: it
// cannot do so, since they would not be gone for good.
func (p *Problem) stopped(r int, gone []int) bool {
	for _, terms := range [][]model.Term{p.Network.Reactions[r].Net, p.Network.Reactions[r].Bursts} {
		for _, t := range terms {
			if slices.Contains(gone, t.Species) {
				return true
			}
		}
	}
	return false
}
