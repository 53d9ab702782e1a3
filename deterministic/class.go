package deterministic

import (
	"math/big"
	"slices"

	"holdfast/model"
)

// class is a part of the space of amounts that the rate equations stay in: the
// stoichiometric compatibility class of the start, or a face of it where some
// species are held at exactly 0. It is immutable.
//
// Its rows fix rows[k]·x = total[k], one dependent species each; the independent
// species are its coordinates, and along it dx = link·dx_independent.
type class struct {
	n           int
	rows        [][]float64
	total       []float64
	dependent   []int
	independent []int
	link        []float64 // n × len(independent), row-major
	frozen      []bool    // species held at 0
}

// newClass gives the class of the conserved totals, cut to the face where the
// frozen species are 0. It is false where no amounts satisfy both.
func newClass(s *system, totals []model.Total, frozen []bool) (*class, bool) {
	rows := make([][]*big.Rat, 0, len(totals)+s.n)
	for _, t := range totals {
		rows = append(rows, rationals(append(slices.Clone(t.Weights), t.Value)))
	}
	for i, f := range frozen {
		if f {
			w := rationals(make([]int64, s.n+1))
			w[i].SetInt64(1)
			rows = append(rows, w)
		}
	}
	left, pivots, rest := reduceRows(rows, s.n)
	for _, w := range rest {
		if w[s.n].Sign() != 0 {
			return nil, false
		}
	}
	return assembleClass(s, left, pivots, frozen), true
}

// assembleClass turns exact rows in counts into rows in amounts.
func assembleClass(s *system, rows [][]*big.Rat, pivots []int, frozen []bool) *class {
	c := &class{n: s.n, dependent: pivots, frozen: frozen}
	isDependent := make([]bool, s.n)
	for k, p := range pivots {
		isDependent[p] = true
		row := make([]float64, s.n)
		for i := range s.n {
			v, _ := rows[k][i].Float64()
			row[i] = v * s.unit[i] / s.unit[p]
		}
		t, _ := rows[k][s.n].Float64()
		c.rows = append(c.rows, row)
		c.total = append(c.total, t/s.unit[p])
	}
	for i := range s.n {
		if !isDependent[i] {
			c.independent = append(c.independent, i)
		}
	}
	c.setLink()
	return c
}

func (c *class) setLink() {
	m := len(c.independent)
	c.link = make([]float64, c.n*m)
	for j, i := range c.independent {
		c.link[i*m+j] = 1
		for k, d := range c.dependent {
			if v := c.rows[k][i]; v != 0 {
				c.link[d*m+j] = -v
			}
		}
	}
}

// dim is the dimension of the class.
func (c *class) dim() int { return len(c.independent) }

// excess gives rows[k]·x − total[k] and the sum of the magnitudes in it.
func (c *class) excess(k int, x []float64) (excess, gross float64) {
	excess = -c.total[k]
	gross = abs(c.total[k])
	for i, w := range c.rows[k] {
		if w != 0 {
			excess += w * x[i]
			gross += abs(w * x[i])
		}
	}
	return excess, gross
}

// holds tells whether x has the class's totals, within rounding of amounts given
// as decimal numbers.
func (c *class) holds(x []float64) bool {
	for k := range c.rows {
		if e, g := c.excess(k, x); !(abs(e) <= 1e-9*g) {
			return false
		}
	}
	return true
}

// restrict gives linkᵀ-coordinates of a matrix on amounts: the m×m matrix
// A[independent, :]·link, which is how A acts along the class.
func (c *class) restrict(a []float64) []float64 {
	m := c.dim()
	out := make([]float64, m*m)
	for p, i := range c.independent {
		for k := range c.n {
			v := a[i*c.n+k]
			if v == 0 {
				continue
			}
			for q := range m {
				out[p*m+q] += v * c.link[k*m+q]
			}
		}
	}
	return out
}

// extend gives link·A·linkᵀ for an m×m matrix in the independent species.
func (c *class) extend(a []float64) []float64 {
	m := c.dim()
	half := make([]float64, c.n*m)
	for i := range c.n {
		for q := range m {
			for p := range m {
				half[i*m+q] += c.link[i*m+p] * a[p*m+q]
			}
		}
	}
	out := make([]float64, c.n*c.n)
	for i := range c.n {
		for j := range c.n {
			for q := range m {
				out[i*c.n+j] += half[i*m+q] * c.link[j*m+q]
			}
		}
	}
	return out
}

func abs(x float64) float64 {
	if x < 0 {
		return -x
	}
	return x
}
