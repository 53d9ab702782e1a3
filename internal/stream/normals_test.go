package stream

import (
	"math"
	"math/bits"
	"testing"
)

// At every length, and over and again, so that numbers which need more stand everywhere:
// at the ends of blocks too, where they take numbers beyond.
func TestFillNormalIsRepeatedNormal(t *testing.T) {
	a, b := New(4, 5, 6), New(4, 5, 6)
	var room [3*Block + 1]float64
	for n := range 30 * len(room) {
		dst := room[:n%len(room)]
		a.FillNormal(dst)
		for i, x := range dst {
			if y := b.Normal(); x != y {
				t.Fatalf("%d numbers, number %d: %v, Normal gives %v", len(dst), i, x, y)
			}
		}
		if a != b {
			t.Fatalf("%d numbers: the streams have not come to the same place", len(dst))
		}
	}
}

// The loop for this machine and the plain one agree in every bit.
func TestNormalsArePlain(t *testing.T) {
	edges := 0
	for n, state := range states() {
		var a, b [Block]float64
		got, want := a[:4+4*(n%16)], b[:4+4*(n%16)]
		e := fillNormals(got, state[0], state[1])
		if f := normalsPlain(want, &normalZiggurat.strips, &oneAndTwo, state[0], state[1]); e != f {
			t.Fatalf("%d numbers from %x: edges %x, plain %x", len(got), state, e, f)
		}
		for i := range got {
			if g, w := math.Float64bits(got[i]), math.Float64bits(want[i]); g != w {
				t.Fatalf("from %x, number %d: bits %x, plain %x", state, i, g, w)
			}
		}
		edges += bits.OnesCount64(e)
	}
	if edges == 0 {
		t.Error("no normal number was at an edge")
	}
}
