package lattice

import (
	"context"
	"errors"
	"math"
	"math/big"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

const precision = 240 // bits, 72 decimal digits

func exact(x float64) *big.Float { return new(big.Float).SetPrec(precision).SetFloat64(x) }

// birthDeath gives the rates up and down of a one-species network of single steps.
func birthDeath(n *model.Network, k int64) (up, down float64) {
	for r := range n.Reactions {
		for _, t := range n.Reactions[r].Net {
			if a := n.Propensity(r, []int64{k}); t.Count > 0 {
				up += a
			} else {
				down += a
			}
		}
	}
	return up, down
}

// passage is the mean first-passage time between two counts of a chain of single
// steps by the recursion t(n→n+1) = (1 + down·t(n−1→n))/up and its mirror image
// (Gardiner, Handbook of Stochastic Methods, section 7.4, is the closed sum of
// it), in 72 digits; upper is where the chain is taken to end.
func passage(n *model.Network, from, to, upper int64) float64 {
	sum, step := exact(0), exact(0)
	begin, dir := int64(0), int64(1)
	if to < from {
		begin, dir = upper, -1
	}
	for k := begin; k != to; k += dir {
		up, down := birthDeath(n, k)
		on, back := up, down
		if dir < 0 {
			on, back = down, up
		}
		if k == upper {
			back = 0
		}
		step.Mul(step, exact(back))
		step.Add(step, exact(1))
		step.Quo(step, exact(on))
		if (k-from)*dir >= 0 {
			sum.Add(sum, step)
		}
	}
	f, _ := sum.Float64()
	return f
}

func relative(got, want float64) float64 { return math.Abs(got-want) / math.Abs(want) }

func solve(t *testing.T, p Problem) *Solution {
	t.Helper()
	s, err := Solve(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// restPoints gives the counts at which the drift of a one-species network
// changes from up to down, below upper.
func restPoints(n *model.Network, upper int64) []int64 {
	var out []int64
	for k := range upper {
		up, down := birthDeath(n, k)
		up1, down1 := birthDeath(n, k+1)
		if up >= down && up1 < down1 {
			out = append(out, k)
		}
	}
	return out
}

// Dwell times from 1 to beyond 1e80 against the recursion in 72 digits. The
// truncation error asked for is 1e-12 and a relative error of 1e-9 is allowed.
func TestAgainstRecursion(t *testing.T) {
	for _, copies := range []float64{10, 50, 200, 1000, 1600, 3000} {
		n := zoo.LeakyActivator(0.45, 0.02, copies)
		upper := int64(8 * copies)
		rest := restPoints(n, upper)
		if len(rest) != 2 {
			t.Fatalf("copies %v: resting points %v", copies, rest)
		}
		a, b := rest[0], rest[1]
		s := solve(t, Problem{
			Network: n, Truncation: 1e-12,
			Cores: []model.Core{zoo.Interval("low", a, a, a), zoo.Interval("high", b, b, b)},
		})
		want := [2]float64{passage(n, a, b, upper), passage(n, b, a, upper)}
		for i, w := range want {
			if relative(s.Mean[i], w) > 1e-9 {
				t.Errorf("copies %v, %s: %v, want %v", copies, s.Names[i], s.Mean[i], w)
			}
		}
	}
}

// A dwell time that no double holds is refused, and not taken for "never".
func TestBeyondDouble(t *testing.T) {
	n := zoo.LeakyActivator(0.45, 0.02, 7000)
	rest := restPoints(n, 7000*8)
	_, err := Solve(context.Background(), Problem{Network: n, Cores: []model.Core{
		zoo.Interval("low", rest[0], rest[0], rest[0]), zoo.Interval("high", rest[1], rest[1], rest[1]),
	}})
	var beyond *RangeError
	if !errors.As(err, &beyond) {
		t.Fatalf("got %v, want a RangeError", err)
	}
}

// Passage times of the zoo's one-species chains, computed there by another
// program in 40 digits and given to at least four decimals.
func TestPassages(t *testing.T) {
	check := func(n *model.Network, p zoo.Passage) {
		target := zoo.Interval("target", p.To, math.MaxInt64, p.To)
		if p.To < p.From {
			target = zoo.Interval("target", 0, p.To, p.To)
		}
		s := solve(t, Problem{Network: n, Cores: []model.Core{zoo.Interval("start", p.From, p.From, p.From), target}})
		if math.Abs(s.Mean[0]-p.Computed) > 0.5e-4 {
			t.Errorf("%d to %d: %v, want %v", p.From, p.To, s.Mean[0], p.Computed)
		}
	}
	for _, p := range zoo.SchloglPassages() {
		check(zoo.Schlogl(), p)
	}
	for _, p := range zoo.ImmigrationDeathPassages() {
		check(zoo.ImmigrationDeath(1, 0.1), p)
	}
}
