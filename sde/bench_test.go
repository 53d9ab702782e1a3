package sde_test

import (
	"context"
	"fmt"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/sde"
)

func run(tb testing.TB, p sde.Plan) sde.Result {
	tb.Helper()
	res, err := sde.Run(context.Background(), p)
	if err != nil {
		tb.Fatal(err)
	}
	return res
}

// speed makes as many runs of 10,000 steps as the benchmark asks for steps, and at
// least 64 runs, and reports the time of one step.
func speed(b *testing.B, p sde.Plan) {
	p.Runs, p.MaxSteps, p.Seed = max(64, b.N/10_000), 10_000, 1
	b.ResetTimer()
	res := run(b, p)
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(res.Steps), "ns/step")
	b.ReportMetric(0, "ns/op")
}

// latch is the latch at 100 copies from its high state, with a box about the low
// state as a core, so that the runs do all that a dwell needs. The system and the
// step are those of the loop by hand that the engine is held against.
func latch() sde.Plan {
	return sde.Plan{
		System: sde.Chemical(zoo.Latch(100)), Start: []float64{76, 169}, From: 1, Threads: 1, Step: 0.01,
		Cores: []model.Core{
			{State: "low", Low: []int64{0, 0}, High: []int64{12, 20}},
			{State: "high", Low: []int64{50, 140}, High: []int64{110, 220}},
		},
	}
}

func BenchmarkLatch(b *testing.B) { speed(b, latch()) }

// BenchmarkTwoGenes has two laws with whole powers.
func BenchmarkTwoGenes(b *testing.B) {
	speed(b, sde.Plan{System: sde.Chemical(zoo.SymmetricRepression(6, 100)), From: -1, Threads: 1, Step: 0.01})
}

// BenchmarkDimers is 16 reactions in 8 directions on eight species, all in conserved
// totals or near 0.
func BenchmarkDimers(b *testing.B) {
	speed(b, sde.Plan{System: sde.Chemical(zoo.DimerSwitch()), From: -1, Threads: 1, Step: 0.001})
}

// BenchmarkPower has a law with a power that is not whole.
func BenchmarkPower(b *testing.B) {
	speed(b, sde.Plan{System: sde.Chemical(zoo.SelfActivator(3, 1, 1, 2.5, 100)), From: -1, Threads: 1, Step: 0.01})
}

// BenchmarkOwn is a system of one's own, evaluated lane by lane.
func BenchmarkOwn(b *testing.B) {
	speed(b, sde.Plan{System: doubleWell{0.1}, Start: []float64{-1}, From: -1, Threads: 1, Step: 0.01})
}

// BenchmarkThreads is the latch on one goroutine and on two, over all steps.
func BenchmarkThreads(b *testing.B) {
	for _, n := range []int{1, 2} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			p := latch()
			p.Threads = n
			speed(b, p)
		})
	}
}
