package stream

import "testing"

func TestFillIsRepeatedNext(t *testing.T) {
	a := Draws{New(1, 2, 3), New(1, 2, 4)}
	b := a
	var dst [Block]Draw
	for n := range 1000 {
		a.Fill(&dst)
		for i, d := range dst {
			if want := b.Next(); d != want {
				t.Fatalf("block %d, draw %d: %v, Next gives %v", n, i, d, want)
			}
		}
	}
	if a != b {
		t.Error("the streams have not come to the same place")
	}
}

func BenchmarkDraws(b *testing.B) {
	s := Draws{New(1, 2, 3), New(1, 2, 4)}
	var dst [Block]Draw
	for b.Loop() {
		s.Fill(&dst)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/Block, "ns/draw")
}
