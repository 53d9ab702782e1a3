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
	if ctx.Err() != nil {
		return nil, ctx.Err() // some fronts were left out
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
	s.eliminate(f.ctx, t)
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
