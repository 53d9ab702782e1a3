package ssa

import (
	"math"

	"holdfast/model"
)

// A shape is the form that a propensity is worked out in.
type shape uint8

const (
	constant shape = iota // factor
	linear                // factor·n
	bilinear              // factor·n·m
	product               // factor·∏ n!/(n−ν)!
	tabled                // a law of one species
	general               // any other law
)

// A propensity works out the expected firings of one reaction per unit of time,
// to the same bits as Network.Propensity. It has tables that it fills on demand,
// so each goroutine has its own.
type propensity struct {
	factor float64
	n, m   int32 // species
	shape  shape
	law    *law // of the shapes from product on
}

// A law is what the less simple shapes need.
type law struct {
	terms   []model.Term // reactants of a product, uses of a general law
	table   table
	program *program
}

// newPropensity prepares reaction r of the network.
func newPropensity(net *model.Network, r int) propensity {
	re := &net.Reactions[r]
	if !re.MassAction {
		return newLaw(net, r)
	}
	return massAction(re, net.MassActionFactor(r))
}

// massAction prepares factor ∏ n!/(n−ν)! over a reaction's reactants.
func massAction(re *model.Reaction, factor float64) propensity {
	p := propensity{shape: product, factor: factor, law: &law{terms: re.Reactants}}
	order := 0
	for _, t := range re.Reactants {
		order += t.Count
	}
	switch {
	case order == 0 || p.factor == 0:
		p.shape = constant
	case order == 1:
		p.shape, p.n = linear, int32(re.Reactants[0].Species)
	case order == 2 && len(re.Reactants) == 2:
		p.shape, p.n, p.m = bilinear, int32(re.Reactants[0].Species), int32(re.Reactants[1].Species)
	}
	return p
}

func newLaw(net *model.Network, r int) propensity {
	re := &net.Reactions[r]
	reads := net.Reads(r)
	switch len(reads) {
	case 0:
		return propensity{shape: constant, factor: net.Propensity(r, make([]int64, len(net.Species)))}
	case 1:
		counts := make([]int64, len(net.Species))
		f := func(n int64) float64 {
			counts[reads[0]] = n
			return net.Propensity(r, counts)
		}
		return propensity{shape: tabled, n: int32(reads[0]), law: &law{table: table{f: f}}}
	}
	return propensity{shape: general, factor: re.Scale, law: &law{terms: re.Uses, program: compile(net, re.Law)}}
}

// at gives the propensity at counts. It may be negative or not finite where the
// design's law is.
func (p *propensity) at(counts []int64) float64 {
	switch p.shape {
	case constant:
		return p.factor
	case linear:
		return p.factor * float64(counts[p.n])
	case bilinear:
		return p.factor * float64(counts[p.n]) * float64(counts[p.m])
	case product:
		return p.product(counts)
	case tabled:
		return p.law.table.at(counts[p.n])
	}
	for _, t := range p.law.terms {
		if counts[t.Species] < int64(t.Count) {
			return 0
		}
	}
	return p.factor * p.law.program.at(counts)
}

func (p *propensity) product(counts []int64) float64 {
	a := p.factor
	for _, t := range p.law.terms {
		n := counts[t.Species]
		for j := range t.Count {
			a *= float64(max(n-int64(j), 0))
		}
	}
	return a
}

// most is the largest propensity. It is a thousandth of the largest number, so
// that the sums of a few do not overflow.
const most = math.MaxFloat64 / 1024

// bad tells whether a is not a propensity: negative, or not finite for all that
// matters.
func bad(a float64) bool { return !(a >= 0 && a <= most) }
