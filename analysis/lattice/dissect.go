package lattice

import (
	"cmp"
	"slices"
)

// A front is a set of nodes that are eliminated together, with the later nodes
// that they touch, directly or through what has been eliminated before.
type front struct {
	low, high int   // positions of the nodes it eliminates
	first     int   // its subtree is fronts first to itself
	children  []int // fronts whose remainder is added into it
	border    []int32
	work      float64 // multiplications, with its subtree

	diagonal, right, below []float64 // factors: pivots × pivots, pivots × border, border × pivots
	rest                   []float64 // border × border, until its parent has taken it
	exit                   []float64 // rate out of the box, pivots then border
}

func (fr *front) pivots() int { return fr.high - fr.low }

// An ordering is an elimination order: node[p] is the node at position p,
// fronts are in an order in which children come first, and the nodes from
// position kept on stay to the end.
type ordering struct {
	node     []int32
	position []int32
	fronts   []front
	roots    []int
	kept     int
}

const leafNodes = 20

// order chooses the order: for one independent direction a sweep along it
// (banded elimination), else nested dissection of the lattice (George, SIAM J.
// Numer. Anal. 10 (1973) 345) with separators as wide as the longest step. The
// nodes to be kept come last.
func order(c *chain, last []int32) *ordering {
	o := &ordering{node: make([]int32, 0, c.nodes()), position: make([]int32, c.nodes())}
	kept := make([]bool, c.nodes())
	for _, i := range last {
		kept[i] = true
	}
	for i := range kept {
		if !kept[i] {
			o.node = append(o.node, int32(i))
		}
	}
	o.kept = len(o.node)
	d := &dissector{chain: c, ordering: o, spare: make([]int32, o.kept)}
	switch {
	case o.kept == 0:
	case c.rank <= 1:
		d.sweep()
	default:
		o.roots = []int{d.dissect(0, o.kept)}
	}
	o.node = append(o.node, last...)
	for p, i := range o.node {
		o.position[i] = int32(p)
	}
	return o
}

type dissector struct {
	*chain
	*ordering
	spare  []int32
	counts []int
}

func (d *dissector) add(f front) int {
	d.fronts = append(d.fronts, f)
	return len(d.fronts) - 1
}

// sweep orders the nodes along the species of the longest range and cuts them
// into fronts, each the parent of the one before.
func (d *dissector) sweep() {
	s, _, _ := d.longest(0, d.kept)
	slices.SortStableFunc(d.node, func(a, b int32) int {
		return cmp.Compare(d.point(int(a))[s], d.point(int(b))[s])
	})
	for low := 0; low < d.kept; low += leafNodes {
		f := front{low: low, high: min(low+leafNodes, d.kept)}
		if n := len(d.fronts); n > 0 {
			f.children = []int{n - 1}
		}
		d.add(f)
	}
	d.roots = []int{len(d.fronts) - 1}
}

// longest gives the species of the longest range among positions low to high,
// and that range.
func (d *dissector) longest(low, high int) (species int, least, most int32) {
	for s := range d.species {
		a, b := d.extent(low, high, s)
		if s == 0 || b-a > most-least {
			species, least, most = s, a, b
		}
	}
	return species, least, most
}

func (d *dissector) extent(low, high, s int) (least, most int32) {
	least = d.counts32(low, s)
	most = least
	for p := low + 1; p < high; p++ {
		k := d.counts32(p, s)
		least, most = min(least, k), max(most, k)
	}
	return least, most
}

func (d *dissector) counts32(p, s int) int32 { return d.chain.counts[int(d.node[p])*d.species+s] }

// dissect orders positions low to high and gives the number of their front.
func (d *dissector) dissect(low, high int) int {
	start := len(d.fronts)
	if high-low <= leafNodes {
		return d.add(front{low: low, high: high, first: start})
	}
	s, cut, ok := d.cut(low, high)
	if !ok {
		return d.add(front{low: low, high: high, first: start})
	}
	a, b := d.split(low, high, s, cut)
	left := d.dissect(low, a)
	right := d.dissect(a, b)
	return d.add(front{low: b, high: high, first: start, children: []int{left, right}})
}

// cut finds the separator cut ≤ count < cut+jump of the species for which the
// separator is small and the two sides are alike.
func (d *dissector) cut(low, high int) (species int, cut int32, ok bool) {
	best := 0.0
	for s := range d.species {
		width := int32(d.jumps[s])
		least, most := d.extent(low, high, s)
		if width == 0 || most-least <= width {
			continue
		}
		d.histogram(low, high, s, least, most)
		before := 0
		for at := least + 1; at+width <= most; at++ {
			before += d.counts[at-1-least]
			apart := 0
			for k := range width {
				apart += d.counts[at+k-least]
			}
			after := high - low - before - apart
			if cost := separatorCost(before, apart, after); !ok || cost < best {
				best, species, cut, ok = cost, s, at, true
			}
		}
	}
	return species, cut, ok
}

// separatorCost weighs the size of a separator against the unlikeness of the two
// sides.
func separatorCost(before, apart, after int) float64 {
	if before == 0 || after == 0 {
		return float64(before+apart+after) * 1e3
	}
	skew := float64(before-after) / float64(before+after)
	return float64(apart) * (1 + 2*skew*skew)
}

func (d *dissector) histogram(low, high, s int, least, most int32) {
	d.counts = append(d.counts[:0], make([]int, most-least+1)...)
	for p := low; p < high; p++ {
		d.counts[d.counts32(p, s)-least]++
	}
}

// split sorts positions low to high into those before the cut, those after it
// and the separator, and gives where the second and third begin.
func (d *dissector) split(low, high, s int, cut int32) (a, b int) {
	width := int32(d.jumps[s])
	a = low
	after, apart := d.spare[:0], d.spare[len(d.spare):]
	end := len(d.spare)
	for p := low; p < high; p++ {
		i := d.node[p]
		switch k := d.counts32(p, s); {
		case k < cut:
			d.node[a] = i
			a++
		case k >= cut+width:
			after = append(after, i)
		default:
			end--
			d.spare[end] = i
			apart = d.spare[end:]
		}
	}
	b = a + copy(d.node[a:], after)
	copy(d.node[b:], apart)
	return a, b
}
