package lattice

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/mat"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// meanByLU is the mean first-passage time from core a's start by gonum's dense LU
// in double precision, for dwells that are not rare.
func meanByLU(p Problem, s *Solution, a int) float64 {
	r := newReference(p, s.Box)
	inside := r.inside(a)
	m := mat.NewDense(len(inside), len(inside), nil)
	ones := mat.NewVecDense(len(inside), nil)
	start := 0
	for k, i := range inside {
		for l, j := range inside {
			m.Set(k, l, -r.rate(i, j))
		}
		m.Set(k, k, r.leaving(i))
		ones.SetVec(k, 1)
		if i == a {
			start = k
		}
	}
	var x mat.VecDense
	if err := x.SolveVec(m, ones); err != nil {
		return math.NaN()
	}
	return x.AtVec(start)
}

// The latch without leak: zero molecules are left never, the other state is left
// for it alone. The dwell is short, so that LU in double precision has at
// least 10 digits.
func TestLeaklessLatch(t *testing.T) {
	const copies = 3
	_, x := zoo.LeaklessStates(0.35, 1)
	on := []int64{int64(math.Round(0.35 * x * copies)), int64(math.Round(x * copies))}
	p := Problem{
		Network: zoo.LeaklessLatch(0.35, 1, copies),
		Cores: []model.Core{
			{State: "low", Start: []int64{0, 0}, Low: []int64{0, 0}, High: []int64{0, 0}},
			{State: "high", Start: on, Low: on, High: on},
		},
		Truncation: 1e-8, Low: []int64{0, 0}, High: []int64{12, 26},
	}
	s := solve(t, p)
	if !s.Never[0] || !math.IsInf(s.Mean[0], 1) || s.End[0][1] != 0 || !math.IsInf(s.Pair[0][1], 1) || s.Quasi[0] != nil {
		t.Errorf("zero molecules are left: never %v, mean %v, ends %v", s.Never[0], s.Mean[0], s.End[0])
	}
	want := meanByLU(p, s, 1)
	if s.Never[1] || relative(s.Mean[1], want) > 1e-9 || math.Abs(s.End[1][0]-1) > 1e-8 {
		t.Errorf("mean %v, want %v; ends %v", s.Mean[1], want, s.End[1])
	}
	// From the quasi-stationary law a dwell is exponential with its escape rate,
	// and that rate is the whole network's slowest.
	if relative(s.Relaxation, 1/s.Escape[1]) > 1e-9 {
		t.Errorf("relaxation time %v, escape rate %v", s.Relaxation, s.Escape[1])
	}
	if s.Weight[0] != 1 || s.Weight[1] != 0 {
		t.Errorf("weights %v, want 1 and 0", s.Weight)
	}
}

// An absorbing state that is no core ends a dwell too: from one molecule that
// turns at 2 to the other state and at 3 to nothing, a dwell is 1/5 long and ends
// lost with probability 3/5.
func TestLost(t *testing.T) {
	n := bind(t, draft{
		species: []string{"a", "b", "gone"},
		reactions: []draftReaction{
			{uses: counts{0: 1}, makes: counts{1: 1}, k: 2},
			{uses: counts{1: 1}, makes: counts{0: 1}, k: 1},
			{uses: counts{0: 1}, makes: counts{2: 1}, k: 3},
		},
	}, 1)
	point := func(name string, k ...int64) model.Core {
		return model.Core{State: name, Start: k, Low: k, High: k}
	}
	s := solve(t, Problem{Network: n, Cores: []model.Core{point("low", 1, 0, 0), point("high", 0, 1, 0)}})
	if relative(s.Mean[0], 0.2) > 1e-15 || relative(s.Lost[0], 0.6) > 1e-15 || relative(s.End[0][1], 0.4) > 1e-15 {
		t.Errorf("mean %v, lost %v, ends %v; want 0.2, 0.6, 0.4", s.Mean[0], s.Lost[0], s.End[0])
	}
	if s.Lost[1] != 0 || relative(s.Pair[0][1], 0.5) > 1e-15 {
		t.Errorf("lost %v, pair %v", s.Lost, s.Pair)
	}
}
