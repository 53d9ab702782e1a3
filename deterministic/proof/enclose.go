package proof

import (
	"math"
	"slices"

	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// Enclose gives a box, in amounts, one bound a species, that is proved to hold
// every resting state with non-negative amounts on the conserved totals of the
// start; ok is false where none was found. The bounds follow from the totals and
// from production that saturates: at rest each species is lost as fast as it is
// made. Where the network has no resting state the box may be one point.
func Enclose(n *model.Network) (low, high []float64, ok bool) {
	t, err := newTask(Problem{Network: n})
	if err != nil {
		return nil, nil, false
	}
	most, ok := t.enclosure()
	if !ok {
		return nil, nil, false
	}
	for _, a := range most {
		low, high = append(low, a.Lo), append(high, a.Hi)
	}
	return low, high, true
}

// enclosure narrows the box of all non-negative amounts as far as that gains; ok
// is false where an amount stays unbounded.
func (t *task) enclosure() (out []interval.Interval, ok bool) {
	if t.system == nil {
		return nil, false
	}
	w := newWorker(t.system)
	b := make(box, len(t.system.species))
	for i := range b {
		b[i] = iv{Lo: 0, Hi: math.Inf(1)}
	}
	for {
		if w.narrow(b, 1e-3, 1000) {
			for i := range b {
				b[i] = interval.Point(0)
			}
		}
		if ok = box(b).bounded(); ok || !t.shorten(b) {
			return t.system.amounts(b), ok
		}
	}
}

func (b box) bounded() bool {
	for _, a := range b {
		if !a.Bounded() {
			return false
		}
	}
	return true
}

// shorten finds a bound for one of the unbounded amounts, and tells whether it
// found one. Where the amount is at least u its rate may be divided by its powers,
// and then what is of highest order stands alone against what is bounded.
func (t *task) shorten(b box) bool {
	for j := range b {
		if b[j].Bounded() {
			continue
		}
		s, ok, err := newSystem(t.network, t.totals, t.values, nil, t.system.species[j])
		if err != nil || !ok {
			continue
		}
		w := newWorker(s)
		for _, u := range []float64{1, 1e3, 1e-3, 1e6, 1e-6, 1e9, 1e-9} {
			slab := slices.Clone(b)
			slab[j] = slab[j].Meet(iv{Lo: u, Hi: math.Inf(1)})
			if w.narrow(slab, 1e-3, 100) {
				slab[j] = interval.Point(u)
			}
			if slab[j].Bounded() {
				b[j].Hi = max(u, slab[j].Hi)
				return true
			}
		}
	}
	return false
}

// divided gives the row divided by each power of species i that it is a
// polynomial of, where the species is above 0.
func (b *builder) divided(r scaled, i int) []scaled {
	x := b.species(i).node
	if r.isConstant() || b.nodes[r.node].kind != sum {
		return nil
	}
	n := b.nodes[r.node]
	degree := 0
	for _, a := range n.args {
		degree = max(degree, b.degree(a, x))
	}
	var out []scaled
	for k := 1; k <= degree; k++ {
		parts := []scaled{{n.c, b.whole(x, -k)}}
		for j, a := range n.args {
			parts = append(parts, b.lower(scaled{n.coef[j], a}, x, k))
		}
		out = append(out, b.join(parts...))
	}
	return out
}

// degree is the whole power of x that divides node a.
func (b *builder) degree(a, x int) int {
	m := b.monomial(scaled{interval.Point(1), a})
	for i, base := range m.bases {
		if base == x && m.exps[i] > 0 {
			return m.exps[i]
		}
	}
	return 0
}

// lower divides s by the k-th power of x.
func (b *builder) lower(s scaled, x, k int) scaled {
	m := b.monomial(s)
	e := b.degree(s.node, x)
	if e > 0 {
		m, _ = m.takes(monomial{c: interval.Point(1), bases: []int{x}, exps: []int{e}})
	}
	if e != k {
		m.multiply(x, e-k)
	}
	return b.build(m)
}
