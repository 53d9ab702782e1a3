package batch

import (
	"path/filepath"
	"testing"
	"time"

	"holdfast/analysis/hold"
	"holdfast/model"
)

// Points of the demo latch from 10 to 100 copies, one thread: points/s, and the time that
// their parts take to be written, each by itself, synced and renamed, over the time that
// the points take. A batch writes while it computes, so that this is more than what writing
// costs it.
func BenchmarkLatchPoints(b *testing.B) {
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", "latch.toml"))
	if err != nil {
		b.Fatal(err)
	}
	axis, err := ParseAxis("copies=10:100:10")
	if err != nil {
		b.Fatal(err)
	}
	points, err := NewPoints(draft, Base{Seed: 1}, nil, []Axis{axis}, 0)
	if err != nil {
		b.Fatal(err)
	}
	o := hold.Options{Command: "benchmark", Threads: 1}
	s, err := openStore(filepath.Join(b.TempDir(), "out"), newIdentity(&Job{Draft: draft, Points: points, Hold: o}), Shard{})
	if err != nil {
		b.Fatal(err)
	}
	defer s.close()
	var computing, writing time.Duration
	for b.Loop() {
		for i := range points.Len() {
			begun := time.Now()
			a, err := compute(b.Context(), points, nil, o, points.At(i))
			if err != nil {
				b.Fatal(err)
			}
			computed := time.Now()
			if err := s.put([]*answer{a}); err != nil {
				b.Fatal(err)
			}
			computing += computed.Sub(begun)
			writing += time.Since(computed)
		}
	}
	b.ReportMetric(float64(points.Len()*b.N)/computing.Seconds(), "points/s")
	b.ReportMetric(100*writing.Seconds()/computing.Seconds(), "%-writing")
}
