package separatrix

import (
	"context"
	"math"
	"testing"

	"holdfast/internal/zoo"
)

// By symmetry each state of symmetric repression has half of a square box.
func TestSymmetricRepressionHalves(t *testing.T) {
	m := surveyed(t, zoo.SymmetricRepression(3, 100))
	b, err := Measure(context.Background(), m, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if b.Method != ByCurves {
		t.Errorf("measured as %v, want by the separatrix", b.Method)
	}
	for s, v := range b.Shares {
		near(t, m.Stable()[s].Name, v, 0.5, 1e-9)
	}
}

// Latches side by side do not heed each other: the basin of a state is the product of
// intervals that the middle state cuts, so its share is a product of lengths. In the
// plane it is had from the curves to the error stated; in three dimensions from a
// sample, to its 95 % interval widened to a false alarm of 1e-6 over all 8 states:
// 2.6 times the half width (a normal deviate of 5.1 for 1.96), which a
// low-discrepancy sample stays far below.
func TestBasinsOfLatchesSideBySide(t *testing.T) {
	for _, c := range []struct {
		count  int
		method Method
		widen  float64
	}{{2, ByCurves, 1}, {3, BySample, 2.6}} {
		m := surveyed(t, latches(t, c.count))
		b, err := Measure(context.Background(), m, Options{Samples: 500})
		if err != nil {
			t.Fatal(err)
		}
		if b.Method != c.method || len(b.Shares) != 1<<c.count {
			t.Fatalf("%d latches: %v, %d shares", c.count, b.Method, len(b.Shares))
		}
		sum := b.Unlabelled
		for s, state := range m.Stable() {
			want := 1.0
			for i, v := range state.Amounts {
				share := middleState() / m.High[i]
				if v > middleState() {
					share = 1 - share
				}
				want *= share
			}
			near(t, state.Name, b.Shares[s], want, c.widen*b.Errors[s]+1e-9)
			if b.Errors[s] > 0.05 {
				t.Errorf("%d latches: error %v of %s tells nothing", c.count, b.Errors[s], state.Name)
			}
			sum += b.Shares[s]
		}
		near(t, "sum of the shares", sum, 1, 1e-12)
	}
}

// The half width is that of Wilson's interval: for 0 of 10 the interval is 0 to
// 0.2775, for 5 of 10 it is 0.2366 to 0.7634 (computed from the formula by hand).
func TestWilsonHalfWidths(t *testing.T) {
	near(t, "0 of 10", wilson(0, 10), 0.2775, 5e-5)
	near(t, "5 of 10", wilson(0.5, 10), 0.2634, 5e-5)
}

func TestHaltonPoints(t *testing.T) {
	// Halton, Numer. Math. 2 (1960) 84: 1/2, 1/4, 3/4, 1/8 in base 2; 1/3, 2/3, 1/9 in 3.
	for k, want := range []float64{0.5, 0.25, 0.75, 0.125} {
		near(t, "base 2", halton(k+1, 0), want, 0)
	}
	for k, want := range []float64{1.0 / 3, 2.0 / 3, 1.0 / 9} {
		near(t, "base 3", halton(k+1, 1), want, 1e-16)
	}
	if prime(5) != 13 || math.IsNaN(halton(7, 20)) {
		t.Errorf("the sixth prime is %d, want 13", prime(5))
	}
}
