package lattice

import (
	"math"
	"slices"
	"testing"

	"holdfast/model"
)

func box(name string, low, start, high []int64) model.Core {
	return model.Core{State: name, Low: low, Start: start, High: high}
}

func reorderedCore(c model.Core, order []int) model.Core {
	out := c
	out.Low, out.High, out.Start = slices.Clone(c.Low), slices.Clone(c.High), slices.Clone(c.Start)
	for i, j := range order {
		out.Low[j], out.High[j], out.Start[j] = c.Low[i], c.High[i], c.Start[i]
	}
	return out
}

func trioCores() []model.Core {
	at := func(name string, s int) model.Core {
		c := box(name, []int64{0, 0, 0}, []int64{0, 0, 0}, []int64{2, 2, 2})
		c.Low[s], c.Start[s], c.High[s] = 4, 5, 9
		return c
	}
	return []model.Core{at("low", 0), at("middle", 1), at("high", 2)}
}

// Species in another order, the states in another order and another number of
// threads change nothing but the last digits: the sums are the same in another
// order, of some 10⁴ positive numbers.
func TestOrderOfSpeciesAndStates(t *testing.T) {
	d, cores := trio(5), trioCores()
	order, low := []int{2, 0, 1}, []int64{0, 0, 0}
	want := solve(t, Problem{Network: bind(t, d, 1), Cores: cores, Low: low, High: []int64{17, 16, 15}, Fixed: true, Threads: 2})
	var moved []model.Core
	for _, c := range []model.Core{cores[1], cores[2], cores[0]} {
		moved = append(moved, reorderedCore(c, order))
	}
	got := solve(t, Problem{Network: bind(t, d.permuted(order), 1), Cores: moved, Low: low, High: []int64{16, 15, 17}, Fixed: true, Threads: 1})
	for a := range 3 {
		b := (a + 2) % 3
		if relative(got.Mean[b], want.Mean[a]) > 1e-11 || relative(got.Weight[b], want.Weight[a]) > 1e-10 || relative(got.Escape[b], want.Escape[a]) > 1e-10 {
			t.Errorf("%s: mean %v and %v, weight %v and %v", want.Names[a], want.Mean[a], got.Mean[b], want.Weight[a], got.Weight[b])
		}
		for c := range 3 {
			if c != a && relative(got.End[b][(c+2)%3], want.End[a][c]) > 1e-11 {
				t.Errorf("ends of %s: %v and %v", want.Names[a], want.End[a], got.End[b])
			}
		}
	}
	if relative(got.Relaxation, want.Relaxation) > 1e-9 {
		t.Errorf("relaxation %v and %v", want.Relaxation, got.Relaxation)
	}
}

// The same problem on one thread and on three gives the same bits.
func TestThreads(t *testing.T) {
	p := latchProblem(20, 1)
	p.Threads = 1
	one := solve(t, p)
	p.Threads = 3
	three := solve(t, p)
	if !slices.Equal(one.Mean, three.Mean) || !slices.Equal(one.Stationary, three.Stationary) || one.Relaxation != three.Relaxation {
		t.Errorf("means %v and %v", one.Mean, three.Mean)
	}
}

// A larger box moves a mean by no more than the smaller box's bound, upwards.
func TestLargerBox(t *testing.T) {
	cores := []model.Core{
		box("low", []int64{16, 0}, []int64{19, 1}, []int64{23, 2}),
		box("high", []int64{0, 16}, []int64{1, 19}, []int64{2, 23}),
	}
	n := bind(t, toggle(20, 20), 1)
	at := func(high int64) *Solution {
		return solve(t, Problem{Network: n, Cores: cores, Low: []int64{0, 0}, High: []int64{high, high}, Fixed: true})
	}
	wide := at(90)
	for _, high := range []int64{36, 46, 60} {
		s := at(high)
		for a := range cores {
			short := (wide.Mean[a] - s.Mean[a]) / s.Mean[a]
			if short < -1e-12 || short > s.Bound[a]+1e-12 {
				t.Errorf("box to %d: %s is short by %v, bound %v", high, s.Names[a], short, s.Bound[a])
			}
		}
	}
	if math.Abs(wide.Weight[0]-0.5) > 1e-9 || relative(wide.Mean[0], wide.Mean[1]) > 1e-12 {
		t.Errorf("two like genes: weights %v, means %v", wide.Weight, wide.Mean)
	}
}

// What belongs together: dwell time, escape rate, relaxation time and weights of
// a rare switch agree to a few times the slowest relaxation inside a basin, which
// is 5.7 min (the Jacobian's eigenvalue at the high state), over the dwell time.
func TestRareConsistency(t *testing.T) {
	s := solve(t, latchProblem(40, 1))
	tolerance := 10 * 5.7 / min(s.Mean[0], s.Mean[1])
	for a := range s.Mean {
		if relative(1/s.Escape[a], s.Mean[a]) > tolerance {
			t.Errorf("%s: mean %v, 1/escape %v", s.Names[a], s.Mean[a], 1/s.Escape[a])
		}
	}
	if want := 1 / (s.Escape[0] + s.Escape[1]); relative(s.Relaxation, want) > tolerance {
		t.Errorf("relaxation %v, from escape rates %v", s.Relaxation, want)
	}
	if want := s.Mean[0] / (s.Mean[0] + s.Mean[1]); relative(s.Weight[0], want) > tolerance {
		t.Errorf("weight %v, from dwells %v", s.Weight[0], want)
	}
}
