package lattice

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// small lists problems of at most some 110 states in boxes that cut their laws
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
		"toggle": {Network: bind(t, toggle(6, 7), 1), Cores: []model.Core{around("low", 6, 1), around("high", 1, 7)}, High: []int64{8, 9}},
		"trio":   {Network: bind(t, trio(4), 1), Cores: []model.Core{spot("low", 4, 0, 0), spot("middle", 0, 4, 0), spot("high", 0, 0, 3)}, High: []int64{4, 4, 3}},
		"bursts": {Network: bind(t, bursting, 1), Cores: []model.Core{around("low", 6, 1), spot("high", 0, 7)}, High: []int64{8, 8}},
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
