package kramers_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"holdfast/analysis/kramers"
)

// The saddle-node dX = (μ + X²)dt + √(2D)dW from −∞ to +∞ (computed by quadrature):
// T(0) = 4.976054·D^{−1/3}; at D = 0.01, T = 739.4847 at μ = −0.1 and 1.0891091e6 at
// μ = −0.2. All to their seven digits.
func TestSaddleNodePassage(t *testing.T) {
	for _, c := range []struct{ d, mu, want float64 }{
		{0.01, 0, 4.976054 / math.Cbrt(0.01)},
		{3, 0, 4.976054 / math.Cbrt(3)},
		{0.01, -0.1, 739.4847},
		{0.01, -0.2, 1.0891091e6},
	} {
		f := kramers.Fold{Drive: 1, Noise: c.d}
		if got := f.Passage(-c.mu); math.Abs(got/c.want-1) > 1.5e-7 {
			t.Errorf("D = %v, μ = %v: %.9g, want %.9g", c.d, c.mu, got, c.want)
		}
	}
}

// The same time as an integral, √(π/D)∫₀^∞ s^{−1/2}e^{−(μs + s³/12)/D}ds, done with s = u²,
// on both sides of the fold (computed by quadrature, to its accuracy).
func TestPassageIsTheIntegral(t *testing.T) {
	const d = 0.3
	f := kramers.Fold{Drive: 2, Noise: d}
	for _, distance := range []float64{-2, -0.5, -0.1, 0.1, 0.5, 1} {
		mu := -2 * distance
		integral := 2 * quad.Fixed(func(u float64) float64 {
			s := u * u
			return math.Exp(-(mu*s + s*s*s/12) / d)
		}, 0, 3.5, 400, nil, 0)
		want := math.Sqrt(math.Pi/d) * integral
		if got := f.Passage(distance); math.Abs(got/want-1) > 1e-9 {
			t.Errorf("distance %v: %.12g, want %.12g", distance, got, want)
		}
	}
}

// The barrier is (4/3)|μ|^{3/2}/D, the height of −μx − x³/3 between −√|μ| and √|μ|
// (algebra). The mean times at D = 0.01 (computed) over 1/Rate are those of the Airy functions
// over their leading terms: (Σ uₖ/ζᵏ)² with u = 1, 5/72, 385/10368, 85085/2239488 and ζ = barrier/2
// (NIST Digital Library of Mathematical Functions, 9.7.2 and 9.7.8); the expansion does not
// converge, so it is cut at its second term and held to twice the third.
func TestSaddleNodeKramers(t *testing.T) {
	f := kramers.Fold{Drive: 1, Noise: 0.01}
	v := func(x, mu float64) float64 { return -mu*x - x*x*x/3 }
	before := 2.0
	for _, c := range []struct{ distance, passage float64 }{{0.1, 739.4847}, {0.2, 1.0891091e6}} {
		r := math.Sqrt(c.distance)
		height := (v(r, -c.distance) - v(-r, -c.distance)) / 0.01
		if got := f.Barrier(c.distance); math.Abs(got-height) > 1e-12*height {
			t.Errorf("distance %v: barrier %v, want %v", c.distance, got, height)
		}
		if got, want := f.Rate(c.distance), r/math.Pi*math.Exp(-height); math.Abs(got/want-1) > 1e-12 {
			t.Errorf("distance %v: rate %v, want %v", c.distance, got, want)
		}
		const u1, u2, u3 = 5 / 72., 385 / 10368., 85085 / 2239488.
		zeta := height / 2
		want := 1 + 2*u1/zeta + (u1*u1+2*u2)/zeta/zeta
		next := 2 * (u1*u2 + u3) / zeta / zeta / zeta
		ratio := c.passage * f.Rate(c.distance)
		if math.Abs(ratio-want) > 2*next {
			t.Errorf("distance %v: passage over Kramers' time %v, want %v ± %v", c.distance, ratio, want, 2*next)
		}
		if ratio >= before {
			t.Errorf("distance %v: Kramers' rate gets worse as the barrier grows", c.distance)
		}
		before = ratio
	}
}

// The double well V = x⁴/4 − x²/2: from −1 to 1 in √2·π·e^{1/4D}, which is 10 % low
// even at D = 0.05, where the mean time is 729.6707, and 17 % at 0.1, where it is 66.26863
// (computed).
func TestDoubleWell(t *testing.T) {
	for _, c := range []struct{ d, want, low float64 }{{0.05, 729.6707, 0.10}, {0.1, 66.26863, 0.18}} {
		got := 1 / kramers.Rate(2, -1, 0.25/c.d)
		if want := math.Sqrt2 * math.Pi * math.Exp(0.25/c.d); math.Abs(got/want-1) > 1e-12 {
			t.Errorf("D = %v: %v, want %v", c.d, got, want)
		}
		if low := 1 - got/c.want; math.Abs(low-c.low) > 0.01 {
			t.Errorf("D = %v: Kramers is %.3g low, want about %v", c.d, low, c.low)
		}
	}
}
