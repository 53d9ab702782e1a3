package deterministic

import (
	"context"
	"math"
	"testing"

	"holdfast/internal/zoo"
)

// TestCourse: x' = −(x−100)(x−220)(x−400)·2.5e-4 falls from 219 to the low root and
// climbs from 221 to the high one (Schlögl's chain), every step of the way.
func TestCourse(t *testing.T) {
	m := survey(t, zoo.Schlogl())
	for from, want := range map[float64]float64{219: 100, 221: 400} {
		points, state, err := m.Course(context.Background(), []float64{from})
		if err != nil || math.Abs(m.States[state].Amounts[0]-want) > 1e-6 {
			t.Fatalf("course from %v: state %d, %v; want %v", from, state, err, want)
		}
		for k := 1; k < len(points); k++ {
			if step := (points[k][0] - points[k-1][0]) * (want - from); step < 0 {
				t.Errorf("course from %v goes back at point %d: %v after %v", from, k, points[k], points[k-1])
			}
		}
		last, before := points[len(points)-1][0], points[len(points)-2][0]
		if last != m.States[state].Amounts[0] || math.Abs(before-last) > 0.5 {
			t.Errorf("course from %v ends at %v after %v; want %v", from, last, before, want)
		}
	}
}
