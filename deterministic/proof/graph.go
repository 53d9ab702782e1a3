package proof

import (
	"fmt"

	"holdfast/deterministic/proof/interval"
)

// iv is short for the intervals that everything here is worked out in.
type iv = interval.Interval

// kind is the kind of a node of a graph.
type kind uint8

const (
	variable    kind = iota // a species' amount
	constant                // the interval c
	sum                     // c + Σ coefᵢ argᵢ
	product                 // ∏ argᵢ
	wholePower              // arg^n
	realPower               // arg^c for arg ≥ 0
	power                   // arg₀^arg₁
	exponential             // e^arg
	logarithm               // ln arg
	squareRoot              // √arg
	smaller                 // min(arg₀, arg₁)
	larger                  // max(arg₀, arg₁)
	absolute                // |arg|
	rise                    // zᵖ/(1+zᵖ), z = scale·arg, p = c
	fall                    // 1/(1+zᵖ)
	ratio                   // arg₀/(arg₀+arg₁)
)

// A node is one operation of a graph; its arguments have smaller numbers.
type node struct {
	kind  kind
	args  []int
	coef  []iv // sum: one an argument
	c     iv
	scale iv
	n     int // wholePower: the exponent; variable: the species
}

// A graph holds expressions with their common parts shared. It is built by the
// methods of builder.
type graph struct{ nodes []node }

// builder makes a graph; equal nodes are made once.
type builder struct {
	graph
	seen map[string]int
	// constants are the constants' values; absent marks species held at 0.
	constants []float64
	absent    []bool
	// dropped are nodes whose factor was 0: they count no more, but must be defined.
	dropped []int
}

// A scaled is c times a node, or the constant c where node is none.
type scaled struct {
	c    iv
	node int
}

const none = -1

func fixed(c iv) scaled { return scaled{c, none} }

func (s scaled) isConstant() bool { return s.node == none }

func newBuilder(constants []float64, absent []bool) *builder {
	return &builder{seen: map[string]int{}, constants: constants, absent: absent}
}

// intern gives the number of a node equal to n, a new one if there is none.
func (b *builder) intern(n node) int {
	k := key(n)
	if i, ok := b.seen[k]; ok {
		return i
	}
	b.nodes = append(b.nodes, n)
	b.seen[k] = len(b.nodes) - 1
	return len(b.nodes) - 1
}

func key(n node) string { return fmt.Sprint(n.kind, n.args, n.coef, n.c, n.scale, n.n) }

// find gives the number of the node equal to n, if it has been made.
func (b *builder) find(n node) (id int, ok bool) {
	id, ok = b.seen[key(n)]
	return id, ok
}

func (b *builder) species(i int) scaled {
	if b.absent != nil && b.absent[i] {
		return fixed(interval.Point(0))
	}
	return scaled{interval.Point(1), b.intern(node{kind: variable, n: i})}
}

// solid gives a node whose value is s.
func (b *builder) solid(s scaled) int {
	switch {
	case s.isConstant():
		return b.intern(node{kind: constant, c: s.c})
	case s.c == interval.Point(1):
		return s.node
	}
	return b.intern(node{kind: sum, args: []int{s.node}, coef: []iv{s.c}})
}

// times multiplies s by the constant c. A factor of 0 leaves the constant 0.
func (b *builder) times(s scaled, c iv) scaled {
	s.c = multiply(s.c, c)
	if s.c == interval.Point(0) && !s.isConstant() {
		b.dropped = append(b.dropped, s.node)
		return fixed(s.c)
	}
	return s
}

// multiply is the product of two constants: of an unbounded one, and so of one
// that is undefined, nothing is known.
func multiply(a, b iv) iv {
	if !a.Bounded() || !b.Bounded() {
		return interval.Whole()
	}
	return a.Mul(b)
}

// divide is the quotient of two constants, the real line by a divisor around 0.
func divide(a, b iv) iv {
	if !a.Bounded() || !b.Bounded() || b.Has(0) {
		return interval.Whole()
	}
	return a.Div(b)
}
