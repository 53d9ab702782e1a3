package model

import (
	"fmt"
	"math"
	"slices"
)

// manyFixed is the number of copies from which a fixed count looks like a mistake:
// fixed counts are for operator sites and plasmids.
const manyFixed = 100

// fewCopies is the number of copies below which one unit of amount is coarse.
const fewCopies = 5

// Warnings lists what is worth a look in the design, one sentence each: the notes
// of the design file, then what shows once the constants have values.
func (n *Network) Warnings() []string {
	var out []string
	for _, p := range n.Notes {
		out = append(out, fmt.Sprintf("line %d: %s", p.Line, p.Message))
	}
	out = append(out, n.scaleWarnings()...)
	out = append(out, n.speciesWarnings()...)
	for r := range n.Reactions {
		out = append(out, n.lawWarnings(r)...)
	}
	return append(out, n.startWarnings()...)
}

// scaleWarnings are about copies and the generation.
func (n *Network) scaleWarnings() []string {
	var out []string
	if n.Generation == 0 {
		out = append(out, "no generation is given: flips per generation cannot be told")
	}
	if n.Copies < fewCopies && n.Copies != 1 {
		out = append(out, fmt.Sprintf("copies = %g: one unit of amount is very few molecules", n.Copies))
	}
	for i, s := range n.Species {
		k := s.Start * n.Unit(i)
		if whole := math.Round(k); math.Abs(k-whole) > 1e-9*max(1, k) {
			out = append(out, fmt.Sprintf("%s starts with %s molecules; %s are taken, the nearest whole number", s.Name, number(k), number(whole)))
		}
		if s.Fixed && s.Start > manyFixed {
			out = append(out, fmt.Sprintf("%s has a fixed count of %g: is it really meant not to scale with copies?", s.Name, s.Start))
		}
	}
	return out
}

// speciesWarnings are about species that only rise, only fall, or do neither.
func (n *Network) speciesWarnings() []string {
	up, down := make([]bool, len(n.Species)), make([]bool, len(n.Species))
	for _, r := range n.Reactions {
		for _, t := range slices.Concat(r.Net, r.Bursts) {
			up[t.Species] = up[t.Species] || t.Count > 0 || t.Burst > 0
			down[t.Species] = down[t.Species] || t.Count < 0
		}
	}
	var out []string
	for i, s := range n.Species {
		switch {
		case !up[i] && !down[i]:
			out = append(out, fmt.Sprintf("no reaction changes %s: it stays as it starts", s.Name))
		case !down[i]:
			out = append(out, fmt.Sprintf("%s is made and never used up: it can only grow", s.Name))
		case !up[i]:
			out = append(out, fmt.Sprintf("%s is used up and never made: it can only run out", s.Name))
		}
	}
	return out
}

// lawWarnings are about one reaction's law.
func (n *Network) lawWarnings(r int) []string {
	re := &n.Reactions[r]
	if re.MassAction {
		if re.Coefficient == 0 {
			return []string{fmt.Sprintf("%s: the coefficient is 0, so it never happens", n.title(r))}
		}
		return nil
	}
	var out []string
	for _, t := range re.Uses {
		if !re.Law.vanishes(func(i int) bool { return i == t.Species }) {
			out = append(out, fmt.Sprintf("%s: its law is not 0 without %s, which it uses; below %d %s it is taken not to happen", n.title(r), n.Species[t.Species].Name, t.Count, plural(int64(t.Count), "molecule")))
		}
	}
	for _, t := range re.Needs {
		if !slices.Contains(re.Law.Reads(), t.Species) {
			out = append(out, fmt.Sprintf("%s: it needs %s, but its law does not read it", n.title(r), n.Species[t.Species].Name))
		}
	}
	return append(out, n.powerWarnings(r)...)
}

// powerWarnings are about powers whose slope at 0 is not finite.
func (n *Network) powerWarnings(r int) []string {
	var out []string
	n.Reactions[r].Law.Walk(func(m *Node) {
		if power, ok := m.steepPower(); ok {
			text := fmt.Sprintf("%s: a power of %g, below 1, has no finite slope at 0", n.title(r), power)
			if !slices.Contains(out, text) {
				out = append(out, text)
			}
		}
	})
	return out
}

// steepPower tells whether the node is a power or Hill function between 0 and 1
// of something that species change.
func (n *Node) steepPower() (power float64, ok bool) {
	exponent := n
	switch n.Op {
	case OpPow:
		exponent = n.Args[1]
	case OpHill, OpHillFall:
		exponent = n.Args[2]
	case OpSqrt:
		exponent = Number(0.5)
	}
	steep := exponent.Op == OpNumber && exponent.Value > 0 && exponent.Value < 1
	return exponent.Value, steep && n.Op != OpNumber && len(n.Args[0].Reads()) > 0
}

// startWarnings are about propensities at the start.
func (n *Network) startWarnings() []string {
	var out []string
	start := n.StartCounts()
	for r := range n.Reactions {
		a := n.Propensity(r, start)
		switch {
		case math.IsNaN(a) || math.IsInf(a, 0):
			out = append(out, fmt.Sprintf("%s: its propensity at the start is %s, not a finite number", n.title(r), number(a)))
		case a < 0:
			out = append(out, fmt.Sprintf("%s: its propensity at the start is %s, below 0", n.title(r), number(a)))
		}
	}
	return out
}

// title names a reaction, by its number where it has no name.
func (n *Network) title(r int) string {
	if name := n.Reactions[r].Name; name != "" {
		return name
	}
	return fmt.Sprintf("reaction %d", r+1)
}

// names lists the names of species.
func (n *Network) names(species []int) []string {
	out := make([]string, len(species))
	for i, s := range species {
		out[i] = n.Species[s].Name
	}
	return out
}
