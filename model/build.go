package model

import (
	"fmt"
	"maps"
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

	// File, Text and Digest identify the design file: its name as given, its
	// bytes, and their SHA-256 in lower-case hex.
	File, Text, Digest string
	// Notes are what is worth a look in the design file, though not wrong.
	Notes Problems
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

// mostCopies keeps counts whole numbers that a float64 holds.
const mostCopies = 1e12

// Bind gives the network with the draft's constants replaced where set names
// them, and copies by copies if it is positive. A constant that varies keeps its
// spread, memory and uncertainty about the new value. Unknown names, and values
// that are negative or not finite, are errors; so is 0 for a constant that varies.
func (d *Draft) Bind(copies float64, set map[string]float64) (*Network, error) {
	n := &Network{
		Title: d.Title, TimeUnit: d.TimeUnit, Generation: d.Generation, Copies: d.Copies,
		Species: d.Species, Constants: slices.Clone(d.Constants), Readout: d.Readout, Declared: d.Declared,
		File: d.File, Text: d.Text, Digest: d.Digest, Notes: d.Notes,
	}
	if copies != 0 {
		n.Copies = copies
	}
	if !(n.Copies > 0) || math.IsInf(n.Copies, 0) {
		return nil, fmt.Errorf("copies = %v: must be a positive number", n.Copies)
	}
	if n.Copies > mostCopies {
		return nil, fmt.Errorf("copies = %g: molecules are counted up to %g in one unit of amount", n.Copies, float64(mostCopies))
	}
	if err := n.setConstants(set); err != nil {
		return nil, err
	}
	if err := n.checkStarts(); err != nil {
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
	for _, name := range slices.Sorted(maps.Keys(set)) {
		v, i := set[name], n.ConstantIndex(name)
		if i < 0 {
			_, names := n.nameLists()
			return fmt.Errorf("no constant is called %q: %s", name, NameHint(name, names))
		}
		if v < 0 || math.IsNaN(v) || math.IsInf(v, 0) {
			return fmt.Errorf("%s = %v: a constant must be a finite number, not below 0", name, v)
		}
		n.Constants[i].Value = v
	}
	n.values = make([]float64, len(n.Constants))
	for i, c := range n.Constants {
		if err := c.check(); err != nil {
			return err
		}
		n.values[i] = c.Value
	}
	return nil
}

// check says what is wrong with a constant's variation.
func (c *Constant) check() error {
	switch {
	case !logDeviation.holds(c.Spread):
		return fmt.Errorf("%s: the spread is %v; it must be %v", c.Name, c.Spread, logDeviation)
	case !logDeviation.holds(c.Uncertainty):
		return fmt.Errorf("%s: the uncertainty is %v; it must be %v", c.Name, c.Uncertainty, logDeviation)
	case !(c.Memory >= 0) || math.IsInf(c.Memory, 0):
		return fmt.Errorf("%s: the memory is %v; it must be a finite time above 0, or 0 for none", c.Name, c.Memory)
	case c.Memory > 0 && c.Spread == 0:
		return fmt.Errorf("%s has a memory but no spread", c.Name)
	case c.Value == 0 && (c.Spread > 0 || c.Uncertainty > 0):
		return fmt.Errorf("%s = 0: it varies by a factor, so it must be above 0", c.Name)
	}
	return nil
}

// checkStarts sees that the molecules at the start can be counted.
func (n *Network) checkStarts() error {
	for i, s := range n.Species {
		if k := s.Start * n.Unit(i); !(k >= 0 && k <= largestWhole) {
			return fmt.Errorf("%s starts with %g molecules; the most that can be counted is %d", s.Name, k, int64(largestWhole))
		}
	}
	return nil
}

// nameLists gives the names of the species and of the constants, by index.
func (n *Network) nameLists() (species, constants []string) {
	for _, s := range n.Species {
		species = append(species, s.Name)
	}
	for _, c := range n.Constants {
		constants = append(constants, c.Name)
	}
	return species, constants
}

func (n *Network) bindReaction(d DraftReaction) (Reaction, error) {
	r := Reaction{
		Name: d.Name, Uses: d.Uses, Needs: d.Needs, Makes: slices.Clone(d.Makes),
		MassAction: d.MassAction != nil, Scale: n.Copies,
		Reactants: merge(1, d.Uses, 1, d.Needs), Net: merge(-1, d.Uses, 1, d.Makes),
	}
	if err := n.bindBursts(&r); err != nil {
		return r, err
	}
	if !n.scales(&r) {
		r.Scale = 1
	}
	if err := n.bindLaw(&r, d); err != nil {
		return r, err
	}
	r.Law = r.Free.Bind(n.values)
	r.program = Compile(r.Law)
	r.slope, r.freeSlope = newSweep(r.Law), newSweep(r.Free)
	r.lawReads = r.Law.Reads()
	r.local = newSweep(r.Law).renumbered(r.lawReads)
	r.reads = slices.Clone(r.lawReads)
	for _, t := range d.Uses {
		if !slices.Contains(r.reads, t.Species) {
			r.reads = append(r.reads, t.Species)
		}
	}
	slices.Sort(r.reads)
	return r, nil
}

// bindBursts gives each burst its mean.
func (n *Network) bindBursts(r *Reaction) error {
	for i := range r.Makes {
		t := &r.Makes[i]
		if t.Mean != nil {
			t.Burst = t.Mean.Eval(nil, n.values)
		}
		if t.Mean == nil && t.Burst == 0 {
			continue
		}
		if !(t.Burst > 0) || math.IsInf(t.Burst, 0) {
			return fmt.Errorf("reaction %q: the mean burst of %s is %v; it must be a finite number above 0", r.Name, n.Species[t.Species].Name, t.Burst)
		}
		r.Bursts = append(r.Bursts, *t)
	}
	return nil
}

// bindLaw sets the law with constants still named and, for mass action, the
// coefficient and the propensity's factor.
func (n *Network) bindLaw(r *Reaction, d DraftReaction) error {
	r.Free = d.Rate
	if !r.MassAction {
		if d.Rate == nil {
			return fmt.Errorf("reaction %q has no law", r.Name)
		}
		return nil
	}
	r.Coefficient = d.MassAction.Eval(nil, n.values)
	if !(r.Coefficient >= 0) || math.IsInf(r.Coefficient, 0) {
		return fmt.Errorf("reaction %q: mass_action is %v; it must be a finite number, not below 0", r.Name, r.Coefficient)
	}
	r.FreeCoefficient = d.MassAction
	r.Free = product(d.MassAction, r.Reactants)
	r.factor = r.Coefficient * r.Scale
	for _, t := range r.Reactants {
		if !n.Species[t.Species].Fixed {
			r.factor /= math.Pow(n.Copies, float64(t.Count))
		}
	}
	return nil
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
