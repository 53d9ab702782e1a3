package model

import (
	"fmt"
	"math"
	"slices"
)

// A Draft is a network before its constants and copies have been bound: what a
// design file states. Bind makes a Network of it.
type Draft struct {
	Title      string
	TimeUnit   string
	Generation float64
	Copies     float64
	Species    []Species
	Constants  []Constant
	Reactions  []DraftReaction
	Readout    int
	Declared   []DeclaredCore

	File, Text, Digest string
}

// A DraftReaction is a reaction whose law still names its constants.
type DraftReaction struct {
	Name               string
	Uses, Needs, Makes []Term
	// MassAction, if set, is the coefficient of a mass-action law, a tree without
	// species; otherwise Rate is the law in amounts.
	MassAction *Node
	Rate       *Node
}

// Bind gives the network with the draft's constants replaced where set names
// them, and copies by copies if it is positive. Unknown names, and values that
// are negative or not finite, are errors.
func (d *Draft) Bind(copies float64, set map[string]float64) (*Network, error) {
	n := &Network{
		Title: d.Title, TimeUnit: d.TimeUnit, Generation: d.Generation, Copies: d.Copies,
		Species: d.Species, Constants: slices.Clone(d.Constants), Readout: d.Readout, Declared: d.Declared,
		File: d.File, Text: d.Text, Digest: d.Digest,
	}
	if copies != 0 {
		n.Copies = copies
	}
	if !(n.Copies > 0) || math.IsInf(n.Copies, 0) {
		return nil, fmt.Errorf("copies = %v: must be a positive number", n.Copies)
	}
	if err := n.setConstants(set); err != nil {
		return nil, err
	}
	for _, dr := range d.Reactions {
		r, err := n.bindReaction(dr)
		if err != nil {
			return nil, err
		}
		n.Reactions = append(n.Reactions, r)
	}
	return n, nil
}

func (n *Network) setConstants(set map[string]float64) error {
	for name, v := range set {
		i := n.ConstantIndex(name)
		if i < 0 {
			return fmt.Errorf("no constant is called %q", name)
		}
		if v < 0 || math.IsNaN(v) || math.IsInf(v, 0) {
			return fmt.Errorf("%s = %v: a constant must be a finite number, not below 0", name, v)
		}
		n.Constants[i].Value = v
	}
	n.values = make([]float64, len(n.Constants))
	for i, c := range n.Constants {
		n.values[i] = c.Value
	}
	return nil
}

func (n *Network) bindReaction(d DraftReaction) (Reaction, error) {
	r := Reaction{
		Name: d.Name, Uses: d.Uses, Needs: d.Needs, Makes: d.Makes,
		MassAction: d.MassAction != nil, Scale: n.Copies,
		Reactants: merge(1, d.Uses, 1, d.Needs), Net: merge(-1, d.Uses, 1, d.Makes),
	}
	for _, t := range d.Makes {
		if t.Burst > 0 {
			r.Bursts = append(r.Bursts, t)
		}
	}
	for _, t := range slices.Concat(r.Net, r.Bursts) {
		if n.Species[t.Species].Fixed {
			r.Scale = 1
		}
	}
	r.Free = d.Rate
	if r.MassAction {
		r.Coefficient = d.MassAction.Eval(nil, n.values)
		if !(r.Coefficient >= 0) || math.IsInf(r.Coefficient, 0) {
			return r, fmt.Errorf("reaction %q: mass_action is %v; it must be a finite number, not below 0", r.Name, r.Coefficient)
		}
		r.Free = product(d.MassAction, r.Reactants)
		r.factor = r.Coefficient * r.Scale
		for _, t := range r.Reactants {
			if !n.Species[t.Species].Fixed {
				r.factor /= math.Pow(n.Copies, float64(t.Count))
			}
		}
	}
	r.Law = r.Free.Bind(n.values)
	r.reads = r.Law.Reads()
	for _, t := range d.Uses {
		if !slices.Contains(r.reads, t.Species) {
			r.reads = append(r.reads, t.Species)
		}
	}
	slices.Sort(r.reads)
	return r, nil
}

// product is the tree of coefficient·∏ xᵢ^νᵢ.
func product(coefficient *Node, reactants []Term) *Node {
	tree := coefficient
	for _, t := range reactants {
		x := SpeciesRef(t.Species)
		if t.Count > 1 {
			x = Call(OpPow, x, Number(float64(t.Count)))
		}
		tree = Call(OpMul, tree, x)
	}
	return tree
}

// merge adds two lists of whole-number terms, each times its sign, one term a
// species in ascending order, without zeros.
func merge(sa int, a []Term, sb int, b []Term) []Term {
	sum := map[int]int{}
	for _, t := range a {
		sum[t.Species] += sa * t.Count
	}
	for _, t := range b {
		sum[t.Species] += sb * t.Count
	}
	var out []Term
	for s, c := range sum {
		if c != 0 {
			out = append(out, Term{Species: s, Count: c})
		}
	}
	slices.SortFunc(out, func(p, q Term) int { return p.Species - q.Species })
	return out
}
