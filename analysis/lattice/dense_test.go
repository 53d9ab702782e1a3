package lattice

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"testing"

	"gonum.org/v1/gonum/mat"

	"holdfast/internal/zoo"
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

// small lists problems of at most some 130 states in boxes that cut their laws
// off, so that exits count: two species, three species with three states, bursts,
// jumps by two with a conserved total.
func small(t *testing.T) map[string]Problem {
	spot := func(name string, start ...int64) model.Core {
		return model.Core{State: name, Start: start, Low: start, High: start}
	}
	around := func(name string, start ...int64) model.Core {
		c := spot(name, start...)
		c.Low, c.High = slices.Clone(start), slices.Clone(start)
		for s := range start {
			c.Low[s]--
			c.High[s]++
		}
		return c
	}
	bursting := toggle(3, 3)
	bursting.reactions[0].makes, bursting.reactions[0].burst = nil, map[int]float64{0: 1.5}
	bursting.reactions[2].makes, bursting.reactions[2].burst = nil, map[int]float64{1: 2}
	dimers := draft{
		species: []string{"a", "b", "bb", "x"},
		start:   []float64{0, 0, 0, 0},
		reactions: []draftReaction{
			{uses: counts{0: 1}, makes: counts{1: 1}, k: 0.02},
			{uses: counts{1: 1}, makes: counts{0: 1}, k: 1},
			{uses: counts{1: 2}, makes: counts{2: 1}, k: 0.3},
			{uses: counts{2: 1}, makes: counts{1: 2}, k: 2},
			{needs: counts{2: 1}, uses: counts{0: 1}, makes: counts{1: 1}, k: 0.5},
			{needs: counts{2: 1}, makes: counts{3: 1}, k: 0.4},
			{uses: counts{3: 1}, k: 1},
		},
	}
	return map[string]Problem{
		"toggle": {Network: bind(t, toggle(6, 7), 1), Cores: []model.Core{around("low", 6, 1), around("high", 1, 7)}, High: []int64{9, 10}},
		"trio":   {Network: bind(t, trio(4), 1), Cores: []model.Core{spot("low", 4, 0, 0), spot("middle", 0, 4, 0), spot("high", 0, 0, 3)}, High: []int64{5, 4, 3}},
		"bursts": {Network: bind(t, bursting, 1), Cores: []model.Core{around("low", 7, 1), spot("high", 0, 8)}, High: []int64{9, 10}},
		"dimers": {Network: bind(t, dimers, 1), Cores: []model.Core{spot("low", 9, 0, 0, 0), spot("high", 1, 2, 3, 2)}, High: []int64{9, 9, 4, 3}},
	}
}

// Means and ends against 72-digit elimination; escape rates, quasi-stationary laws
// against gonum's dense eigenvalues, whose own error is some 1e-12 of the largest
// rate.
func TestAgainstDense(t *testing.T) {
	for name, p := range small(t) {
		p.Fixed, p.Low = true, make([]int64, len(p.High))
		s := solve(t, p)
		r := newReference(p, s.Box)
		if s.States != len(r.points) {
			t.Errorf("%s: %d states, want %d", name, s.States, len(r.points))
		}
		for a := range p.Cores {
			inside := r.inside(a)
			checkDwell(t, s, r, a, inside)
			checkQuasi(t, s, r, a, inside)
		}
		checkCommittors(t, s, r)
	}
}

func checkDwell(t *testing.T, s *Solution, r *reference, a int, inside []int) {
	t.Helper()
	want := r.hitting(inside, len(s.Names))[slices.Index(inside, a)] // core a's start is point a
	if relative(s.Mean[a], want[0]) > 1e-12 {
		t.Errorf("mean of %s: %v, want %v", s.Names[a], s.Mean[a], want[0])
	}
	for b, p := range want[1:] {
		if math.Abs(s.End[a][b]-p) > 1e-12*p {
			t.Errorf("ends of %s in %s: %v, want %v", s.Names[a], s.Names[b], s.End[a][b], p)
		}
	}
}

func checkQuasi(t *testing.T, s *Solution, r *reference, a int, inside []int) {
	t.Helper()
	rate, law := r.slowest(inside, 0)
	if relative(s.Escape[a], rate) > 1e-9 {
		t.Errorf("escape rate of %s: %v, want %v", s.Names[a], s.Escape[a], rate)
	}
	for k, i := range inside {
		if got := s.Quasi[a][s.index(r.points[i])]; math.Abs(got-law[k]) > 1e-9 {
			t.Fatalf("quasi-stationary law of %s at %v: %v, want %v", s.Names[a], r.points[i], got, law[k])
		}
	}
}

// index finds a point among the lattice states.
func (s *Solution) index(point []int64) int {
	for i := range s.States {
		same := true
		for k, v := range s.Point(i) {
			same = same && int64(v) == point[k]
		}
		if same {
			return i
		}
	}
	return -1
}

// Committors leave paths out of the box out of account.
func checkCommittors(t *testing.T, s *Solution, r *reference) {
	t.Helper()
	inside := r.inside(-1)
	for k, want := range r.hitting(inside, len(s.Names)) {
		sum := 0.0
		for _, h := range want[1:] {
			sum += h
		}
		for b, h := range want[1:] {
			if got := s.Committor[b][s.index(r.points[inside[k]])]; math.Abs(got-h/sum) > 1e-12*h/sum {
				t.Fatalf("committor to %s at %v: %v, want %v", s.Names[b], r.points[inside[k]], got, h/sum)
			}
		}
	}
	for i, a := range r.core {
		if a >= 0 && s.Committor[a][s.index(r.points[i])] != 1 {
			t.Errorf("committor inside %s is not 1", s.Names[a])
		}
	}
}

// A closed chain with two states: 60 molecules that turn each other over. The
// stationary law by detailed balance, the relaxation time by gonum.
func TestClosedChain(t *testing.T) {
	n := bind(t, draft{
		species: []string{"a", "b"},
		reactions: []draftReaction{
			{uses: counts{0: 1}, makes: counts{1: 1}, k: 0.6},
			{uses: counts{1: 1}, makes: counts{0: 1}, k: 0.65},
			{uses: counts{0: 1}, needs: counts{1: 2}, makes: counts{1: 1}, k: 0.0016},
			{uses: counts{1: 1}, needs: counts{0: 2}, makes: counts{0: 1}, k: 0.0016},
		},
	}, 1)
	cores := []model.Core{{State: "low", Start: []int64{58, 2}, Low: []int64{57, 0}, High: []int64{60, 3}}, {State: "high", Start: []int64{3, 57}, Low: []int64{0, 56}, High: []int64{4, 60}}}
	s := solve(t, Problem{Network: n, Cores: cores})
	if s.States != 61 || s.Truncation != 0 {
		t.Errorf("%d states and a truncation error of %v, want 61 and 0", s.States, s.Truncation)
	}
	r := newReference(Problem{Network: n, Cores: cores}, s.Box)
	all := make([]int, len(r.points))
	for i := range all {
		all[i] = i
	}
	rate, _ := r.slowest(all, 1)
	if relative(s.Relaxation, 1/rate) > 1e-8 {
		t.Errorf("relaxation time %v, want %v", s.Relaxation, 1/rate)
	}
	for i := range s.States {
		j := s.index([]int64{int64(s.Point(i)[0]) - 1, int64(s.Point(i)[1]) + 1})
		if j < 0 {
			continue
		}
		x, y := r.at[fmt.Sprint([]int64{int64(s.Point(i)[0]), int64(s.Point(i)[1])})], r.at[fmt.Sprint([]int64{int64(s.Point(j)[0]), int64(s.Point(j)[1])})]
		if forth, back := s.Stationary[i]*r.rate(x, y), s.Stationary[j]*r.rate(y, x); relative(forth, back) > 1e-12 {
			t.Errorf("no detailed balance at %v: %v, %v", s.Point(i), forth, back)
		}
	}
	weight := 0.0
	for a := range s.Weight {
		weight += s.Weight[a]
	}
	if math.Abs(weight-1) > 1e-12 || math.Abs(total(s.Stationary)-1) > 1e-12 {
		t.Errorf("weights %v add up to %v", s.Weight, weight)
	}
}

// Relaxation times in closed form: 1/(forth+back) for one molecule of two
// states, 1/out for immigration and death, whose eigenvalues are 0, out, 2 out, …
func TestRelaxation(t *testing.T) {
	s := solve(t, Problem{Network: zoo.TwoStateChain(0.3, 0.0007), Cores: zoo.TwoStateCores()})
	if relative(s.Relaxation, 1/0.3007) > 1e-12 {
		t.Errorf("two states: %v, want %v", s.Relaxation, 1/0.3007)
	}
	if relative(s.Mean[0], 1/0.3) > 1e-14 || relative(s.Mean[1], 1/0.0007) > 1e-14 {
		t.Errorf("two states: dwells %v", s.Mean)
	}
	s = solve(t, Problem{Network: zoo.ImmigrationDeath(1, 0.1), Cores: []model.Core{zoo.Interval("low", 0, 4, 4), zoo.Interval("high", 16, 99, 16)}})
	if relative(s.Relaxation, 10) > 1e-7 {
		t.Errorf("immigration and death: %v, want 10", s.Relaxation)
	}
}
