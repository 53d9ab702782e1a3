package deterministic

import (
	"math"
	"testing"
)

// TestSimplex solves maximise 3x + 5y, x ≤ 4, 2y ≤ 12, 3x + 2y ≤ 18: 36 at (2, 6)
// (Hillier and Lieberman, Introduction to Operations Research, the example of two
// products, from memory; checked by hand at the corners). Slacks follow.
func TestSimplex(t *testing.T) {
	p, ok := newProgram([][]float64{{1, 0, 1, 0, 0}, {0, 2, 0, 1, 0}, {3, 2, 0, 0, 1}}, []float64{4, 12, 18})
	if !ok {
		t.Fatal("not feasible")
	}
	for _, c := range []struct{ x, y, want float64 }{{3, 5, 36}, {1, 0, 4}, {0, 1, 6}, {-1, -1, 0}, {1, 1, 8}} {
		if got := p.maximise([]float64{c.x, c.y, 0, 0, 0}); math.Abs(got-c.want) > 1e-12 {
			t.Errorf("maximum of %vx + %vy is %v, want %v", c.x, c.y, got, c.want)
		}
	}
}

// TestSimplexEnds: unbounded, infeasible, and rows that repeat.
func TestSimplexEnds(t *testing.T) {
	p, ok := newProgram([][]float64{{1, -1}}, []float64{0})
	if !ok || !math.IsInf(p.maximise([]float64{1, 0}), 1) {
		t.Error("x = y has no maximum")
	}
	if _, ok := newProgram([][]float64{{1, 1}, {1, 1}}, []float64{1, 2}); ok {
		t.Error("x + y = 1 and 2 at once")
	}
	p, ok = newProgram([][]float64{{1, 1}, {2, 2}, {-1, -1}}, []float64{1, 2, -1})
	if !ok || math.Abs(p.maximise([]float64{1, 0})-1) > 1e-12 {
		t.Error("x + y = 1 three times over")
	}
}
