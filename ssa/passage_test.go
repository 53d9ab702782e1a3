package ssa_test

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/ssa"
)

// exactPassage is the mean and the standard deviation of the time of a one-species
// chain with births up(n) and deaths down(n) to first reach to from from. The mean
// is the closed double sum Σ_{j=from}^{to−1} Σ_{i=0}^{j} 1/up(i) ∏_{k=i+1}^{j}
// down(k)/up(k), or its mirror (Gardiner, Handbook of Stochastic Methods, chapter
// 7, from memory), by its recursion in 200 bits. With q = down/(up+down) the time
// T(n) from n to n+1 is an exponential one of rate up+down and, with chance q, that
// from n−1 to n and another T(n); its second moment follows by squaring.
func exactPassage(net *model.Network, from, to, top int64) (mean, sd float64) {
	up, down := births(net)
	step, first, last := int64(1), int64(0), to-1
	if to < from {
		up, down, step, first, last = down, up, -1, top, to+1
	}
	total, reach := new(big.Float).SetPrec(200), new(big.Float).SetPrec(200)
	before, variance, square := 0.0, 0.0, 0.0
	for n := first; step*(last-n) >= 0; n += step {
		reach.Mul(reach, big.NewFloat(down(n)))
		reach.Add(reach, big.NewFloat(1))
		reach.Quo(reach, big.NewFloat(up(n)))
		m, _ := reach.Float64()
		rate := up(n) + down(n)
		q := down(n) / rate
		square = (2/rate/rate + 2*q/rate*(before+m) + q*(square+2*before*m)) / (1 - q)
		before = m
		if step*(n-from) >= 0 {
			total.Add(total, reach)
			variance += square - m*m
		}
	}
	mean, _ = total.Float64()
	return mean, math.Sqrt(variance)
}

// births sums the propensities of a one-species network by direction.
func births(net *model.Network) (up, down func(int64) float64) {
	sum := func(sign int, n int64) (s float64) {
		for r, re := range net.Reactions {
			if re.Net[0].Count*sign > 0 {
				s += net.Propensity(r, []int64{n})
			}
		}
		return s
	}
	return func(n int64) float64 { return sum(1, n) }, func(n int64) float64 { return sum(-1, n) }
}

// First-passage times within three (exact) standard errors of the exact mean, and
// the recursion within the digits of the computed values of the zoo.
func TestPassages(t *testing.T) {
	long(t)
	cases := []struct {
		name     string
		net      *model.Network
		passages []zoo.Passage
		runs     [2]int // by method: Sparse is too slow for many runs of the first chain
	}{
		{"schlögl", zoo.Schlogl(), zoo.SchloglPassages(), [2]int{60, 12}},
		{"immigration–death", zoo.ImmigrationDeath(1, 0.1), zoo.ImmigrationDeathPassages(), [2]int{2000, 2000}},
	}
	for _, c := range cases {
		for _, want := range c.passages {
			exact, sd := exactPassage(c.net, want.From, want.To, 3000)
			if math.Abs(exact-want.Computed) > halfDigit(want.Computed) {
				t.Errorf("%s %d→%d: recursion gives %v, computed %v", c.name, want.From, want.To, exact, want.Computed)
			}
			for i, m := range methods {
				t.Run(fmt.Sprintf("%s/%d→%d/%v", c.name, want.From, want.To, m), func(t *testing.T) {
					passage(t, c.net, want, exact, sd, ssa.Plan{Runs: c.runs[i], Seed: 11, Method: m})
				})
			}
		}
	}
}

// halfDigit is half a unit of the last decimal that v is written with.
func halfDigit(v float64) float64 {
	_, decimals, _ := strings.Cut(strconv.FormatFloat(v, 'f', -1, 64), ".")
	return 0.5001 * math.Pow10(-len(decimals))
}

func passage(t *testing.T, net *model.Network, want zoo.Passage, exact, sd float64, p ssa.Plan) {
	t.Helper()
	target := zoo.Interval("target", want.To, math.MaxInt64, want.To)
	if want.To < want.From {
		target = zoo.Interval("target", 0, want.To, want.To)
	}
	p.Network, p.Start, p.From = net, []int64{want.From}, 0
	p.Cores = []model.Core{zoo.Interval("start", want.From, want.From, want.From), target}
	mean, se := 0.0, sd/math.Sqrt(float64(p.Runs))
	for _, o := range run(t, p).Outcomes {
		if o.Ending != ssa.Flipped || o.Core != 1 || o.Counts[0] != want.To {
			t.Fatalf("run %d: %v, core %d, counts %v", o.Replicate, o.Ending, o.Core, o.Counts)
		}
		mean += o.Time / float64(p.Runs)
	}
	if math.Abs(mean-exact) > 3*se {
		t.Errorf("mean %v ± %v of %d runs, exact %v", mean, se, p.Runs, exact)
	}
}
