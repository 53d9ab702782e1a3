package lattice

import "math"

// A chain is the Markov chain of a network on the part of a box that can be
// reached, as a sparse list of transitions. Its nodes are the lattice states and,
// where reactions make bursts, lattice states with a burst under way, in which no
// time passes.
type chain struct {
	species int
	counts  []int32 // node by node
	phase   []uint8 // 0 in a lattice state
	jumps   []int   // longest single step in each species
	rank    int     // independent directions of species with long ranges

	first []int // transitions of node i are first[i] to first[i+1]
	to    []int32
	rate  []float64
	exit  []float64 // rate out of the box, by node
	exits []exit    // the same by face

	starts []int32 // nodes that exploration began from
}

// An exit is a transition out of the box. Faces are numbered 2·species for the
// low side and one more for the high side.
type exit struct {
	node int32
	face int
	rate float64
}

func (c *chain) nodes() int               { return len(c.phase) }
func (c *chain) point(i int) []int32      { return c.counts[i*c.species : (i+1)*c.species] }
func (c *chain) edges(i int) (a, b int)   { return c.first[i], c.first[i+1] }
func (c *chain) isState(i int) bool       { return c.phase[i] == 0 }
func (c *chain) successors(i int) []int32 { return c.to[c.first[i]:c.first[i+1]] }

// states counts the lattice states.
func (c *chain) states() int {
	n := 0
	for _, p := range c.phase {
		if p == 0 {
			n++
		}
	}
	return n
}

// few is the range of counts above which a species counts as a direction of the
// lattice of its own.
const few = 4

// long marks the species whose counts on the lattice span more than a few values.
func (c *chain) long() []bool {
	out := make([]bool, c.species)
	for s := range out {
		low, high := int32(math.MaxInt32), int32(0)
		for i := s; i < len(c.counts); i += c.species {
			low, high = min(low, c.counts[i]), max(high, c.counts[i])
		}
		out[s] = high-low >= few
	}
	return out
}
