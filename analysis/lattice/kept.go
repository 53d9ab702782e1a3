package lattice

import "context"

// A keptChain is the chain censored to the kept nodes: what is left when all
// others have been eliminated. Nodes are numbered from 0.
type keptChain struct {
	ctx    context.Context
	rates  matrix
	exit   []float64
	region []int32
	start  []int // each core's start
	closed []bool
}

func (f *factors) keptChain() *keptChain {
	m := f.remain.rows
	k := &keptChain{ctx: f.ctx, rates: f.remain, exit: f.remainExit, region: make([]int32, m), closed: make([]bool, m)}
	for i := range m {
		node := f.node[f.ordering.kept+i]
		k.region[i] = f.of[node]
		k.closed[i] = f.regions.closed[f.class[node]]
	}
	for _, node := range f.regions.start {
		k.start = append(k.start, int(f.position[node])-f.ordering.kept)
	}
	return k
}

// A restricted is the censored chain on some of its nodes, the rest and the exit
// from the box being where it ends.
type restricted struct {
	*keptChain
	team   team
	inside []int // kept nodes, ascending
	place  []int // place of each kept node among them, −1 for none
	stuck  []int // kept nodes that no end can be reached from; an end too
	system system
}

// restrict prepares the chain on the kept nodes that inside tells of. With
// leaves false, leaving the box does not count: a path that would is back at the
// kept node it came from.
func (k *keptChain) restrict(t team, leaves bool, inside func(i int) bool) *restricted {
	r := &restricted{keptChain: k, team: t, place: make([]int, len(k.exit))}
	r.choose(leaves, inside)
	n := len(r.inside)
	r.system = system{diagonal: dense(n, n, make([]float64, n*n)), exit: make([]float64, n)}
	for a, i := range r.inside {
		row := r.system.diagonal.row(a)
		if leaves {
			r.system.exit[a] = k.exit[i]
		}
		for j, v := range k.rates.row(i) {
			switch b := r.place[j]; {
			case b >= 0:
				row[b] = v
			case j != i:
				r.system.exit[a] += v
			}
		}
	}
	r.system.below = matrix{columns: n, stride: n}
	r.system.right = matrix{rows: n}
	r.system.eliminate(k.ctx, t)
	return r
}

// choose sorts the nodes into inside, stuck and ends.
func (r *restricted) choose(leaves bool, inside func(i int) bool) {
	reaches := make([]bool, len(r.exit))
	var queue []int
	for i := range reaches {
		if !inside(i) || leaves && r.exit[i] > 0 {
			reaches[i] = true
			queue = append(queue, i)
		}
	}
	for len(queue) > 0 {
		j := queue[len(queue)-1]
		queue = queue[:len(queue)-1]
		for i := range reaches {
			if !reaches[i] && r.rates.data[i*r.rates.stride+j] > 0 {
				reaches[i] = true
				queue = append(queue, i)
			}
		}
	}
	for i := range reaches {
		r.place[i] = -1
		switch {
		case inside(i) && reaches[i]:
			r.place[i] = len(r.inside)
			r.inside = append(r.inside, i)
		case inside(i):
			r.stuck = append(r.stuck, i)
		}
	}
}

// right solves M x = b for values on the inside nodes, in place.
func (r *restricted) right(x []float64) {
	r.team[0].lowerRight(r.system.diagonal, x)
	r.team[0].upperRight(r.system.diagonal, x)
}

// left solves y M = b for values on the inside nodes, in place.
func (r *restricted) left(y []float64) {
	r.team[0].upperLeft(r.system.diagonal, y)
	r.team[0].lowerLeft(r.system.diagonal, y)
}

// gather picks the inside nodes' values from those of all kept nodes.
func (r *restricted) gather(kept []float64) []float64 {
	out := make([]float64, len(r.inside))
	for a, i := range r.inside {
		out[a] = kept[i]
	}
	return out
}

// spread puts the inside nodes' values among those of all kept nodes, and fill at
// the others.
func (r *restricted) spread(kept, x []float64, fill float64) {
	for i := range kept {
		kept[i] = fill
	}
	for a, i := range r.inside {
		kept[i] = x[a]
	}
}

// into sums the rates from inside nodes to the kept nodes that target tells of.
func (r *restricted) into(target func(i int) bool) []float64 {
	out := make([]float64, len(r.inside))
	for a, i := range r.inside {
		for j, v := range r.rates.row(i) {
			if j != i && r.place[j] < 0 && target(j) {
				out[a] += v
			}
		}
	}
	return out
}

// stationary is the stationary law of the closed class among the kept nodes, not
// normalised: the same elimination with nothing left to end in (Grassmann,
// Taksar, Heyman 1985).
func (k *keptChain) stationary(t team) []float64 {
	law := make([]float64, len(k.exit))
	last := -1
	for i, c := range k.closed {
		if c {
			last = i
		}
	}
	r := k.restrict(t, false, func(i int) bool { return k.closed[i] && i != last })
	y := make([]float64, len(r.inside))
	for a, i := range r.inside {
		y[a] = k.rates.data[last*k.rates.stride+i]
	}
	r.left(y)
	r.spread(law, y, 0)
	law[last] = 1
	return law
}
