package deterministic

import (
	"math"
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

// partSearch enumerates the points of one part in order of distance from the
// target, by planes (Schnorr and Euchner, Math. Program. 66 (1994) 181).
type partSearch struct {
	basis     [][]int64
	mu        [][]float64 // Gram–Schmidt coefficients
	size      []float64   // squared Gram–Schmidt lengths
	offset    []float64   // target − start along the Gram–Schmidt vectors
	start     []int64
	target    []float64
	low, high []int64
	z         []int64
	best      []int64
	distance  float64
	nodes     int
}

// mostNodes bounds the enumeration; beyond it the best point so far is taken.
const mostNodes = 200_000

func newPartSearch(p latticePart, start []int64, target []float64, low, high []int64) *partSearch {
	n := len(p.species)
	s := &partSearch{
		basis: p.basis, start: make([]int64, n), target: make([]float64, n),
		low: make([]int64, n), high: make([]int64, n), z: make([]int64, len(p.basis)), distance: math.Inf(1),
	}
	difference := make([]float64, n)
	for j, i := range p.species {
		s.start[j], s.target[j], s.low[j], s.high[j] = start[i], target[i], low[i], high[i]
		difference[j] = target[i] - float64(start[i])
	}
	var star [][]float64
	star, s.mu, s.size = gramSchmidt(p.basis)
	for k := range p.basis {
		s.offset = append(s.offset, dot(difference, star[k])/s.size[k])
	}
	return s
}

func (s *partSearch) run() bool {
	s.descend(len(s.basis)-1, 0)
	return s.best != nil
}

// descend chooses the coefficient of basis vector k, nearest first.
func (s *partSearch) descend(k int, distance float64) {
	if k < 0 {
		s.leaf()
		return
	}
	center := s.offset[k]
	for j := k + 1; j < len(s.basis); j++ {
		center -= float64(s.z[j]) * s.mu[j][k]
	}
	first := math.Round(center)
	side := 1.0
	if center < first {
		side = -1
	}
	for step := 0; s.nodes < mostNodes; step++ {
		s.nodes++
		z := first + side*zigzag(step)
		d := distance + (z-center)*(z-center)*s.size[k]
		if !(d < s.distance*(1-1e-12)) || s.best == nil && d > s.far() {
			return
		}
		s.z[k] = int64(z)
		s.descend(k-1, d)
	}
}

// zigzag is 0, 1, −1, 2, −2, …
func zigzag(step int) float64 {
	half := float64((step + 1) / 2)
	if step%2 == 0 {
		return -half
	}
	return half
}

// far is the squared distance beyond which no point is looked for: some way
// across all basis vectors together.
func (s *partSearch) far() float64 {
	sum := 0.0
	for _, v := range s.size {
		sum += v
	}
	return 16 * (1 + sum)
}

// leaf takes up the point of the coefficients if it is within bounds and nearest.
func (s *partSearch) leaf() {
	point := slices.Clone(s.start)
	for k, b := range s.basis {
		for j, v := range b {
			point[j] += s.z[k] * v
		}
	}
	d := 0.0
	for j, v := range point {
		if v < s.low[j] || v > s.high[j] {
			return
		}
		e := float64(v) - s.target[j]
		d += e * e
	}
	if d < s.distance {
		s.best, s.distance = point, d
	}
}
