package deterministic

import (
	"math"
	"slices"
)

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
