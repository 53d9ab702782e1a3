package model

import (
	"math"
)

// A Species is one kind of molecule.
type Species struct {
	Name string
	// Start is the amount at time 0 (a count where Fixed).
	Start float64
	// Fixed marks a species whose number does not scale with copies: an
	// operator site, a plasmid. It stands in laws as a count.
	Fixed bool
}

// A Constant is a named number that rate laws read.
type Constant struct {
	Name string
	// Value is the constant's own, or, where it varies, its median.
	Value float64
	// Spread is the standard deviation of its natural logarithm across cells, which
	// is normal about that of Value; 0: it does not vary. At most 3.
	Spread float64
	// Memory, above 0 only with a spread, makes the logarithm vary in time, in every
	// cell: a stationary Ornstein–Uhlenbeck process with Spread as its standard
	// deviation and Memory, in the network's time unit, as its correlation time. 0:
	// each cell keeps its own value for ever.
	Memory float64
	// Uncertainty is the standard deviation of the natural logarithm of what is known
	// of Value; 0: it is known. At most 3. No run uses it.
	Uncertainty float64
}

// A Term is a species with its whole-number coefficient in a reaction, or, among
// products, a burst.
type Term struct {
	Species int
	Count   int
	// Burst, where positive, makes the count random: geometric on 0, 1, 2, …
	// with this mean, P(k) = (1−q) qᵏ, q = Burst/(1+Burst). Count is then 0.
	Burst float64
	// Mean is the burst's mean with constants still named; nil where the term is
	// no burst, or the burst was given as a number in code. Bind sets Burst to
	// its value.
	Mean *Node
}

// A Reaction is one channel of the network, bound to values of the constants
// and of copies.
type Reaction struct {
	Name string
	// Uses are consumed, Needs are read and not consumed, Makes are produced.
	Uses, Needs, Makes []Term
	// MassAction tells that the law is Coefficient ∏ xᵢ^νᵢ over Reactants, with
	// exact combinatorics in the propensity.
	MassAction bool
	// Coefficient is the mass-action constant, in amounts and the time unit.
	Coefficient float64
	// FreeCoefficient is the same with constants still named; nil for a law.
	FreeCoefficient *Node
	// Reactants are Uses and Needs together, one term a species, by species.
	Reactants []Term
	// Net is the whole-number change of each species by one firing, without
	// bursts; species of no change are left out. Bursts are the random products.
	Net    []Term
	Bursts []Term
	// Law is the rate law in amounts with every constant bound. For mass action
	// it is the product form Coefficient ∏ xᵢ^νᵢ.
	Law *Node
	// Free is the same law with constants still named, for derivatives in them.
	Free *Node
	// Scale turns the law's value into a propensity: copies, or 1 for a
	// reaction that changes a fixed-count species.
	Scale float64

	program *Program
	// local is the law over the amounts of lawReads only, in their order.
	local    *sweep
	lawReads []int
	// slope and freeSlope give the gradients of Law and Free.
	slope, freeSlope *sweep
	reads            []int   // species that the propensity depends on, ascending
	factor           float64 // mass action: Coefficient·Scale/Ω^(order in scaling species)
}

// Program gives the law compiled for fast evaluation at many amounts.
func (r *Reaction) Program() *Program { return r.program }

// A Range bounds the count of one species in a declared core, both ends
// included; Max is math.MaxInt64 where there is no upper bound.
type Range struct {
	Species  int
	Min, Max int64
}

// A DeclaredCore is a core that the design file states itself.
type DeclaredCore struct {
	State  string
	Ranges []Range
}

// A Network is a design bound to numbers: every constant and copies have a
// value. It is immutable and safe for concurrent use.
type Network struct {
	Title      string
	TimeUnit   string  // unit of every rate is 1/TimeUnit
	Generation float64 // one cell generation in TimeUnit; 0 if not given
	Copies     float64 // Ω: molecules in one unit of amount
	Species    []Species
	Constants  []Constant
	Reactions  []Reaction
	Readout    int // the species that orders and names the states
	Declared   []DeclaredCore

	// File, Text and Digest identify the design file: its name as given, its
	// bytes, and their SHA-256 in lower-case hex. Empty for a network built in code.
	File, Text, Digest string
	// Notes are what is worth a look in the design file, though not wrong.
	Notes Problems

	values []float64 // the constants' values, by index
}

// Unit gives the molecules in one unit of species i's amount: Copies, or 1 for
// a fixed-count species. Counts are amounts times Unit.
func (n *Network) Unit(i int) float64 {
	if n.Species[i].Fixed {
		return 1
	}
	return n.Copies
}

// StartCounts gives the molecule counts at time 0, the starting amounts times
// their unit rounded to the nearest whole number.
func (n *Network) StartCounts() []int64 {
	out := make([]int64, len(n.Species))
	for i, s := range n.Species {
		out[i] = int64(math.Round(s.Start * n.Unit(i)))
	}
	return out
}

// Amounts converts molecule counts to amounts, into dst if it is long enough.
func (n *Network) Amounts(dst []float64, counts []int64) []float64 {
	if cap(dst) < len(counts) {
		dst = make([]float64, len(counts))
	}
	dst = dst[:len(counts)]
	for i, k := range counts {
		dst[i] = float64(k) / n.Unit(i)
	}
	return dst
}

// ConstantValues gives the values of the constants by index. The slice must not
// be changed.
func (n *Network) ConstantValues() []float64 { return n.values }

// SpeciesIndex gives the index of the named species, or -1.
func (n *Network) SpeciesIndex(name string) int {
	for i, s := range n.Species {
		if s.Name == name {
			return i
		}
	}
	return -1
}

// ConstantIndex gives the index of the named constant, or -1.
func (n *Network) ConstantIndex(name string) int {
	for i, c := range n.Constants {
		if c.Name == name {
			return i
		}
	}
	return -1
}
