package lattice

import (
	"fmt"
	"math/big"
	"slices"

	"gonum.org/v1/gonum/mat"

	"holdfast/model"
)

// reference is the same chain written down a second time: points by name, rates
// in a full matrix, bursts as jumps of every length.
type reference struct {
	points [][]int64
	at     map[string]int
	rates  [][]float64
	exit   []float64
	core   []int
}

func newReference(p Problem, b Box) *reference {
	r := &reference{at: map[string]int{}}
	for i := range p.Cores {
		r.find(p.Cores[i].Start)
	}
	for i := 0; i < len(r.points); i++ {
		r.rates = append(r.rates, nil)
		r.exit = append(r.exit, 0)
		r.core = append(r.core, slices.IndexFunc(p.Cores, func(c model.Core) bool { return c.Contains(r.points[i]) }))
		for k := range p.Network.Reactions {
			re := &p.Network.Reactions[k]
			q := slices.Clone(r.points[i])
			for _, t := range re.Net {
				q[t.Species] += int64(t.Count)
			}
			r.jump(i, p.Network.Propensity(k, r.points[i]), q, re.Bursts, b)
		}
	}
	return r
}

func (r *reference) find(point []int64) int {
	key := fmt.Sprint(point)
	if i, ok := r.at[key]; ok {
		return i
	}
	r.at[key] = len(r.points)
	r.points = append(r.points, slices.Clone(point))
	return len(r.points) - 1
}

// jump adds rate from point i to q, and on along every length of burst.
func (r *reference) jump(i int, rate float64, q []int64, bursts []model.Term, b Box) {
	if rate == 0 {
		return
	}
	for s, k := range q {
		if k < b.Low[s] || k > b.High[s] {
			r.exit[i] += rate
			return
		}
	}
	if len(bursts) > 0 {
		more := bursts[0].Burst / (1 + bursts[0].Burst)
		for q = slices.Clone(q); q[bursts[0].Species] <= b.High[bursts[0].Species]; q[bursts[0].Species]++ {
			r.jump(i, rate*(1-more), q, bursts[1:], b)
			rate *= more
		}
		r.exit[i] += rate
		return
	}
	j := r.find(q)
	for len(r.rates[i]) <= j {
		r.rates[i] = append(r.rates[i], 0)
	}
	r.rates[i][j] += rate
}

func (r *reference) rate(i, j int) float64 {
	if i == j || j >= len(r.rates[i]) {
		return 0
	}
	return r.rates[i][j]
}

// inside lists the points outside all cores but a.
func (r *reference) inside(a int) []int {
	var out []int
	for i, c := range r.core {
		if c < 0 || c == a {
			out = append(out, i)
		}
	}
	return out
}

// leaving is the total rate out of point i.
func (r *reference) leaving(i int) float64 {
	sum := r.exit[i]
	for j := range r.points {
		sum += r.rate(i, j)
	}
	return sum
}

// hitting solves, in 72 digits, for the mean time from the inside points and the
// probabilities of reaching each core first: columns time, core 0, core 1, …
func (r *reference) hitting(inside []int, cores int) [][]float64 {
	n := len(inside)
	m := make([][]*big.Float, n)
	for a, i := range inside {
		m[a] = make([]*big.Float, n+1+cores)
		for b, j := range inside {
			m[a][b] = exact(-r.rate(i, j))
		}
		m[a][a] = r.leavingExact(i)
		m[a][n] = exact(1)
		for c := range cores {
			sum := exact(0)
			for j, k := range r.core {
				if k == c && !slices.Contains(inside, j) {
					sum.Add(sum, exact(r.rate(i, j)))
				}
			}
			m[a][n+1+c] = sum
		}
	}
	return eliminateExact(m)
}

func (r *reference) leavingExact(i int) *big.Float {
	sum := exact(r.exit[i])
	for j := range r.points {
		sum.Add(sum, exact(r.rate(i, j)))
	}
	return sum
}

// eliminateExact solves by Gauss–Jordan elimination; the extra columns are
// right-hand sides.
func eliminateExact(m [][]*big.Float) [][]float64 {
	n := len(m)
	tmp := exact(0)
	for k := range n {
		for j := k + 1; j < len(m[k]); j++ {
			m[k][j].Quo(m[k][j], m[k][k])
		}
		for i := range n {
			if i == k || m[i][k].Sign() == 0 {
				continue
			}
			for j := k + 1; j < len(m[i]); j++ {
				if m[k][j].Sign() != 0 {
					m[i][j].Sub(m[i][j], tmp.Mul(m[i][k], m[k][j]))
				}
			}
		}
	}
	out := make([][]float64, n)
	for i := range n {
		for _, v := range m[i][n:] {
			f, _ := v.Float64()
			out[i] = append(out[i], f)
		}
	}
	return out
}

// slowest is the smallest eigenvalue, by real part, of the negative generator on
// the inside points, by gonum's dense solver; skip says how many to pass over.
func (r *reference) slowest(inside []int, skip int) (value float64, left []float64) {
	m := mat.NewDense(len(inside), len(inside), nil)
	for a, i := range inside {
		for b, j := range inside {
			m.Set(a, b, -r.rate(i, j))
		}
		m.Set(a, a, r.leaving(i))
	}
	var e mat.Eigen
	e.Factorize(m, mat.EigenLeft)
	values := e.Values(nil)
	order := make([]int, len(values))
	for i := range order {
		order[i] = i
	}
	slices.SortFunc(order, func(a, b int) int {
		if real(values[a]) < real(values[b]) {
			return -1
		}
		return 1
	})
	k := order[skip]
	var v mat.CDense
	e.LeftVectorsTo(&v)
	sum := 0.0
	for i := range inside {
		left = append(left, real(v.At(i, k)))
		sum += left[i]
	}
	for i := range left {
		left[i] /= sum
	}
	return real(values[k]), left
}
