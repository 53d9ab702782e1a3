package deterministic

import (
	"math/rand/v2"
	"testing"
)

// TestLyapunovTwoWays holds the direct solution and the one by the sign iteration
// against each other and against the equation, on random stable matrices with rates
// from 1 to 1e4: A = −(rates) + a tenth of noise.
func TestLyapunovTwoWays(t *testing.T) {
	r := rand.New(rand.NewPCG(17, 18))
	for _, m := range []int{1, 2, 5, 12} {
		a, d := make([]float64, m*m), make([]float64, m*m)
		for i := range m {
			rate := logUniform(r, 1, 1e4)
			for j := range m {
				a[i*m+j] = 0.1 * rate * (r.Float64() - 0.5) / float64(m)
			}
			a[i*m+i] -= rate
			d[i*m+i] = rate
		}
		direct, ok := lyapunov(a, d, m)
		signed, ok2 := lyapunovBySign(a, d, m)
		if !ok || !ok2 {
			t.Fatal("no solution")
		}
		for k := range direct {
			if abs(direct[k]-signed[k]) > 1e-11 {
				t.Errorf("m = %d, entry %d: %g and %g", m, k, direct[k], signed[k])
			}
		}
		left := times(a, direct, m)
		right := transposed(left, m)
		for k := range d {
			if abs(left[k]+right[k]+d[k]) > 1e-11*1e4 {
				t.Errorf("m = %d, entry %d: residual %g", m, k, left[k]+right[k]+d[k])
			}
		}
	}
}

// TestLyapunovUnstable: an unstable matrix has no sign −1.
func TestLyapunovUnstable(t *testing.T) {
	if _, ok := lyapunovBySign([]float64{1, 0, 0, 0}, []float64{1, 0, 0, 1}, 2); ok {
		t.Error("a solution for a singular matrix")
	}
}
