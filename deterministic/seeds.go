package deterministic

import (
	"math"
	"slices"
)

// primes are the bases of the Halton sequence, one a species; beyond them the
// species take turns with a shift.
var primes = [...]int{2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53}

// halton gives coordinate d of point k ≥ 1 of the Halton sequence, in (0, 1)
// (Halton, Numer. Math. 2 (1960) 84): the digits of k in the base of the
// coordinate, mirrored at the point.
func halton(k, d int) float64 {
	base := primes[d%len(primes)]
	k += 97 * (d / len(primes))
	value, unit := 0.0, 1/float64(base)
	for ; k > 0; k /= base {
		value += float64(k%base) * unit
		unit /= float64(base)
	}
	return value
}

// seeder gives starting points on a class, in a box, with every free species
// positive.
type seeder struct {
	c         *class
	low, high []float64
	floor     []float64
}

// point gives starting point k ≥ 0: the corners of the box first, then points of
// the Halton sequence, in turn with amounts spread evenly and with their
// logarithms spread evenly.
func (s *seeder) point(k int) []float64 {
	x := make([]float64, s.c.n)
	corners := s.corners()
	for d, i := range s.c.free() {
		low, high := s.span(i)
		switch {
		case k < corners:
			x[i] = low
			if k>>d&1 == 1 {
				x[i] = high
			}
		case k%2 == 0:
			x[i] = low + (high-low)*halton(k/2+1, d)
		default:
			x[i] = low * math.Pow(high/low, halton(k/2+1, d))
		}
	}
	return s.c.project(x)
}

// corners is the number of corners of the box that are used as points.
func (s *seeder) corners() int { return 1 << min(s.c.dim(), 5) }

// span is the range that species i is sampled in, low end positive.
func (s *seeder) span(i int) (low, high float64) {
	high = s.high[i]
	low = max(s.low[i], min(s.floor[i], 1e-3*high))
	return low, max(high, 2*low)
}

// free lists the species that are not frozen.
func (c *class) free() []int {
	var out []int
	for i, f := range c.frozen {
		if !f {
			out = append(out, i)
		}
	}
	return out
}

// project moves positive amounts to the class along the directions that multiply
// each species by the exponential of a combination of the totals' rows. There is
// exactly one such point on the class, and it is positive (Birch's theorem; Horn
// and Jackson, Arch. Ration. Mech. Anal. 47 (1972) 81). It gives nil where the
// iteration does not converge, which is where the class has no positive point.
func (c *class) project(x []float64) []float64 {
	rows, totals := c.projectionRows()
	if len(rows) == 0 {
		return x
	}
	f := newLU(len(rows))
	for range 200 {
		excess := make([]float64, len(rows))
		worst := 0.0
		for k, row := range rows {
			sum, gross := -totals[k], abs(totals[k])
			for i, w := range row {
				sum += w * x[i]
				gross += abs(w) * x[i]
			}
			excess[k] = sum
			worst = max(worst, abs(sum)/gross)
		}
		if worst <= 1e-12 {
			return x
		}
		if !projectionStep(f, rows, x, excess) {
			return nil
		}
	}
	return nil
}

// projectionStep multiplies x by exp(−rowsᵀ·y) for the Newton step y, no factor
// beyond e².
func projectionStep(f *lu, rows [][]float64, x, excess []float64) bool {
	n := len(rows)
	for p := range n {
		for q := range n {
			sum := 0.0
			for i, v := range x {
				sum += rows[p][i] * rows[q][i] * v
			}
			f.a[p*n+q] = sum
		}
	}
	if !f.factor() {
		return false
	}
	f.solve(excess)
	power := make([]float64, len(x))
	largest := 0.0
	for i := range x {
		for k, row := range rows {
			power[i] -= row[i] * excess[k]
		}
		largest = max(largest, abs(power[i]))
	}
	shorten := min(1, 2/largest)
	for i := range x {
		x[i] *= math.Exp(shorten * power[i])
	}
	return !math.IsNaN(largest)
}

// projectionRows is the totals' rows without the frozen species' own.
func (c *class) projectionRows() (rows [][]float64, totals []float64) {
	for k, d := range c.dependent {
		if !c.frozen[d] {
			rows, totals = append(rows, c.rows[k]), append(totals, c.total[k])
		}
	}
	return rows, totals
}

// plant starts Newton at the seeds of the options, each on the faces that freeze
// none of its amounts but those of 0.
func (f *finder) plant(faces []face) {
	for _, seed := range f.options.Seeds {
		for _, c := range faces {
			if len(seed) == c.n && c.present(seed) {
				f.starts++
				f.tryRoot(c.class, slices.Clone(seed))
			}
		}
	}
}

// present tells whether the species that x lacks are those that the class freezes.
func (c *class) present(x []float64) bool {
	for i, v := range x {
		if c.frozen[i] != (v == 0) {
			return false
		}
	}
	return true
}
