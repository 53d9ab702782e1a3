package ssa_test

import (
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/ssa"
)

// latchCores are boxes about the latch's states at 100 copies, so that the runs
// do what a dwell does: test for a flip at every event.
func latchCores() []model.Core {
	return []model.Core{
		{State: "low", Low: []int64{0, 0}, High: []int64{12, 20}},
		{State: "high", Low: []int64{50, 140}, High: []int64{110, 220}},
	}
}

// speed makes runs of b.N events in all and reports the time of one event.
func speed(b *testing.B, p ssa.Plan) {
	p.Runs, p.MaxEvents, p.Seed = 16, int64(max(b.N/16, 1)), 1
	b.ResetTimer()
	res := run(b, p)
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(res.Events), "ns/event")
	b.ReportMetric(0, "ns/op")
}

func BenchmarkLatch(b *testing.B) {
	speed(b, ssa.Plan{Network: zoo.Latch(100), Start: []int64{76, 169}, Cores: latchCores(), From: 1, Threads: 1})
}
