package lattice

import (
	"context"
	"fmt"
	"math"
	"math/big"
	"testing"
	"time"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// sensitive solves with sensitivities.
func sensitive(t *testing.T, p Problem) *Solution {
	t.Helper()
	p.MeansOnly, p.Sensitivities = true, true
	return solve(t, p)
}

// A reading is a number of a solution that answers to the constants.
type reading func(*Solution) float64

func mean(a int) reading   { return func(s *Solution) float64 { return s.Mean[a] } }
func end(a, b int) reading { return func(s *Solution) float64 { return s.End[a][b] } }
func lost(a int) reading   { return func(s *Solution) float64 { return s.Lost[a] } }

// turned gives the network with constant k, or copies for k beyond the last, set.
func turned(t *testing.T, n *model.Network, k int, value float64) *model.Network {
	t.Helper()
	copies, set := value, map[string]float64{}
	if k < len(n.Constants) {
		copies, set = 0, map[string]float64{n.Constants[k].Name: value}
	}
	out, err := n.Rebind(copies, set)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func today(n *model.Network, k int) float64 {
	if k == len(n.Constants) {
		return n.Copies
	}
	return n.Constants[k].Value
}

// differences gives ∂ ln(reading)/∂k by central differences with k multiplied and
// divided by e^h, e^(h/2) and e^(h/4), between the same cores in the same box,
// extrapolated twice (Richardson), with the change that the last step made.
func differences(t *testing.T, p Problem, box Box, k int, read []reading) (values, changes []float64) {
	t.Helper()
	const h = 0.02
	p.Low, p.High, p.Fixed, p.MeansOnly, p.Sensitivities = box.Low, box.High, true, true, false
	n, v := p.Network, today(p.Network, k)
	at := func(factor float64) *Solution {
		p.Network = turned(t, n, k, v*factor)
		return solve(t, p)
	}
	var table [3][]float64
	for i := range table {
		step := h / float64(int(1)<<i)
		up, down := at(math.Exp(step)), at(math.Exp(-step))
		for _, r := range read {
			table[i] = append(table[i], math.Log(r(up)/r(down))/(2*step))
		}
	}
	for i := range read {
		first := table[1][i] + (table[1][i]-table[0][i])/3
		second := table[2][i] + (table[2][i]-table[1][i])/3
		last := second + (second-first)/15
		values, changes = append(values, last/v), append(changes, math.Abs(last-second)/v)
	}
	return values, changes
}

// rare is what rounding leaves of a difference: means are good to 1e-12, and the
// smallest step is 0.005 to either side.
const rare = 2e-12 / 0.01 * 3

// checkDifferences holds derivatives by the adjoint against differences.
func checkDifferences(t *testing.T, name string, p Problem, read []reading, slope func(*Solution) [][]float64) {
	t.Helper()
	s := sensitive(t, p)
	got := slope(s)
	for k := range len(p.Network.Constants) + 1 {
		if today(p.Network, k) == 0 {
			continue // no factor turns it
		}
		want, change := differences(t, p, s.Box, k, read)
		for i, w := range want {
			v := today(p.Network, k)
			if allowed := change[i] + rare/v; !(math.Abs(got[i][k]-w) <= allowed) {
				t.Errorf("%s, reading %d, parameter %d: %v, by differences %v ± %v", name, i, k, got[i][k], w, allowed)
			}
		}
	}
}

func means(s *Solution) (out [][]float64) {
	for _, x := range s.Sensitivity {
		out = append(out, x.Mean)
	}
	return out
}

// The adjoint against differences, in two species, with every constant, and copies.
func TestSensitivityOfMeans(t *testing.T) {
	for _, copies := range []float64{5, 12} {
		checkDifferences(t, fmt.Sprintf("latch at %v copies", copies), latchProblem(copies, 1), []reading{mean(0), mean(1)}, means)
	}
}

// Three cores on one chain: the chances of the ends answer as well.
func TestSensitivityOfEnds(t *testing.T) {
	p := Problem{Network: zoo.LeakyActivator(0.45, 0.02, 30), Cores: []model.Core{
		zoo.Interval("low", 0, 2, 1), zoo.Interval("middle", 14, 18, 16), zoo.Interval("high", 50, 60, 55),
	}}
	checkDifferences(t, "ends", p, []reading{mean(1), end(1, 0), end(1, 2), mean(0), mean(2)}, func(s *Solution) [][]float64 {
		x := s.Sensitivity
		return [][]float64{x[1].Mean, x[1].End[0], x[1].End[2], x[0].Mean, x[2].Mean}
	})
}

// A latch without leak that is lost to zero molecules, which has no core here.
func TestSensitivityOfLoss(t *testing.T) {
	n := zoo.LeaklessLatch(0.45, 1, 8)
	core := func(name string, low, high, m, p int64) model.Core {
		return model.Core{State: name, Low: []int64{0, low}, High: []int64{100, high}, Start: []int64{m, p}, Center: []float64{float64(m), float64(p)}}
	}
	p := Problem{Network: n, Cores: []model.Core{core("middle", 4, 6, 2, 5), core("high", 12, 16, 6, 14)}}
	checkDifferences(t, "loss", p, []reading{mean(0), end(0, 1), lost(0)}, func(s *Solution) [][]float64 {
		x := s.Sensitivity[0]
		return [][]float64{x.Mean, x.End[1], x.Lost}
	})
}

// Bursts whose mean is a constant, and one whose mean is a formula of two.
func TestSensitivityOfBursts(t *testing.T) {
	p := Problem{Network: zoo.BurstLatch(10), Cores: []model.Core{zoo.Interval("low", 0, 4, 2), zoo.Interval("high", 30, 40, 35)}}
	checkDifferences(t, "bursts", p, []reading{mean(0), mean(1)}, means)
}

// slopes are derivatives of a chain's rates up and down, written out by hand.
type slopes func(n float64) (up, down float64)

// passageSlope differentiates the recursion of passage term by term, in 72 digits:
// t' = ((back·t₋)' − on'·t)/on. It gives ∂ ln(mean first-passage time).
func passageSlope(n *model.Network, from, to, upper int64, d slopes) float64 {
	sum, step, dsum, dstep := exact(0), exact(0), exact(0), exact(0)
	begin, dir := int64(0), int64(1)
	if to < from {
		begin, dir = upper, -1
	}
	for k := begin; k != to; k += dir {
		on, back := birthDeath(n, k)
		don, dback := d(float64(k))
		if dir < 0 {
			on, back, don, dback = back, on, dback, don
		}
		if k == upper {
			back, dback = 0, 0
		}
		term := new(big.Float).Mul(dstep, exact(back))
		term.Add(term, new(big.Float).Mul(step, exact(dback)))
		step.Mul(step, exact(back))
		step.Add(step, exact(1))
		step.Quo(step, exact(on))
		term.Sub(term, new(big.Float).Mul(step, exact(don)))
		dstep.Quo(term, exact(on))
		if (k-from)*dir >= 0 {
			sum.Add(sum, step)
			dsum.Add(dsum, dstep)
		}
	}
	f, _ := dsum.Quo(dsum, sum).Float64()
	return f
}

// From a dwell of 1e2 to one beyond 1e80, where the differences of mean times over
// one transition are lost to rounding: the adjoint keeps its digits. Per unit of the
// exponent 1e-9 is allowed, as for the mean itself.
func TestSensitivityAgainstRecursion(t *testing.T) {
	for _, copies := range []float64{10, 200, 3000} {
		n := zoo.LeakyActivator(0.45, 0.02, copies)
		rest := restPoints(n, int64(8*copies))
		s := sensitive(t, Problem{Network: n, Truncation: 1e-13, Cores: []model.Core{
			zoo.Interval("low", rest[0], rest[0], rest[0]), zoo.Interval("high", rest[1], rest[1], rest[1]),
		}})
		by := []slopes{
			func(k float64) (up, down float64) { return 0, k },    // r
			func(float64) (up, down float64) { return copies, 0 }, // s
			func(k float64) (up, down float64) { // copies: s + f − x f′, f = x²/(1+x²)
				x := k / copies
				q := 1 + x*x
				return 0.02 + x*x/q - 2*x*x/(q*q), 0
			},
		}
		for k, d := range by {
			for a := range 2 {
				want := passageSlope(n, rest[a], rest[1-a], int64(8*copies), d)
				size := max(1, math.Abs(want*today(n, k)))
				if got := s.Sensitivity[a].Mean[k]; math.Abs(got-want)*today(n, k) > 1e-9*size {
					t.Errorf("copies %v, parameter %d, state %d (mean %.3g): %v, want %v", copies, k, a, s.Mean[a], got, want)
				}
			}
		}
	}
}

// Schlögl's chain between its rests, by the recursion differentiated term by term.
func TestSensitivityOfSchlogl(t *testing.T) {
	n := zoo.Schlogl()
	s := sensitive(t, Problem{Network: n, Truncation: 1e-13, Cores: []model.Core{zoo.Interval("low", 100, 100, 100), zoo.Interval("high", 400, 400, 400)}})
	by := []slopes{
		func(k float64) (up, down float64) { return 0, k * (k - 1) * (k - 2) },
		func(k float64) (up, down float64) { return k * (k - 1), 0 },
		func(k float64) (up, down float64) { return 0, k },
		func(float64) (up, down float64) { return 1, 0 },
	}
	for k, d := range by {
		for a, ends := range [2][2]int64{{100, 400}, {400, 100}} {
			want := passageSlope(n, ends[0], ends[1], 2000, d)
			if got := s.Sensitivity[a].Mean[k]; relative(got, want) > 1e-9 {
				t.Errorf("constant %d, state %d: %v, want %v", k, a, got, want)
			}
		}
	}
}

// Two rules that hold exactly. Faster by c: every time is shorter by c, so the slopes
// in the logarithms of the constants that carry 1/time add up to −1. Another unit of
// amount: nothing changes if leak, drive and half are multiplied and copies divided by
// c, so their slopes add up to that of copies (dimensional analysis; algebra). The rules
// are exact on the box, so that only rounding is allowed.
func TestSumRules(t *testing.T) {
	for _, copies := range []float64{10, 60} {
		s := sensitive(t, latchProblem(copies, 1))
		n := zoo.Latch(copies)
		for a := range 2 {
			e := map[string]float64{"copies": copies * s.Sensitivity[a].Mean[len(n.Constants)]}
			size := 1.0
			for k, c := range n.Constants {
				e[c.Name] = c.Value * s.Sensitivity[a].Mean[k]
				size += math.Abs(e[c.Name])
			}
			rates := e["leak"] + e["drive"] + e["b"] + e["k"] + e["a"]
			amounts := e["leak"] + e["drive"] + e["half"] - e["copies"]
			if math.Abs(rates+1) > 1e-11*size || math.Abs(amounts) > 1e-11*size {
				t.Errorf("copies %v, state %d: rates add up to %v, amounts to %v; slopes %v", copies, a, rates, amounts, e)
			}
		}
	}
}

// A constant that is 0 today has a slope per unit, from one side: a latch without leak
// against latches with a little. Forward differences at d and d/2 of the second order,
// extrapolated; what the extrapolation changed is allowed.
func TestSensitivityAtZero(t *testing.T) {
	problem := func(leak float64) Problem {
		p := latchProblem(10, 1)
		p.Network = turned(t, p.Network, 0, leak)
		p.Cores[0].Start, p.Cores[0].Low, p.Cores[0].High, p.Cores[0].Shape = []int64{0, 0}, []int64{0, 0}, []int64{1, 1}, nil
		return p
	}
	s := sensitive(t, problem(0))
	p := problem(0)
	p.Low, p.High, p.Fixed, p.MeansOnly = s.Box.Low, s.Box.High, true, true
	at := func(leak float64) float64 {
		p.Network = turned(t, p.Network, 0, leak)
		return math.Log(solve(t, p).Mean[1])
	}
	forward := func(d float64) float64 { return (4*at(d/2) - at(d) - 3*at(0)) / d }
	wide, near := forward(2e-3), forward(1e-3)
	want, change := near+(near-wide)/3, math.Abs(near-wide)/3
	if got := s.Sensitivity[1].Mean[0]; math.Abs(got-want) > change+1e-8 {
		t.Errorf("slope %v, by forward differences %v ± %v", got, want, change)
	}
	if s.Sensitivity[0] != nil {
		t.Error("a state that is never left has slopes")
	}
}

// The error given covers what a larger box and other roundings change.
func TestSensitivityErrorCoversTruncation(t *testing.T) {
	p := latchProblem(10, 1)
	p.Truncation = 1e-4
	rough := sensitive(t, p)
	p.Truncation = 1e-13
	fine := sensitive(t, p)
	if rough.Box.String() == fine.Box.String() {
		t.Fatal("both in one box: nothing is tested")
	}
	for a := range 2 {
		for k := range rough.Sensitivity[a].Mean {
			off := math.Abs(rough.Sensitivity[a].Mean[k] - fine.Sensitivity[a].Mean[k])
			if off > rough.Sensitivity[a].MeanError[k] {
				t.Errorf("state %d, parameter %d: off by %v, error said to be %v", a, k, off, rough.Sensitivity[a].MeanError[k])
			}
		}
	}
}

// BenchmarkSensitivities reports what the derivatives in all seven parameters cost beside
// the mean dwell times alone, timed in the same run.
func BenchmarkSensitivities(b *testing.B) {
	p := latchProblem(60, 1)
	p.MeansOnly = true
	var spent [2]time.Duration
	for b.Loop() {
		for i := range spent {
			p.Sensitivities = i == 1
			begun := time.Now()
			if _, err := Solve(context.Background(), p); err != nil {
				b.Fatal(err)
			}
			spent[i] += time.Since(begun)
		}
	}
	b.ReportMetric(float64(spent[1])/float64(spent[0]), "with/without")
}
