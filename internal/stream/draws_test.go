package stream

import (
	"math"
	"math/bits"
	"testing"
)

func TestFillIsRepeatedNext(t *testing.T) {
	a := Draws{New(1, 2, 3), New(1, 2, 4)}
	b := a
	var dst Batch
	for n := range 1000 {
		a.Fill(&dst)
		for i := range Block {
			if got, want := (Draw{dst.Exp[i], dst.Unit[i]}), b.Next(); got != want {
				t.Fatalf("block %d, draw %d: %v, Next gives %v", n, i, got, want)
			}
		}
	}
	if a != b {
		t.Error("the streams have not come to the same place")
	}
}

// The loop for this machine and the plain one agree in every bit, from states with
// long carries and from a thousand others.
func TestFillIsPlain(t *testing.T) {
	edges := 0
	for _, state := range states() {
		var got, want Batch
		e := fill(&got, state[0], state[1])
		if f := fillPlain(&want, &expZiggurat.strips, &oneAndTwo, state[0], state[1]); e != f {
			t.Fatalf("from %x: edges %x, plain %x", state, e, f)
		}
		for i := range Block {
			if g, w := [2]uint64{math.Float64bits(got.Exp[i]), math.Float64bits(got.Unit[i])}, [2]uint64{math.Float64bits(want.Exp[i]), math.Float64bits(want.Unit[i])}; g != w {
				t.Fatalf("from %x, draw %d: bits %x, plain %x", state, i, g, w)
			}
		}
		edges += bits.OnesCount64(e)
	}
	if edges == 0 {
		t.Error("no exponential number was at an edge")
	}
}

// states are some with long carries and a thousand others.
func states() [][2]uint64 {
	out := [][2]uint64{{0, 0}, {0, word}, {word, 0}, {word, word}, {1 << 63, 1 << 63}, {1<<32 - 1, 1<<32 - 1}, {word &^ (1<<32 - 1), word &^ (1<<32 - 1)}}
	s := New(8, 0, 0)
	for range 1000 {
		out = append(out, [2]uint64{s.Uint64(), s.Uint64()})
	}
	return out
}

// n steps of the generator are one step of that of n.
func TestSteps(t *testing.T) {
	s := New(1, 2, 3)
	start, low := s.words()
	for n := 1; n <= 2*Block; n++ {
		s.Uint64()
		c := generator.steps(n)
		h, l := c.advance(start, low)
		if wantHigh, wantLow := s.words(); h != wantHigh || l != wantLow {
			t.Fatalf("%d steps: %x %x, the source is at %x %x", n, h, l, wantHigh, wantLow)
		}
	}
}

func BenchmarkDraws(b *testing.B) {
	s := Draws{New(1, 2, 3), New(1, 2, 4)}
	var dst Batch
	for b.Loop() {
		s.Fill(&dst)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/Block, "ns/draw")
}
