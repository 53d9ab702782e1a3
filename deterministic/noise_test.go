package deterministic

import (
	"fmt"
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// TestTwoStageNoise: the Fano factor of two-stage expression is 1 + b/(1+η), b the
// protein made by a transcript, η the ratio of the loss rates; transcripts are
// Poisson (Thattai and van Oudenaarden, PNAS 98 (2001) 8614, from memory). For a
// linear network the linear noise is exact.
func TestTwoStageNoise(t *testing.T) {
	for _, c := range [][4]float64{{1, 2, 3, 0.1}, {10, 0.1, 7, 3}, {0.5, 100, 2000, 0.01}} {
		s := survey(t, zoo.TwoStage(c[0], c[1], c[2], c[3])).States[0]
		mean, fano := zoo.TwoStageLaw(c[0], c[1], c[2], c[3])
		near(t, "mean", s.Molecules[1], mean, 1e-14)
		near(t, "Fano factor", s.Fano(1), fano, 1e-13)
		near(t, "CV", s.CV(1), math.Sqrt(fano/mean), 1e-13)
		near(t, "SD", s.SD(1), math.Sqrt(fano*mean), 1e-13)
		near(t, "Fano factor of transcripts", s.Fano(0), 1, 1e-13)
		near(t, "slow rate", s.SlowRate, min(c[1], c[3]), 1e-13)
	}
}

// TestOneSpeciesNoise: the variance of immigration and death is the mean (Poisson);
// batches of five give (5+1)/2 times the mean, sd 8.660189 as published (Evans,
// Gillespie, Wilkinson, Bioinformatics 24 (2008) 285); bursts 1 + mean burst
// (negative binomial, common practice).
func TestOneSpeciesNoise(t *testing.T) {
	cases := []struct {
		name     string
		net      *model.Network
		variance float64
	}{
		{"immigration–death", zoo.ImmigrationDeath(1, 0.1), 10},
		{"immigration–death, few", zoo.ImmigrationDeath(0.03, 0.1), 0.3},
		{"batches of five", zoo.BatchesOfFive(), 75},
		{"bursts", zoo.BurstExpression(1, 3, 0.1), 30 * 4},
		{"bursts of a fifth", zoo.BurstExpression(1, 0.2, 0.1), 2 * 1.2},
	}
	for _, c := range cases {
		near(t, c.name, survey(t, c.net).States[0].Covariance[0], c.variance, 1e-13)
	}
	// Published at t = 50, when e^{−0.2·50} of the way is left.
	near(t, "published sd", survey(t, zoo.BatchesOfFive()).States[0].SD(0), 8.660189, math.Exp(-10))
}

// TestTelegraphNoise: Fano factor 4.505308 (computed from the stationary law of
// Peccoud and Ycart, Theor. Popul. Biol. 48 (1995) 222); the gene is a coin with
// p = 4.3/23.1, so that on and off have variance p(1−p) and covariance −p(1−p).
func TestTelegraphNoise(t *testing.T) {
	s := survey(t, zoo.Telegraph()).States[0]
	near(t, "mean", s.Molecules[2], 19.322078, 5e-8)
	near(t, "Fano factor", s.Fano(2), 4.505308, 2e-7)
	p := 4.3 / 23.1
	for k, want := range []float64{p * (1 - p), -p * (1 - p), 0, -p * (1 - p), p * (1 - p)} {
		if k != 2 {
			near(t, fmt.Sprint("covariance ", k), s.Covariance[k], want, 1e-13)
		}
	}
}

// TestConversionNoise: molecules that convert one into another independently are
// multinomial, covariance N(p δ − p pᵀ) (common practice): A→B→C→A at rates 1, 2, 5e3,
// so p is proportional to the inverse rates.
func TestConversionNoise(t *testing.T) {
	d := newDraft(1, "a", "b", "c")
	d.Species[0].Start = 60
	rates := []float64{1, 2, 5e3}
	sum := 0.0
	for i, k := range rates {
		d.add(terms(i), nil, terms((i+1)%3), k)
		sum += 1 / k
	}
	s := survey(t, d.network(t)).States[0]
	for i, k := range rates {
		p := 1 / k / sum
		near(t, "mean", s.Molecules[i], 60*p, 1e-13)
		for j, l := range rates {
			q := 1 / l / sum
			want := -60 * p * q
			if i == j {
				want += 60 * p
			}
			near(t, fmt.Sprint("covariance ", i, j), s.Covariance[i*3+j], want, 1e-11)
		}
	}
}

// TestNoiseScales: with amounts in other units the molecules' covariance is the
// same, and for scaling species it is proportional to copies.
func TestNoiseScales(t *testing.T) {
	a := survey(t, zoo.Latch(100)).States[1]
	b := survey(t, zoo.Latch(1e5)).States[1]
	for k := range a.Covariance {
		near(t, "covariance", b.Covariance[k], 1000*a.Covariance[k], 1e-12)
	}
	near(t, "slow rate", b.SlowRate, a.SlowRate, 1e-14)
}

// TestFixedCountNoise: a gene of three copies that goes on and off makes protein;
// on is binomial, and by independence the protein's variance is the Poisson part
// plus 3 times that of a telegraph: mean m a gene, Fano 1 + m_on·(1−p)/(loss+up+down)
// with m_on what a gene makes while on (Peccoud and Ycart; algebra). copies only
// scale the protein's amount.
func TestFixedCountNoise(t *testing.T) {
	const up, down, make, loss, copies = 0.7, 1.3, 40.0, 0.2, 50.0
	d := newDraft(copies, "off", "on", "protein")
	d.Species[0].Fixed, d.Species[1].Fixed = true, true
	d.Species[0].Start = 3
	d.Readout = 2
	d.add(terms(0), nil, terms(1), up).add(terms(1), nil, terms(0), down)
	d.add(nil, terms(1), terms(2), make/copies).add(terms(2), nil, nil, loss)
	s := survey(t, d.network(t)).States[0]
	p := up / (up + down)
	near(t, "on", s.Molecules[1], 3*p, 1e-14)
	near(t, "variance of on", s.Covariance[4], 3*p*(1-p), 1e-13)
	near(t, "protein", s.Molecules[2], 3*p*make/loss, 1e-13)
	near(t, "Fano factor", s.Fano(2), 1+make*(1-p)/(loss+up+down), 1e-12)
}
