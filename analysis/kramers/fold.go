package kramers

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mathext"

	"holdfast/deterministic/branch"
	"holdfast/model"
)

// A Fold is the slow motion of a network near a fold,
//
//	dx = (x² − Drive·d)dt + √(2·Noise)dW,
//
// with d the distance of the knob to the fold on the side where the two states
// exist, negative on the other. The scale of x, 1/time, is chosen such that its
// square stands alone.
type Fold struct {
	// Drive is in 1/time² over the knob's unit.
	Drive float64
	// Noise is in 1/time³; it falls with the copies.
	Noise float64
}

// A KindError says that a mark is no fold with two states.
type KindError struct{ Kind branch.Kind }

// Error names what it is instead.
func (e *KindError) Error() string {
	return fmt.Sprintf("escape near a fold can be estimated at a fold only, not at a %v", e.Kind)
}

// AtFold gives the slow motion near a fold that branch.Follow found. The network is
// the one followed, bound with the knob at the fold, as it gives the noise there.
// Errors are a *KindError.
//
// With l and r the left and right null vectors of the Jacobian at the fold, l·r = 1, the
// coordinate z = l·(x − x_fold) moves as dz = (α·d + β·z²)dt + √(2D)dW with α = l·∂F/∂knob,
// β = ½ l·F″rr and D = ½ Σ_r (l·ν_r)²a_r over the reactions, ν_r in amounts: drift and noise
// projected on the slow direction (Dykman and Krivoglaz, Physica A 104 (1980) 480,
// from memory). Then x = βz has the drive |αβ| and the noise β²D.
func AtFold(n *model.Network, fold branch.Mark) (Fold, error) {
	if fold.Kind != branch.Fold || !(fold.RateCoefficient > 0) {
		return Fold{}, &KindError{fold.Kind}
	}
	spread := 0.0
	for r := range n.Reactions {
		spread += n.Reactions[r].Scale * n.Flux(r, fold.Amounts) * square(n, r, fold.Left)
	}
	beta := fold.Bend / 2
	return Fold{Drive: fold.RateCoefficient * fold.RateCoefficient / 4, Noise: beta * beta * spread / 2}, nil
}

// square gives the mean square of l·ν of one firing of reaction r, in amounts. A
// geometric burst of mean m has the variance m(1+m) about its mean.
func square(n *model.Network, r int, l []float64) float64 {
	mean, variance := 0.0, 0.0
	for i, w := range l {
		mean += w * n.AmountChange(r, i) / n.Reactions[r].Scale
	}
	for _, t := range n.Reactions[r].Bursts {
		w := l[t.Species] / n.Unit(t.Species)
		variance += w * w * t.Burst * (1 + t.Burst)
	}
	return mean*mean + variance
}

// SlowRate gives the rate, 1/time, at which the state and its saddle attract and
// repel at a distance: 2√(Drive·d); 0 beyond the fold.
func (f Fold) SlowRate(distance float64) float64 {
	return 2 * math.Sqrt(math.Max(f.Drive*distance, 0))
}

// Barrier gives the exponent of the escape at a distance: (4/3)(Drive·d)^{3/2}/Noise; 0
// beyond the fold.
func (f Fold) Barrier(distance float64) float64 {
	return 4. / 3 * math.Pow(math.Max(f.Drive*distance, 0), 1.5) / f.Noise
}

// Rate gives Kramers' rate of escape at a distance, 1/time: √(Drive·d)/π·e^{−Barrier}. It
// holds for a barrier well above 1: at 4 it is 10 % high, at 12 it is 3 % high. At the fold
// and beyond it is 0, which is no estimate: Passage is.
func (f Fold) Rate(distance float64) float64 {
	slow := f.SlowRate(distance)
	return Rate(slow, slow, f.Barrier(distance))
}

// Passage gives the mean time, in the network's unit, that the slow motion takes to
// come from far on the state's side to far on the other. It holds whatever the barrier, at the
// fold and beyond too, and tends to 1/Rate as the barrier grows. +Inf stands for a
// time beyond 1e300.
//
// It is π²/D^{1/3}·(Ai² + Bi²)(Drive·d/D^{2/3}) with D the Noise and the Airy functions: the double
// integral of a first passage over the potential −μx − x³/3, with one integral done, is √(π/D)∫₀^∞
// s^{−1/2}e^{−(μs + s³/12)/D}ds, and that is their sum of squares (Reid, Z. angew. Math. Phys. 46 (1995) 159,
// from memory; NIST Digital Library of Mathematical Functions, 9.11.4).
func (f Fold) Passage(distance float64) float64 {
	root := math.Cbrt(f.Noise)
	z := f.Drive * distance / (root * root)
	if f.Barrier(distance) > 690 { // e^690 is about 1e300
		return math.Inf(1)
	}
	ai, bi := airy(z)
	return math.Pi * math.Pi / root * (ai*ai + bi*bi)
}

// airy gives Ai and Bi of a real number; Bi by turning the argument of Ai through ±120° (NIST
// Digital Library of Mathematical Functions, 9.2.10).
func airy(z float64) (ai, bi float64) {
	turn := complex(math.Cos(2*math.Pi/3), math.Sin(2*math.Pi/3))
	half := complex(math.Cos(math.Pi/6), math.Sin(math.Pi/6))
	return real(mathext.AiryAi(complex(z, 0))), 2 * real(half*mathext.AiryAi(complex(z, 0)*turn))
}
