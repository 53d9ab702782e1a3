package lattice

import (
	"context"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// one, two and three are problems of one, two and three species.
func one() Problem {
	return Problem{Network: zoo.LeakyActivator(0.45, 0.02, 1000), Cores: []model.Core{
		zoo.Interval("low", 50, 50, 50), zoo.Interval("high", 1690, 1690, 1690),
	}}
}

func three(b *testing.B) Problem {
	return Problem{Network: bind(b, trio(8), 1), Cores: trioCores(), Truncation: 1e-8}
}

func report(b *testing.B, states int) {
	b.ReportMetric(float64(states)*float64(b.N)/b.Elapsed().Seconds(), "states/s")
}

func benchmarkSolve(b *testing.B, p Problem) {
	p.MeansOnly = true
	states := 0
	for b.Loop() {
		s, err := Solve(context.Background(), p)
		if err != nil {
			b.Fatal(err)
		}
		states = s.States
	}
	report(b, states)
}

// The whole way from a network to its mean dwell times, with the growth of the
// box.
func BenchmarkSolve(b *testing.B) {
	b.Run("one", func(b *testing.B) { benchmarkSolve(b, one()) })
	b.Run("two-100-copies", func(b *testing.B) { benchmarkSolve(b, latchProblem(100, 1)) })
	b.Run("two-200-copies", func(b *testing.B) { benchmarkSolve(b, latchProblem(200, 1)) })
	b.Run("three", func(b *testing.B) { benchmarkSolve(b, three(b)) })
}

// The elimination alone.
func BenchmarkEliminate(b *testing.B) {
	for name, p := range map[string]Problem{"one": one(), "two": latchProblem(100, 1), "three": three(b)} {
		b.Run(name, func(b *testing.B) {
			l, err := p.lay(context.Background(), firstBox(&p, firstDeviations))
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				if _, err := factor(context.Background(), l.plan, 2, nil); err != nil {
					b.Fatal(err)
				}
			}
			report(b, l.states())
			b.ReportMetric(2*l.work*float64(b.N)/1e9/b.Elapsed().Seconds(), "Gflop/s")
		})
	}
}
