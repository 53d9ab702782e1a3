package lattice

import "holdfast/model"

// regions says which nodes lie in which core, and which nodes are eliminated
// last.
//
// A region is a core or, after the cores, a closed class without any core: a trap
// that ends a dwell just as a core does. One elimination serves every direction
// of flip because the nodes at which a region can be entered, and the starts, are
// kept to the end: when a region is a target, whatever lies behind its entries is
// never reached, and when it is the origin its inner nodes have been eliminated
// like all others.
type regions struct {
	cores int
	count int
	of    []int32 // region of each node, −1 outside; nodes with a burst under way are outside
	last  []int32 // nodes eliminated last
	start []int32 // node of each core's start

	class   []int32 // communicating class of each node
	closed  []bool  // classes that are never left
	nClosed int
}

func findRegions(c *chain, cores []model.Core) (*regions, error) {
	r := &regions{cores: len(cores), count: len(cores), of: make([]int32, c.nodes())}
	counts := make([]int64, c.species)
	for i := range r.of {
		r.of[i] = -1
		if !c.isState(i) {
			continue
		}
		for s, k := range c.point(i) {
			counts[s] = int64(k)
		}
		for k := range cores {
			if !cores[k].Contains(counts) {
				continue
			}
			if r.of[i] >= 0 {
				return nil, &CoreError{cores[k].State, "meets the core of state \"" + cores[r.of[i]].State + "\""}
			}
			r.of[i] = int32(k)
		}
	}
	if len(cores) > 0 {
		r.start = c.starts
	}
	r.traps(c)
	r.entries(c)
	return r, nil
}

// traps makes a region of every closed class that holds no core.
func (r *regions) traps(c *chain) {
	class, count := c.classes()
	r.class, r.closed = class, c.closed(class, count)
	region := make([]int32, count)
	for k := range region {
		region[k] = -1
	}
	for i, k := range class {
		if r.of[i] >= 0 {
			region[k] = r.of[i]
		}
	}
	for k, closed := range r.closed {
		if closed {
			r.nClosed++
		}
		if closed && region[k] < 0 && r.cores > 0 {
			region[k] = int32(r.count)
			r.count++
		}
	}
	for i, k := range class {
		if r.of[i] < 0 && region[k] >= int32(r.cores) {
			r.of[i] = region[k]
		}
	}
}

// entries lists the nodes to keep to the end: entries of regions, starts, and
// one node of every closed class that has neither.
func (r *regions) entries(c *chain) {
	kept := make([]bool, c.nodes())
	keep := func(i int32) {
		if !kept[i] {
			kept[i] = true
			r.last = append(r.last, i)
		}
	}
	for _, i := range c.starts {
		keep(i)
	}
	for i := range r.of {
		for _, j := range c.successors(i) {
			if r.of[j] >= 0 && r.of[j] != r.of[i] {
				keep(j)
			}
		}
	}
	held := make([]bool, len(r.closed))
	for _, i := range r.last {
		held[r.class[i]] = true
	}
	for i, k := range r.class {
		if r.closed[k] && !held[k] {
			held[k] = true
			keep(int32(i))
		}
	}
}
