package deterministic

import (
	"math"

	"holdfast/model"
)

// Drift writes dx/dt of the rate equations at amounts x into dx, in amount per
// unit of time, one value per species: dxᵢ/dt = Σ_r AmountChange(r, i)·Flux(r, x).
func Drift(n *model.Network, x, dx []float64) { newSystem(n).drift(x, dx) }

// Jacobian gives the exact derivatives ∂(dxᵢ/dt)/∂xⱼ of the rate equations at
// amounts x, species by species in row-major order, in 1/time (times the ratio
// of units, where the two species have different ones).
func Jacobian(n *model.Network, x []float64) []float64 {
	s := newSystem(n)
	j := make([]float64, s.n*s.n)
	s.jacobian(x, j, make([]float64, s.n))
	return j
}

// change is what one firing per unit of time of a reaction adds to a species.
type change struct {
	species int
	amount  float64
}

// system is the network's rate equations, laid out for repeated evaluation. It
// is immutable.
type system struct {
	net     *model.Network
	n       int
	changes [][]change // by reaction
	reads   [][]int    // species that the law reads, by reaction
	unit    []float64  // molecules in one unit of amount, by species
}

func newSystem(net *model.Network) *system {
	s := &system{net: net, n: len(net.Species)}
	s.changes = make([][]change, len(net.Reactions))
	s.reads = make([][]int, len(net.Reactions))
	for r := range net.Reactions {
		s.reads[r] = net.Reactions[r].Law.Reads()
		for i := range s.n {
			if a := net.AmountChange(r, i); a != 0 {
				s.changes[r] = append(s.changes[r], change{i, a})
			}
		}
	}
	s.unit = make([]float64, s.n)
	for i := range s.unit {
		s.unit[i] = net.Unit(i)
	}
	return s
}

func (s *system) drift(x, dx []float64) {
	clear(dx)
	for r, list := range s.changes {
		if len(list) == 0 {
			continue
		}
		v := s.net.Flux(r, x)
		for _, c := range list {
			dx[c.species] += c.amount * v
		}
	}
}

// turnover writes dx/dt and, in gross, the sum of the magnitudes it is the
// balance of: the scale on which dx/dt is small or not.
func (s *system) turnover(x, dx, gross []float64) {
	clear(dx)
	clear(gross)
	for r, list := range s.changes {
		v := s.net.Flux(r, x)
		for _, c := range list {
			dx[c.species] += c.amount * v
			gross[c.species] += math.Abs(c.amount * v)
		}
	}
}

// jacobian writes the n×n derivatives into j; gradient is scratch of length n.
func (s *system) jacobian(x, j, gradient []float64) {
	clear(j)
	for r, list := range s.changes {
		if len(list) == 0 {
			continue
		}
		s.net.FluxGradient(r, x, gradient)
		for _, k := range s.reads[r] {
			g := gradient[k]
			for _, c := range list {
				j[c.species*s.n+k] += c.amount * g
			}
		}
	}
}

// rounding writes into bound, for each species, a bound on the rounding error
// of dx/dt as drift computes it at x, amounts taken as exact.
func (s *system) rounding(x, bound []float64) {
	clear(bound)
	for r, list := range s.changes {
		v, e := lawRounding(s.net.Reactions[r].Law, x)
		for _, c := range list {
			terms := float64(len(s.changes))
			bound[c.species] += math.Abs(c.amount) * (e + (terms+1)*epsilon*math.Abs(v))
		}
	}
}

// epsilon is half the spacing of float64 just above 1: the largest relative
// error of one rounded operation.
const epsilon = 0x1p-53

// lawRounding gives a law's value and a first-order bound on the error that
// rounding has put into it: each operation adds its own half unit in the last
// place (4 for powers, exponentials and the like, which are not correctly
// rounded), and passes on its arguments' errors by its partial derivatives.
// Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed. (2002), §3.3.
func lawRounding(n *model.Node, x []float64) (value, bound float64) {
	switch n.Op {
	case model.OpNumber:
		return n.Value, 0
	case model.OpSpecies:
		return x[n.Index], 0
	}
	var a, e, d [3]float64
	for i, arg := range n.Args {
		a[i], e[i] = lawRounding(arg, x)
	}
	value = model.Partials(n.Op, a[0], a[1], a[2], &d)
	own := 4.0
	switch n.Op {
	case model.OpAdd, model.OpSub, model.OpMul, model.OpDiv:
		own = 1
	}
	bound = own * epsilon * math.Abs(value)
	for i := range n.Args {
		if e[i] != 0 {
			bound += math.Abs(d[i]) * e[i]
		}
	}
	return value, bound
}
