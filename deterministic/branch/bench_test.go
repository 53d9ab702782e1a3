package branch

import (
	"context"
	"testing"

	"holdfast/internal/zoo"
)

// All branches and windows of the latch with one knob.
func BenchmarkFollowLatch(b *testing.B) {
	n := zoo.Latch(100)
	k, err := NewKnob(n, "b", 0.2, 2)
	if err != nil {
		b.Fatal(err)
	}
	points := 0
	for b.Loop() {
		d, err := Follow(context.Background(), n, k, Options{})
		if err != nil {
			b.Fatal(err)
		}
		for _, c := range d.Branches {
			points += len(c.Points)
		}
	}
	b.ReportMetric(b.Elapsed().Seconds()/float64(b.N)*1e3, "ms/diagram")
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(points), "ns/point")
}

// The fold curve of the latch in two knobs.
func BenchmarkFoldCurveLatch(b *testing.B) {
	n := zoo.Latch(100)
	first, err := NewKnob(n, "b", 0.2, 2)
	if err != nil {
		b.Fatal(err)
	}
	second, err := NewKnob(n, "leak", 0, 0.3)
	if err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		if _, err := FoldCurves(context.Background(), n, first, second, Options{}); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(b.Elapsed().Seconds()/float64(b.N)*1e3, "ms/diagram")
}
