package branch

import (
	"math"
	"testing"

	"holdfast/internal/zoo"
)

// Points between those of a branch lie on it, up to the fold: x = (1 + √(1−4a²b²)) /
// (2ab) for the outer sink of the leakless latch (closed form, common practice). Its
// error near the fold is that of the knob over the root of the distance.
func TestRefinerOnTheLeaklessLatch(t *testing.T) {
	const b = 0.9
	n := zoo.LeaklessLatch(0.4, b, 100)
	d := follow(t, n, "a", 0.1, 2)
	m := one(t, d, Fold)
	r := NewRefiner(n, d)
	tried := 0
	for k := range d.Branches {
		points := d.Branches[k].Points
		for i := range len(points) - 1 {
			if !points[i].Stable && !points[i+1].Stable || points[i].Amounts[1] < 1 {
				continue
			}
			for _, share := range []float64{0.01, 0.5, 0.9, 0.9999} {
				a := points[i].Knob + share*(points[i+1].Knob-points[i].Knob)
				p, ok := r.Between(k, i, a)
				_, sink := zoo.LeaklessStates(a, b)
				if !ok || !p.Stable || p.Covariance == nil {
					t.Errorf("a = %v: no stable point", a)
					continue
				}
				tried++
				near(t, "sink", p.Amounts[1], sink, 1e-14*(1+sink/math.Sqrt(1-a/m.Knob)))
			}
		}
	}
	if tried < 40 {
		t.Errorf("%d points", tried)
	}
	if _, ok := r.Between(0, 0, 1.9); ok {
		t.Error("a value off the piece gave a point")
	}
}
