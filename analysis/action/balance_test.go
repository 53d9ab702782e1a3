package action

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// balanced writes a design of n species whose rates are in detailed balance with
// Φ(x) = 3((s−2)²−1)² + Σ_{i>0} wᵢ(xᵢ − x₀ − 0.3 x₀²)²/2, s = x₀: with births
// x exp(−∂Φ/∂x/2) and deaths x exp(∂Φ/∂x/2), θ = ∇Φ solves H = 0, so that S is a
// difference of Φ (algebra). The valley of Φ is bent.
func balanced(n int) string {
	var b strings.Builder
	b.WriteString("title = \"balance\"\ntime = \"min\"\ncopies = 100\n[species]\n")
	for i := range n {
		fmt.Fprintf(&b, "x%d = { start = 1%s }\n", i, map[bool]string{true: ", readout = true"}[i == 0])
	}
	slope := make([]string, n)
	slope[0] = "12*((x0-2)^2-1)*(x0-2)"
	for i := 1; i < n; i++ {
		gap := fmt.Sprintf("(x%d-x0-0.3*x0^2)", i)
		slope[i] = fmt.Sprintf("%d*%s", i, gap)
		slope[0] += fmt.Sprintf("-%d*%s*(1+0.6*x0)", i, gap)
	}
	for i := range n {
		fmt.Fprintf(&b, "[[reaction]]\nname = \"birth %d\"\nmakes = { x%d = 1 }\nrate = \"x%d*exp(-(%s)/2)\"\n", i, i, i, slope[i])
		fmt.Fprintf(&b, "[[reaction]]\nname = \"death %d\"\nuses = { x%d = 1 }\nrate = \"x%d*exp((%s)/2)\"\n", i, i, i, slope[i])
	}
	return b.String()
}

// TestDetailedBalance: the saddle of balanced is 3 higher than both its wells, in one
// to seven species.
func TestDetailedBalance(t *testing.T) {
	for _, n := range []int{1, 2, 3, 7} {
		network := parse(t, balanced(n), nil)
		at := func(x0 float64) []float64 {
			x := make([]float64, n)
			for i := range x {
				x[i] = x0 + 0.3*x0*x0
			}
			x[0] = x0
			return x
		}
		for _, from := range []float64{1, 3} {
			p, err := Solve(context.Background(), Problem{
				Network: network,
				From:    deterministic.State{Name: "well", Kind: deterministic.StableNode, Amounts: at(from)},
				Saddle:  deterministic.State{Name: "pass", Kind: deterministic.Saddle, Amounts: at(2), UnstableDirections: 1},
			})
			if err != nil {
				t.Fatal(err)
			}
			near(t, fmt.Sprintf("S of %d species from %v", n, from), p.S, 3, 1e-8)
			for k, x := range p.Points[:p.Summit] {
				for i, want := range uphill(x) {
					if math.Abs(p.Momenta[k][i]-want) > 1e-4 { // the root of the error of S
						t.Fatalf("%d species, point %d: θ = %v, want %v", n, k, p.Momenta[k], uphill(x))
					}
				}
			}
		}
	}
}

// uphill is ∇Φ.
func uphill(x []float64) []float64 {
	out := make([]float64, len(x))
	s := x[0] - 2
	out[0] = 12 * (s*s - 1) * s
	for i := 1; i < len(x); i++ {
		gap := x[i] - x[0] - 0.3*x[0]*x[0]
		out[i] = float64(i) * gap
		out[0] -= float64(i) * gap * (1 + 0.6*x[0])
	}
	return out
}

// TestLatchAgainstLattice: ln τ = c + Ω S + c₁/Ω + …, so that mean dwells at three
// numbers of copies give S but for terms of 1/Ω³. The dwells are the lattice's
// (computed, by package lattice, which is held against closed forms; the README's
// table, run by its test).
func TestLatchAgainstLattice(t *testing.T) {
	r := routes(t, zoo.Latch(100))
	copies := [3]float64{200, 250, 300}
	for from, dwells := range map[string][3]float64{
		"low":  {1.784666e9, 1.144107e11, 7.346424e12},
		"high": {2.445223e8, 1.360948e10, 7.592606e11},
	} {
		var logs [3]float64
		for k, d := range dwells {
			logs[k] = math.Log(d)
		}
		near(t, "S of "+from, exponent(t, r, from, other(from)).S, slope(copies, logs), 1e-3)
	}
}

// slope fits c + Ω S + c₁/Ω through three points and gives S.
func slope(x, y [3]float64) float64 {
	// Divided differences of y·x, a quadratic in x, give S at second order.
	f := [3]float64{x[0] * y[0], x[1] * y[1], x[2] * y[2]}
	first := (f[1] - f[0]) / (x[1] - x[0])
	second := (f[2] - f[1]) / (x[2] - x[1])
	return (second - first) / (x[2] - x[0])
}

// TestGradientByDifferences moves each constant of three designs by 1e-4 of itself
// both ways; the difference is off by about 1e-8 of S.
func TestGradientByDifferences(t *testing.T) {
	for name, draft := range map[string]*model.Draft{"latch": load(t, "latch"), "pair": load(t, "pair"), "bursts": draft(t, burstLatch)} {
		make := func(set map[string]float64) *model.Network {
			n, err := draft.Bind(0, set)
			if err != nil {
				t.Fatal(err)
			}
			return n
		}
		n := make(nil)
		r := routes(t, n)
		for _, from := range []string{"low", "high"} {
			p := exponent(t, r, from, other(from))
			for k, c := range n.Constants {
				h := 1e-4 * c.Value
				up := exponent(t, routes(t, make(map[string]float64{c.Name: c.Value + h})), from, other(from)).S
				down := exponent(t, routes(t, make(map[string]float64{c.Name: c.Value - h})), from, other(from)).S
				if got := (up - down) / (2 * h); math.Abs(got-p.Gradient[k])*c.Value > 1e-6*p.S+1e-6*math.Abs(got*c.Value) {
					t.Errorf("%s, from %s: ∂S/∂%s = %v, by differences %v", name, from, c.Name, p.Gradient[k], got)
				}
			}
		}
	}
}
