package proof_test

import (
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// benchmark proves a network's list and reports milliseconds and boxes.
func benchmark(b *testing.B, n *model.Network, want int) {
	boxes := 0
	for b.Loop() {
		r := prove(b, n, nil, nil)
		if !r.Complete || len(r.Roots) != want {
			b.Fatalf("%v; want %d", r, want)
		}
		boxes = r.Boxes
	}
	b.ReportMetric(b.Elapsed().Seconds()*1e3/float64(b.N), "ms/proof")
	b.ReportMetric(float64(boxes), "boxes")
	b.ReportMetric(0, "ns/op")
}

// twoGenes is two genes with transcripts and proteins that repress each other.
func twoGenes(t testing.TB, alpha, n float64) *model.Network {
	d := newDesign("m1", "p1", "m2", "p2")
	for _, g := range [][3]string{{"m1", "p1", "p2"}, {"m2", "p2", "p1"}} {
		fallen := model.Call(model.OpHillFall, d.x(g[2]), num(1), num(n))
		d.rate("", g[0], plus(num(0.01), times(num(alpha), fallen))).mass(g[0], "", "", 1)
		d.mass("", g[0], g[1], 2).mass(g[1], "", "", 0.5)
	}
	return d.network(t)
}

func BenchmarkLatch(b *testing.B)         { benchmark(b, zoo.Latch(100), 3) }
func BenchmarkLeaklessLatch(b *testing.B) { benchmark(b, zoo.LeaklessLatch(0.45, 1, 100), 3) }
func BenchmarkSchlogl(b *testing.B)       { benchmark(b, zoo.Schlogl(), 3) }
func BenchmarkTwoGenes(b *testing.B)      { benchmark(b, twoGenes(b, 1, 2), 3) }
func BenchmarkTwoGenesReal(b *testing.B)  { benchmark(b, twoGenes(b, 1, 2.3), 3) }
func BenchmarkInducible(b *testing.B)     { benchmark(b, zoo.InducibleRepression(0, 1), 3) }
func BenchmarkDimerSwitch(b *testing.B)   { benchmark(b, zoo.DimerSwitch(), 3) }

// BenchmarkSixGenes is six genes that feed themselves and repress each other: 63
// states in six dimensions.
func BenchmarkSixGenes(b *testing.B) { benchmark(b, mutual(b, 6, 1, 2, 1), 63) }
