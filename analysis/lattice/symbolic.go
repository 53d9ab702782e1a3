package lattice

import "slices"

// A transition between positions of the elimination order.
type transition struct {
	from, to int32
	rate     float64
}

// A plan is everything about an elimination that does not need numbers, and the
// rates sorted by the front that takes them.
type plan struct {
	*chain
	*ordering
	*regions
	moves  []transition // front by front: those whose earlier end the front eliminates
	begin  []int        // moves of front f are begin[f] to begin[f+1]; those among kept nodes come last
	parent []int        // parent of each front, len(fronts) for a root

	numbers int64   // floating-point numbers in the factors
	peak    int64   // most numbers in remainders at one time, about
	work    float64 // multiplications
}

func newPlan(c *chain, o *ordering, r *regions) *plan {
	p := &plan{chain: c, ordering: o, regions: r, parent: make([]int, len(o.fronts))}
	for f := range p.parent {
		p.parent[f] = len(o.fronts)
	}
	for f := range o.fronts {
		for _, k := range o.fronts[f].children {
			p.parent[k] = f
		}
	}
	p.sortTransitions()
	p.findBorders()
	p.measure()
	return p
}

// owners gives the front that eliminates each position; len(fronts) if kept.
func (p *plan) owners() []int32 {
	owner := make([]int32, p.nodes())
	for i := range owner {
		owner[i] = int32(len(p.fronts))
	}
	for f := range p.fronts {
		for i := p.fronts[f].low; i < p.fronts[f].high; i++ {
			owner[i] = int32(f)
		}
	}
	return owner
}

// sortTransitions hands every transition to the front that eliminates its
// earlier end.
func (p *plan) sortTransitions() {
	owner := p.owners()
	begin := make([]int, len(p.fronts)+2)
	p.eachTransition(func(t transition) { begin[owner[min(t.from, t.to)]+1]++ })
	for f := range len(begin) - 1 {
		begin[f+1] += begin[f]
	}
	p.moves = make([]transition, begin[len(begin)-1])
	next := slices.Clone(begin)
	p.eachTransition(func(t transition) {
		f := owner[min(t.from, t.to)]
		p.moves[next[f]] = t
		next[f]++
	})
	p.begin = begin
}

func (p *plan) eachTransition(visit func(transition)) {
	for i := range p.nodes() {
		a, b := p.edges(i)
		for k := a; k < b; k++ {
			if int(p.to[k]) != i {
				visit(transition{p.position[i], p.position[p.to[k]], p.rate[k]})
			}
		}
	}
}

// findBorders lists, front by front, the later positions that its elimination
// touches, in order.
func (p *plan) findBorders() {
	mark := make([]int32, p.nodes())
	for f := range p.fronts {
		fr := &p.fronts[f]
		stamp, high := int32(f+1), int32(fr.high)
		add := func(i int32) {
			if i >= high && mark[i] != stamp {
				mark[i] = stamp
				fr.border = append(fr.border, i)
			}
		}
		for _, t := range p.moves[p.begin[f]:p.begin[f+1]] {
			add(max(t.from, t.to))
		}
		for _, k := range fr.children {
			for _, i := range p.fronts[k].border {
				add(i)
			}
		}
		slices.Sort(fr.border)
	}
}

// measure adds up the work and the memory.
func (p *plan) measure() {
	var held int64
	for f := range p.fronts {
		fr := &p.fronts[f]
		n, b := float64(fr.pivots()), float64(len(fr.border))
		fr.work = n*n*n/3 + n*n*b + n*b*b
		p.work += fr.work
		p.numbers += int64(n*n + 2*n*b)
		held += int64(b * b)
		p.peak = max(p.peak, held)
		for _, k := range fr.children {
			fr.work += p.fronts[k].work
			held -= int64(len(p.fronts[k].border)) * int64(len(p.fronts[k].border))
		}
	}
	m := float64(p.nodes() - p.ordering.kept)
	p.numbers += int64(2 * m * m)
	p.work += m * m * m
}
