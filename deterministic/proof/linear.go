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

// tidy joins falling functions with their rising twins, and drops the nodes whose
// coefficients add to 0.
func (f *form) tidy(b *builder) {
	for _, id := range slices.Clone(f.nodes) {
		if k := b.nodes[id].kind; k == rise || k == fall {
			f.twin(b, id)
		}
	}
	f.dropZeros(b)
}

// twin writes a saturating function as 1 less its twin, where a falling one has its
// twin in the form as well, or where the constant part becomes smaller: so that 1
// less a function near 1 does not lose its digits.
func (f *form) twin(b *builder, id int) {
	i, _ := slices.BinarySearch(f.nodes, id)
	k, n := f.coef[i], b.nodes[id]
	n.kind = rise + fall - n.kind
	other, both := b.find(n)
	if both {
		_, both = slices.BinarySearch(f.nodes, other)
	}
	c := f.c.Add(k)
	if both && n.kind == fall || !both && c.Mag() >= f.c.Mag() {
		return
	}
	f.c = c
	f.nodes = slices.Delete(f.nodes, i, i+1)
	f.coef = slices.Delete(f.coef, i, i+1)
	f.addNode(b.intern(n), k.Neg())
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
