package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// TestProgramGivesTheSameBits holds compiled laws against their trees, bit by bit,
// over random trees and amounts, 0 among them.
func TestProgramGivesTheSameBits(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 5))
	for range 3000 {
		tree := randomTree(rng, rng.IntN(6)).Bind([]float64{rng.Float64(), rng.Float64()})
		program := Compile(tree)
		x := []float64{2 * rng.Float64(), math.Floor(3 * rng.Float64()), 1}
		got, want := program.Eval(x), tree.Eval(x, nil)
		if math.Float64bits(got) != math.Float64bits(want) && !(math.IsNaN(got) && math.IsNaN(want)) {
			t.Fatalf("%s at %v: program %v, tree %v", tree.Format([]string{"x", "y", "z"}, nil), x, got, want)
		}
	}
}

// TestProgramForms covers each step: every operator with every kind of operand.
func TestProgramForms(t *testing.T) {
	x := []float64{0.7, 1.9, 3.1}
	for _, text := range []string{
		"x", "2", "x + y", "x + 2", "2 + x", "(x*y) + (y*z)", "x + (y*z)",
		"x - y", "x - 2", "2 - x", "(x*y) - (y*z)", "x - (y*z)",
		"x * y", "x * 2", "2 * x", "(x+y) * (y+z)", "x * (y+z)",
		"x / y", "x / 2", "2 / x", "(x+y) / (y+z)", "x / (y+z)",
		"x ^ y", "x ^ 2", "x ^ 3", "x ^ 4", "x ^ 2.5", "2 ^ x", "(x+y) ^ (y+z)",
		"-x", "exp(x)", "log(x)", "sqrt(x)", "abs(-x)", "min(x, y)", "max(x, y, z, 2)",
		"hill(x, 2, 3)", "hill(x, y, 3)", "hill(x, 2, z)", "hill(2, x + y, 3)", "hill_fall(x, 2, 3)", "hill_fall(x, y, z)",
		"x - (y - (z - (x - (y - (z - (x/y - (z/x - (x/z - (y/x - y*z)))))))))",
		"hill(x*y, y*z, hill(z*x, x*y, y*y)) - exp(x*y)/log(2 + y*z)",
	} {
		tree := law(t, text).Bind(nil)
		if got, want := Compile(tree).Eval(x), tree.Eval(x, nil); got != want {
			t.Errorf("%s: program %v, tree %v", text, got, want)
		}
	}
}

func TestProgramAllocatesNothing(t *testing.T) {
	program := Compile(law(t, "0.02 + x^2/(1 + x^2)*y - hill(z, 2, 2)").Bind(nil))
	x := []float64{1, 2, 3}
	if n := testing.AllocsPerRun(100, func() { program.Eval(x) }); n > 0 {
		t.Errorf("Eval allocates %v times", n)
	}
}

// TestNetworkAllocatesNothing checks what engines call in their loops.
func TestNetworkAllocatesNothing(t *testing.T) {
	n := load(t, "pair")
	counts, x, dx := []int64{30, 40}, []float64{1, 1.3}, make([]float64, 2)
	dc := make([]float64, len(n.Constants))
	calls := testing.AllocsPerRun(100, func() {
		for r := range n.Reactions {
			n.Propensity(r, counts)
			n.Flux(r, x)
			n.FluxGradient(r, x, dx)
			n.FluxConstants(r, x, dc)
		}
	})
	if calls > 0 {
		t.Errorf("a pass over the network allocates %v times", calls)
	}
}

// The laws of the benchmarks: one species with literal powers, and three species.
const (
	shortLaw = "0.02 + 1.5*x^2/(1 + x^2)"
	longLaw  = "0.3*x*y/(1 + x + y/2 + z^2) + hill(x, 1.5, 2)*hill_fall(z, 0.7, 2) - 0.1*max(x, y)"
)

var sink float64

func benchmarkLaw(b *testing.B, text string, f func(*Node) func([]float64) float64) {
	p := lawParser{text: text, names: testNames(), hinter: &hinter{}}
	eval := f(p.parse().Bind(nil))
	x := []float64{0.7, 1.9, 3.1}
	for b.Loop() {
		sink = eval(x)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N), "ns/eval")
}

func treeEval(n *Node) func([]float64) float64 {
	return func(x []float64) float64 { return n.Eval(x, nil) }
}

func programEval(n *Node) func([]float64) float64 { return Compile(n).Eval }

func gradientEval(n *Node) func([]float64) float64 {
	dx := make([]float64, 3)
	s := newSweep(n)
	return func(x []float64) float64 { return s.gradient(x, nil, dx, nil) }
}

func BenchmarkShortLawTree(b *testing.B)     { benchmarkLaw(b, shortLaw, treeEval) }
func BenchmarkShortLawProgram(b *testing.B)  { benchmarkLaw(b, shortLaw, programEval) }
func BenchmarkLongLawTree(b *testing.B)      { benchmarkLaw(b, longLaw, treeEval) }
func BenchmarkLongLawProgram(b *testing.B)   { benchmarkLaw(b, longLaw, programEval) }
func BenchmarkLongLawGradient(b *testing.B)  { benchmarkLaw(b, longLaw, gradientEval) }
func BenchmarkShortLawGradient(b *testing.B) { benchmarkLaw(b, shortLaw, gradientEval) }
