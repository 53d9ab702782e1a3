package lattice

import "slices"

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
