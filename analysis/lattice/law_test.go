package lattice

import (
	"context"
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// moments gives mean and variance of one species under a law, and the law's
// marginal.
func moments(l *Law, s int) (mean, variance float64, marginal []float64) {
	marginal = make([]float64, l.Box.High[s]+1)
	for i, p := range l.Probability {
		marginal[l.Counts[i*l.Species+s]] += p
	}
	for k, p := range marginal {
		mean += float64(k) * p
	}
	for k, p := range marginal {
		d := float64(k) - mean
		variance += d * d * p
	}
	return mean, variance, marginal
}

func stationaryLaw(t *testing.T, n *model.Network, p Problem) *Law {
	t.Helper()
	p.Network = n
	l, err := Stationary(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	return l
}

// The zoo's values are given to their last digit.
func TestSchloglLaw(t *testing.T) {
	want := zoo.SchloglStationary()
	l := stationaryLaw(t, zoo.Schlogl(), Problem{})
	mean, variance, law := moments(l, 0)
	below := total(law[:235])
	if math.Abs(mean-want.Mean) > 0.5e-4 || math.Abs(variance-want.Variance) > 0.5e-2 || math.Abs(below-want.Below235) > 0.5e-6 {
		t.Errorf("mean %v, variance %v, P(n<235) %v; want %+v", mean, variance, below, want)
	}
	for _, mode := range want.Modes {
		if law[mode] <= law[mode-1] || law[mode] <= law[mode+1] {
			t.Errorf("no mode at %d", mode)
		}
	}
}

// A gene that is on or off: two species with a conserved total, and transcripts.
func TestTelegraphLaw(t *testing.T) {
	want := zoo.TelegraphStationary()
	l := stationaryLaw(t, zoo.Telegraph(), Problem{})
	if n := len(l.Probability); n != 2*int(l.Box.High[2]+1) {
		t.Errorf("%d states in %v, want two for each count of transcripts", n, l.Box)
	}
	mean, variance, law := moments(l, 2)
	if math.Abs(mean-want.Mean) > 0.5e-6 || math.Abs(variance/mean-want.Fano) > 0.5e-6 {
		t.Errorf("mean %v, Fano %v; want %+v", mean, variance/mean, want)
	}
	if math.Abs(law[0]-want.P0) > 0.5e-8 || math.Abs(law[18]-want.P18) > 0.5e-7 {
		t.Errorf("P(0) %v, P(18) %v; want %+v", law[0], law[18], want)
	}
}

// Mean and Fano factor in closed form. The truncation error of 1e-10 in
// probability counts with up to the square of the box's size in a variance.
func TestTwoStageLaw(t *testing.T) {
	wantMean, wantFano := zoo.TwoStageLaw(4, 1, 6, 0.5)
	l := stationaryLaw(t, zoo.TwoStage(4, 1, 6, 0.5), Problem{})
	mean, variance, _ := moments(l, 1)
	tolerance := l.Truncation * float64(l.Box.High[1]*l.Box.High[1])
	if math.Abs(mean-wantMean) > tolerance+1e-9 || math.Abs(variance/mean-wantFano) > tolerance+1e-9 {
		t.Errorf("mean %v, Fano %v; want %v, %v", mean, variance/mean, wantMean, wantFano)
	}
}

// Geometric bursts: a negative binomial law, every probability to 12 digits where
// it is not a tail, without any cut of the burst.
func TestBurstLaw(t *testing.T) {
	const k, burst, loss = 2.5, 7, 0.8
	l := stationaryLaw(t, zoo.BurstExpression(k, burst, loss), Problem{Truncation: 1e-13})
	_, _, law := moments(l, 0)
	r, q := k/loss, float64(burst)/(1+burst)
	lgr, _ := math.Lgamma(r)
	for n, p := range law {
		a, _ := math.Lgamma(r + float64(n))
		b, _ := math.Lgamma(float64(n) + 1)
		want := math.Exp(a - b - lgr + float64(n)*math.Log(q) + r*math.Log1p(-q))
		if math.Abs(p-want) > 1e-12 {
			t.Fatalf("P(%d) = %v, want %v", n, p, want)
		}
	}
}

// Two species that do not touch: a product of Poisson laws (detailed balance).
// Relative accuracy holds far into the tail, where the box's edge is not felt:
// at 20 molecules from it its part is below (12/40)²⁰ = 4e-11 of the law's.
func TestProductLaw(t *testing.T) {
	n := bind(t, draft{
		species: []string{"a", "b"},
		reactions: []draftReaction{
			{makes: counts{0: 1}, k: 12},
			{uses: counts{0: 1}, k: 1},
			{makes: counts{1: 1}, k: 20},
			{uses: counts{1: 1}, k: 2.5},
		},
	}, 1)
	l := stationaryLaw(t, n, Problem{States: []Noise{{Center: []float64{12, 8}}}})
	checked := 0
	for i, p := range l.Probability {
		a, b := float64(l.Counts[2*i]), float64(l.Counts[2*i+1])
		if a > float64(l.Box.High[0])-20 || b > float64(l.Box.High[1])-20 {
			continue
		}
		checked++
		if want := poisson(12, a) * poisson(8, b); relative(p, want) > 1e-9 {
			t.Fatalf("P(%v, %v) = %v, want %v", a, b, p, want)
		}
	}
	if checked < 500 {
		t.Errorf("only %d states were checked in %v", checked, l.Box)
	}
}

func poisson(mean, k float64) float64 {
	g, _ := math.Lgamma(k + 1)
	return math.Exp(k*math.Log(mean) - mean - g)
}

// Batches of five: mean and variance at long times, in closed form from the
// moment equations: mean = 5·in/out, variance = mean·(1+5)/2.
func TestBatchLaw(t *testing.T) {
	l := stationaryLaw(t, zoo.BatchesOfFive(), Problem{})
	mean, variance, _ := moments(l, 0)
	if relative(mean, 25) > 1e-7 || relative(variance, 75) > 1e-6 {
		t.Errorf("mean %v, variance %v; want 25, 75", mean, variance)
	}
}

// Pairs only: of the counts, the even ones.
func TestParity(t *testing.T) {
	n := bind(t, draft{
		species: []string{"a"},
		reactions: []draftReaction{
			{makes: counts{0: 2}, k: 5}, {uses: counts{0: 2}, k: 0.1},
		},
	}, 1)
	l := stationaryLaw(t, n, Problem{})
	for _, k := range l.Counts {
		if k%2 != 0 {
			t.Fatalf("count %d cannot be reached", k)
		}
	}
}

// Two sets of states that are never left have no single law.
func TestManyLaws(t *testing.T) {
	n := bind(t, draft{
		species: []string{"seed", "left", "right"},
		reactions: []draftReaction{
			{uses: counts{0: 1}, makes: counts{1: 1}, k: 1}, {uses: counts{0: 1}, makes: counts{2: 1}, k: 2},
		},
		start: []float64{1, 0, 0},
	}, 1)
	if _, err := Stationary(context.Background(), Problem{Network: n}); err != ErrManyLaws {
		t.Errorf("got %v, want ErrManyLaws", err)
	}
}
