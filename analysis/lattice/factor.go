package lattice

import (
	"context"
	"slices"
	"sync"
	"sync/atomic"
)

// factors is a plan with its numbers: every node but the kept ones eliminated.
type factors struct {
	*plan
	team team

	jobs [][2]int // subtrees done by one thread each, as ranges of fronts, largest first
	top  []int    // the fronts above them, children first

	remain     matrix    // rates among the kept nodes, censored to them
	remainExit []float64 // rates out of the box

	ctx  context.Context
	tell func(done float64)
	done atomic.Int64
}

// factor eliminates all nodes but the kept ones.
func factor(ctx context.Context, p *plan, threads int, tell func(done float64)) (*factors, error) {
	f := &factors{plan: p, ctx: ctx, tell: tell}
	for range threads {
		f.team = append(f.team, newWorker())
	}
	f.schedule()
	m := p.nodes() - p.ordering.kept
	f.remain = dense(m, m, make([]float64, m*m))
	f.remainExit = make([]float64, m)
	f.subtrees(func(w *worker, low, high int) {
		store := f.store(low, high)
		for k := low; k < high && ctx.Err() == nil; k++ {
			store = f.front(k, team{w}, store)
		}
	})
	for _, k := range f.top {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		f.front(k, f.team, f.store(k, k+1))
	}
	f.gatherKept()
	return f, ctx.Err()
}

// schedule divides the fronts into subtrees small enough to share out evenly and
// the top, whose fronts are done one after the other by all threads together.
func (f *factors) schedule() {
	limit := 0.0
	for _, r := range f.roots {
		limit += f.fronts[r].work
	}
	limit /= float64(8 * len(f.team))
	for k := len(f.fronts) - 1; k >= 0; {
		fr := &f.fronts[k]
		if fr.work > limit && len(fr.children) > 0 && len(f.team) > 1 {
			f.top = append(f.top, k)
			k--
			continue
		}
		f.jobs = append(f.jobs, [2]int{fr.first, k + 1})
		k = fr.first - 1
	}
	slices.Reverse(f.top)
	slices.SortStableFunc(f.jobs, func(a, b [2]int) int {
		if f.fronts[a[1]-1].work > f.fronts[b[1]-1].work {
			return -1
		}
		return 1
	})
}

// subtrees runs work on every job, on all threads.
func (f *factors) subtrees(work func(w *worker, low, high int)) {
	var next atomic.Int64
	var wait sync.WaitGroup
	for _, w := range f.team {
		wait.Go(func() {
			for {
				j := int(next.Add(1)) - 1
				if j >= len(f.jobs) {
					return
				}
				work(w, f.jobs[j][0], f.jobs[j][1])
			}
		})
	}
	wait.Wait()
}

// store gives zeroed memory for the factors of fronts low to high.
func (f *factors) store(low, high int) []float64 {
	n := 0
	for k := low; k < high; k++ {
		p, b := f.fronts[k].pivots(), len(f.fronts[k].border)
		n += p*p + 2*p*b + p + b
	}
	return make([]float64, n)
}

// front assembles and eliminates one front, forms its remainder, and gives back
// what is left of the store.
func (f *factors) front(k int, t team, store []float64) []float64 {
	fr := &f.fronts[k]
	p, b := fr.pivots(), len(fr.border)
	cut := func(n int) []float64 {
		out := store[:n:n]
		store = store[n:]
		return out
	}
	fr.diagonal, fr.right, fr.below, fr.exit = cut(p*p), cut(p*b), cut(b*p), cut(p+b)
	fr.rest = t[0].zeros(b * b)
	f.assemble(k, t[0])
	s := fr.system()
	s.eliminate(t)
	t.multiplyAdd(dense(b, b, fr.rest), s.below, s.right)
	if f.tell != nil && k%64 == 0 {
		f.tell(float64(f.done.Add(64)) / float64(len(f.fronts)))
	}
	return store
}

func (fr *front) system() system {
	p, b := fr.pivots(), len(fr.border)
	return system{dense(p, p, fr.diagonal), dense(p, b, fr.right), dense(b, p, fr.below), fr.exit}
}

// assemble fills a front with its own rates and its children's remainders.
func (f *factors) assemble(k int, w *worker) {
	fr := &f.fronts[k]
	p, b := fr.pivots(), len(fr.border)
	for i := range p {
		fr.exit[i] = f.exit[f.node[fr.low+i]]
	}
	for _, t := range f.plan.moves[f.begin[k]:f.begin[k+1]] {
		from, to := fr.local(t.from), fr.local(t.to)
		switch {
		case from < p && to < p:
			fr.diagonal[from*p+to] += t.rate
		case from < p:
			fr.right[from*b+to-p] += t.rate
		default:
			fr.below[(from-p)*p+to] += t.rate
		}
	}
	for _, c := range fr.children {
		child := &f.fronts[c]
		fr.take(child)
		w.giveBack(child.rest)
		child.rest = nil
	}
}

// local gives the place of a position among the front's pivots and border.
func (fr *front) local(position int32) int {
	if int(position) < fr.high {
		return int(position) - fr.low
	}
	i, _ := slices.BinarySearch(fr.border, position)
	return fr.pivots() + i
}

// places gives the local places of a child's border, ascending.
func (fr *front) places(border []int32) []int {
	out := make([]int, len(border))
	at := 0
	for i, position := range border {
		if int(position) < fr.high {
			out[i] = int(position) - fr.low
			continue
		}
		for fr.border[at] != position {
			at++
		}
		out[i] = fr.pivots() + at
	}
	return out
}

// take adds a child's remainder.
func (fr *front) take(child *front) {
	at := fr.places(child.border)
	p, b, n := fr.pivots(), len(fr.border), len(at)
	inner, _ := slices.BinarySearch(at, p)
	exits := child.exit[child.pivots():]
	for i, row := range at {
		from := child.rest[i*n : (i+1)*n]
		fr.exit[row] += exits[i]
		if row >= p {
			scatter(fr.below[(row-p)*p:(row-p+1)*p], from[:inner], at[:inner], 0)
			scatter(fr.rest[(row-p)*b:(row-p+1)*b], from[inner:], at[inner:], p)
			continue
		}
		scatter(fr.diagonal[row*p:(row+1)*p], from[:inner], at[:inner], 0)
		scatter(fr.right[row*b:(row+1)*b], from[inner:], at[inner:], p)
	}
}

// scatter adds from to the places at of row, less offset.
func scatter(row, from []float64, at []int, offset int) {
	for j, v := range from {
		row[at[j]-offset] += v
	}
}

// gatherKept assembles the rates among the kept nodes.
func (f *factors) gatherKept() {
	m := f.remain.rows
	for i := range m {
		f.remainExit[i] += f.exit[f.node[f.ordering.kept+i]]
	}
	for _, t := range f.plan.moves[f.begin[len(f.fronts)]:] {
		f.remain.data[(int(t.from)-f.ordering.kept)*m+int(t.to)-f.ordering.kept] += t.rate
	}
	for _, k := range f.roots {
		root := &f.fronts[k]
		n := len(root.border)
		for i, a := range root.border {
			f.remainExit[int(a)-f.ordering.kept] += root.exit[root.pivots()+i]
			row := f.remain.row(int(a) - f.ordering.kept)
			for j, c := range root.border {
				row[int(c)-f.ordering.kept] += root.rest[i*n+j]
			}
		}
		root.rest = nil
	}
}
