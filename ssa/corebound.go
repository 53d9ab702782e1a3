package ssa

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"holdfast/model"
)

// span gives the least and the largest value that weights·n takes in a core, or
// bounds of them.
func span(c *model.Core, weights []int64) (low, high int64) {
	lowest, highest := boxSpan(c, weights)
	if c.Shape != nil {
		middle, reach := ellipsoidSpan(c, weights)
		lowest, highest = math.Max(lowest, middle-reach), math.Min(highest, middle+reach)
	}
	return whole(math.Floor(lowest) - 1), whole(math.Ceil(highest) + 1)
}

// whole turns a bound into a whole number; infinite ones stay out of reach.
func whole(x float64) int64 {
	return int64(math.Max(math.Min(x, 0x1p62), -0x1p62))
}

func boxSpan(c *model.Core, weights []int64) (low, high float64) {
	for i, w := range weights {
		if w == 0 {
			continue
		}
		a, b := float64(w)*float64(c.Low[i]), float64(w)*float64(c.High[i])
		low, high = low+math.Min(a, b), high+math.Max(a, b)
	}
	return low, high
}

// ellipsoidSpan gives the middle and half the width of weights·n in a core's
// ellipsoid: |w·(n−c)| ≤ √(Σ (w·e)²/λ) over the eigenvectors of its shape, with the
// core's bounds for those along which the shape does not bound it.
func ellipsoidSpan(c *model.Core, weights []int64) (middle, reach float64) {
	s := len(weights)
	far := make([]float64, s)
	for i, w := range weights {
		middle += float64(w) * c.Center[i]
		far[i] = math.Max(float64(c.High[i])-c.Center[i], c.Center[i]-float64(c.Low[i]))
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(mat.NewSymDense(s, c.Shape), true) {
		return middle, math.Inf(1)
	}
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	values, square, flat := eigen.Values(nil), 0.0, 0.0
	for k, value := range values {
		along, extent := 0.0, 0.0
		for i, w := range weights {
			e := vectors.At(i, k)
			along += float64(w) * e
			extent += math.Abs(e) * far[i]
		}
		if value > 1e-10*values[s-1] {
			square += along * along / value
		} else {
			flat += math.Abs(along) * extent
		}
	}
	return middle, (math.Sqrt(square) + flat) * (1 + 1e-9)
}
