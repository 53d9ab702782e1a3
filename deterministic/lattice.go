package deterministic

import (
	"slices"

	"holdfast/model"
)

// lattice is the counts that the reactions can make of the start, signs apart:
// start + whole-number combinations of the reactions' changes. It splits into
// parts that share no species.
type lattice struct {
	start []int64
	parts []latticePart
}

// latticePart is one part: its species and reduced basis vectors over them.
type latticePart struct {
	species []int
	basis   [][]int64
}

func newLattice(net *model.Network) *lattice {
	vectors := reactionVectors(net, func(int) bool { return true })
	basis := reduceBasis(echelonBasis(vectors, len(net.Species)))
	l := &lattice{start: net.StartCounts()}
	for len(basis) > 0 {
		var part [][]int64
		touched := support(basis[0])
		part, basis = basis[:1:1], basis[1:]
		for grown := true; grown; {
			grown = false
			for k := 0; k < len(basis); k++ {
				if other := support(basis[k]); overlap(touched, other) {
					touched = union(touched, other)
					part = append(part, basis[k])
					basis = slices.Delete(basis, k, k+1)
					grown = true
					k--
				}
			}
		}
		l.parts = append(l.parts, newPart(touched, part))
	}
	return l
}

func newPart(species []int, vectors [][]int64) latticePart {
	p := latticePart{species: species}
	for _, v := range vectors {
		b := make([]int64, len(species))
		for j, i := range species {
			b[j] = v[i]
		}
		p.basis = append(p.basis, b)
	}
	p.basis = reduceBasis(p.basis)
	return p
}

func support(v []int64) []int {
	var out []int
	for i, k := range v {
		if k != 0 {
			out = append(out, i)
		}
	}
	return out
}

func overlap(a, b []int) bool {
	return slices.ContainsFunc(a, func(i int) bool { return slices.Contains(b, i) })
}

func union(a, b []int) []int {
	out := append(slices.Clone(a), b...)
	slices.Sort(out)
	return slices.Compact(out)
}

// nearest gives the lattice point nearest to the target with low ≤ n ≤ high in
// every species, by distance in molecules; false where none was found.
func (l *lattice) nearest(target []float64, low, high []int64) ([]int64, bool) {
	out := slices.Clone(l.start)
	held := make([]bool, len(out))
	for _, p := range l.parts {
		s := newPartSearch(p, l.start, target, low, high)
		if !s.run() {
			return nil, false
		}
		for j, i := range p.species {
			out[i], held[i] = s.best[j], true
		}
	}
	for i := range out {
		if !held[i] && (out[i] < low[i] || out[i] > high[i]) {
			return nil, false
		}
	}
	return out, true
}
