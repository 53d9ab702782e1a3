package ssa

import "math"

// direct is the Dense method without tables over counts: the propensities that a
// firing may have changed are worked out again, and the sums of their groups
// afresh, so that no error builds up.
//
// A lane's values hold the propensities, groupWidth to a group; sums the running
// sums within each group (the last of a group is its total); ends[g] is the sum
// of all groups before g, and the last of ends the sum of all.
type direct struct {
	*worker
	place    []int   // of each live reaction in values and sums
	reaction []int   // at each place; −1: none
	touched  [][]int // groups that a firing of each reaction may change, ascending
}

func newDirect(w *worker) *direct {
	k := &direct{worker: w, place: make([]int, len(w.Network.Reactions)), reaction: make([]int, len(w.groups)*groupWidth)}
	for g, group := range w.groups {
		for j := range groupWidth {
			k.reaction[g*groupWidth+j] = -1
			if j < len(group.reactions) {
				k.reaction[g*groupWidth+j] = group.reactions[j]
				k.place[group.reactions[j]] = g*groupWidth + j
			}
		}
	}
	for r := range w.Network.Reactions {
		touches := make([]bool, len(w.groups))
		var groups []int
		for _, d := range w.dependents.of(r) {
			touches[k.place[d]/groupWidth] = true
		}
		for g, s := range touches {
			if s {
				groups = append(groups, g)
			}
		}
		k.touched = append(k.touched, groups)
	}
	return k
}

func (k *direct) enter(l *lane) bool {
	if l.values == nil {
		l.values = make([]float64, len(k.reaction))
		l.sums = make([]float64, len(k.reaction))
		l.ends = make([]float64, len(k.groups)+1)
	}
	for p, r := range k.reaction {
		if r >= 0 {
			l.values[p] = k.value(l, r)
		}
	}
	for g := range k.groups {
		l.resum(g)
	}
	return k.settle(l, l.total())
}

func (k *direct) leave(*lane) {}

// value works out a propensity; NaN stands for all that are none.
func (k *direct) value(l *lane, r int) float64 {
	if a := k.props[r].at(l.counts); !bad(a) {
		return a
	}
	return math.NaN()
}

func (k *direct) rate(l *lane) float64 { return l.ends[len(l.ends)-1] }

func (k *direct) refresh(l *lane, laws []variedLaw) float64 {
	for i := range laws {
		r := int(laws[i].reaction)
		l.values[k.place[r]] = k.value(l, r)
		l.resum(k.place[r] / groupWidth)
	}
	return l.total()
}

// resum sums group g afresh.
func (l *lane) resum(g int) {
	v, s := (*[groupWidth]float64)(l.values[g*groupWidth:]), (*[groupWidth]float64)(l.sums[g*groupWidth:])
	sum := 0.0
	for j := range v {
		sum += v[j]
		s[j] = sum
	}
}

// total sums the groups afresh.
func (l *lane) total() float64 {
	sum := 0.0
	for g := range len(l.ends) - 1 {
		sum += l.sums[g*groupWidth+groupWidth-1]
		l.ends[g+1] = sum
	}
	return sum
}

// choose gives the reaction at u, 0 ≤ u < total, along the running sums: the
// first whose sum is above u, found by counting, without a branch. A sum that
// equals the one before it, as that of a zero propensity does, is never the first
// above u.
func (k *direct) choose(l *lane, u float64) int {
	g := 0
	for _, end := range l.ends[1 : len(l.ends)-1] {
		g += 1 - int(above(end, u))
	}
	before, s := l.ends[g], (*[groupWidth]float64)(l.sums[g*groupWidth:])
	p := above(before+s[0], u) + above(before+s[1], u) + above(before+s[2], u)
	return k.reaction[(g+1)*groupWidth-1-int(p)]
}

func (k *direct) advance(lanes []lane) {
	for i := range lanes {
		l := &lanes[i]
		for e := 0; e < turn && l.run >= 0; e++ {
			if !k.event(l) {
				k.begin(l)
			}
		}
	}
}

// event advances a lane by one event and tells whether its run goes on.
func (k *direct) event(l *lane) bool {
	total := l.ends[len(l.ends)-1]
	draw := l.draw()
	t := l.time + draw.Exp/total
	if t > l.next && !k.late(l, t) {
		return false
	}
	l.time = t
	return k.happen(l, draw.Unit*total)
}

// happen lets the reaction at u fire and tells whether the run goes on.
func (k *direct) happen(l *lane, u float64) bool {
	r := k.choose(l, u)
	over := k.fire(l, r)
	l.left--
	for _, d := range k.dependents.of(r) {
		l.values[k.place[d]] = k.value(l, int(d))
	}
	for _, g := range k.touched[r] {
		l.resum(g)
	}
	return k.goesOn(l, over, l.total())
}
