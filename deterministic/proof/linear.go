package proof

import (
	"slices"

	"holdfast/deterministic/proof/interval"
)

// A form is a linear form in nodes: c + Σ coefᵢ nodeᵢ, nodes ascending.
type form struct {
	nodes []int
	coef  []iv
	c     iv
}

// add adds s to the form; sums are taken apart.
func (f *form) add(b *builder, s scaled) {
	switch {
	case s.isConstant():
		f.c = f.c.Add(s.c)
		return
	case b.nodes[s.node].kind != sum:
		f.addNode(s.node, s.c)
		return
	}
	n := b.nodes[s.node]
	f.c = f.c.Add(n.c.Mul(s.c))
	for i, a := range n.args {
		f.addNode(a, n.coef[i].Mul(s.c))
	}
}

func (f *form) addNode(id int, c iv) {
	at, found := slices.BinarySearch(f.nodes, id)
	if !found {
		f.nodes = slices.Insert(f.nodes, at, id)
		f.coef = slices.Insert(f.coef, at, c)
		return
	}
	f.coef[at] = f.coef[at].Add(c)
}

// tidy drops the nodes whose coefficients add to 0, and joins each falling
// function with its rising twin, whose sum is 1.
func (f *form) tidy(b *builder) {
	for i := 0; i < len(f.nodes); i++ {
		n := b.nodes[f.nodes[i]]
		if n.kind != fall || f.coef[i] == interval.Point(0) {
			continue
		}
		n.kind = rise
		id, ok := b.find(n)
		if !ok {
			continue
		}
		if at, found := slices.BinarySearch(f.nodes, id); found && f.coef[at] != interval.Point(0) {
			f.c = f.c.Add(f.coef[i])
			f.coef[at] = f.coef[at].Sub(f.coef[i])
			f.coef[i] = interval.Point(0)
		}
	}
	f.dropZeros(b)
}

func (f *form) dropZeros(b *builder) {
	kept := 0
	for i, c := range f.coef {
		if c == interval.Point(0) {
			b.dropped = append(b.dropped, f.nodes[i])
			continue
		}
		f.nodes[kept], f.coef[kept] = f.nodes[i], c
		kept++
	}
	f.nodes, f.coef = f.nodes[:kept], f.coef[:kept]
}

// join is the sum of the parts.
func (b *builder) join(parts ...scaled) scaled {
	var f form
	for _, p := range parts {
		f.add(b, p)
	}
	f.tidy(b)
	switch {
	case len(f.nodes) == 0:
		return fixed(f.c)
	case len(f.nodes) == 1 && f.c == interval.Point(0):
		return scaled{f.coef[0], f.nodes[0]}
	}
	return scaled{interval.Point(1), b.sum(f)}
}

func (b *builder) sum(f form) int {
	return b.intern(node{kind: sum, args: f.nodes, coef: f.coef, c: f.c})
}
