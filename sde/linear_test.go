package sde_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/sde"
)

// centred gives x less its known mean.
func centred(x []float64, mean float64) []float64 {
	out := slices.Clone(x)
	for i := range out {
		out[i] -= mean
	}
	return out
}

// Immigration–death far above 0: the scheme's mean and variance go by
// m' = m + Δ(in − out m), v' = (1−out Δ)² v + Δ(in + out m), exactly (algebra), to
// in/out and in/out/(1−out Δ/2); the exact law is Poisson, mean and variance in/out. The
// wall at 0 is 10 standard deviations away. n = 20,000.
func TestImmigrationDeath(t *testing.T) {
	const in, out, step, start = 10, 0.1, 0.2, 150
	s := sde.Chemical(zoo.ImmigrationDeath(in, out))
	for _, until := range []float64{1, 10, 60} {
		m, v := float64(start), 0.0
		for range int(math.Round(until / step)) {
			m, v = m+step*(in-out*m), (1-out*step)*(1-out*step)*v+step*(in+out*m)
		}
		x := ends(t, sde.Plan{System: s, Start: []float64{start}, Step: step, Until: until, Runs: 20_000, Seed: 11}, 0)
		near(t, "mean", x, identity, m)
		near(t, "variance", centred(x, m), square, v)
	}
}

// Two-stage expression: stationary mean kr b/gp and Fano factor 1 + b/(1+η), b = kp/gr,
// η = gp/gr (Thattai and van Oudenaarden, PNAS 98 (2001) 8614, from memory). The
// scheme keeps the mean; its covariance C solves C = A C Aᵀ + Δ·D, A = 1 + ΔJ
// (algebra), which tends to that as Δ does to 0. n = 10,000.
func TestTwoStage(t *testing.T) {
	const kr, gr, kp, gp, step = 100, 1, 2, 0.4, 0.1
	mean, fano := zoo.TwoStageLaw(kr, gr, kp, gp)
	s := sde.Chemical(zoo.TwoStage(kr, gr, kp, gp))
	if scheme := twoStageVariance(kr, gr, kp, gp, 1e-4) / mean; math.Abs(scheme/fano-1) > 1e-4 {
		t.Fatalf("the recursion has the Fano factor %v at a small step, want %v", scheme, fano)
	}
	x := ends(t, sde.Plan{System: s, Start: []float64{kr / gr, mean}, Step: step, Until: 50, Runs: 10_000, Seed: 12}, 1)
	near(t, "mean", x, identity, mean)
	near(t, "variance", centred(x, mean), square, twoStageVariance(kr, gr, kp, gp, step))
}

// twoStageVariance iterates the scheme's covariance at the stationary mean.
func twoStageVariance(kr, gr, kp, gp, step float64) float64 {
	mm, mp, pp := 0.0, 0.0, 0.0
	a, b, c := 1-gr*step, kp*step, 1-gp*step
	for range int(60 / step) {
		mm, mp, pp = a*a*mm+step*2*kr, a*b*mm+a*c*mp, b*b*mm+2*b*c*mp+c*c*pp+step*2*kp*kr/gr
	}
	return pp
}

// Expression in bursts: the stationary Fano factor of protein made in geometric bursts
// of mean b is 1 + b (common practice); the scheme has it times 1/(1−loss Δ/2).
func TestBursts(t *testing.T) {
	const k, burst, loss, step = 50, 5, 0.5, 0.1
	mean := k * burst / float64(loss)
	x := ends(t, sde.Plan{
		System: sde.Chemical(zoo.BurstExpression(k, burst, loss)), Start: []float64{mean}, Step: step, Until: 40, Runs: 10_000, Seed: 13,
	}, 0)
	near(t, "mean", x, identity, mean)
	near(t, "variance", centred(x, mean), square, mean*(1+burst)/(1-loss*step/2))
}

// wrapped hides that a system is a network's, so that the general scheme runs it.
type wrapped struct{ sde.System }

// The compiled program and the plain evaluation are the same equation: paths of both, on
// the same random numbers, agree to 1e-9 after 200 steps, an allowance for the growth of
// rounding errors of 1e-16 at rates of 1 over a time of 10.
func TestProgramAgrees(t *testing.T) {
	hill := func(op model.Op, n float64) *model.Node {
		return model.Call(op, model.SpeciesRef(0), model.Number(1.5), model.Number(n))
	}
	nets := []*model.Network{
		zoo.Latch(100), zoo.Schlogl(), zoo.SymmetricRepression(6, 100), zoo.BurstExpression(50, 5, 0.5),
		zoo.TwoStage(100, 1, 2, 0.4), lawNetwork(t, hill(model.OpHill, 4)), lawNetwork(t, hill(model.OpHillFall, 2.5)),
		lawNetwork(t, model.Call(model.OpMax, model.Call(model.OpExp, model.Call(model.OpNeg, model.SpeciesRef(0))), model.Call(model.OpSqrt, model.SpeciesRef(0)))),
	}
	for _, net := range nets {
		s := sde.Chemical(net)
		p := sde.Plan{System: s, From: -1, Runs: 8, Seed: 14, MaxSteps: 200, Start: make([]float64, s.Dimension())}
		for i := range p.Start {
			p.Start[i] = 200
		}
		p.Step = sde.StepFor(s, p.Start)
		fast := run(t, p)
		p.System = wrapped{s}
		slow := run(t, p)
		for i := range fast.Outcomes {
			for k, x := range fast.Outcomes[i].State {
				if y := slow.Outcomes[i].State[k]; math.Abs(x-y) > 1e-9*max(1, x) || x == 200 {
					t.Errorf("%s, run %d, species %d: %v compiled, %v plain", net.Title, i, k, x, y)
				}
			}
		}
	}
}

// lawNetwork is one species made by a law and lost at 0.5 each, at 100 copies.
func lawNetwork(t *testing.T, law *model.Node) *model.Network {
	t.Helper()
	d := model.Draft{
		Title: fmt.Sprint("law ", law.Op), Copies: 100, Species: []model.Species{{Name: "x", Start: 1}},
		Reactions: []model.DraftReaction{
			{Name: "made", Rate: law, Makes: []model.Term{{Species: 0, Count: 1}}},
			{Name: "lost", MassAction: model.Number(0.5), Uses: []model.Term{{Species: 0, Count: 1}}},
		},
	}
	net, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return net
}

// Totals of a switch with one operator, whose walls are met at nearly every step,
// stay to rounding: 1e-9 of the total over 20,000 steps.
func TestTotalsStay(t *testing.T) {
	net := zoo.DimerSwitch()
	totals := net.Conserved()
	if len(totals) == 0 {
		t.Fatal("the switch has no conserved total")
	}
	for _, o := range run(t, sde.Plan{System: sde.Chemical(net), From: -1, Runs: 5, Seed: 15, Step: 0.002, MaxSteps: 20_000}).Outcomes {
		for _, total := range totals {
			sum := 0.0
			for i, w := range total.Weights {
				sum += float64(w) * o.State[i]
			}
			if math.Abs(sum-float64(total.Value)) > 1e-9*max(1, float64(total.Value)) || slices.Min(o.State) < 0 {
				t.Errorf("run %d: total %v is %v at %v", o.Replicate, total, sum, o.State)
			}
		}
	}
}
